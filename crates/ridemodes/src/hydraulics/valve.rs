//! Resistance of a valve at its amplitude.

use super::oil::{Oil, pipe_area};
use crate::equivalent::{Pieces, of_square_law};
use crate::numerics::Scalar;
use crate::spec::{Slot, Valve, ValveKind};

/// Discharge coefficient of a sharp edge, π/(π + 2) (H. E. Merritt, *Hydraulic Control Systems*, 1967; from memory).
const SHARP_EDGE: f64 = 0.611;

/// E[Δp Q]/E[Q²] of a valve at its r.m.s. flow [Pa·s/m³].
pub(super) fn resistance<T: Scalar>(valve: &Valve<Slot>, numbers: &[T], oil: &Oil<T>) -> T {
    let value = |slot: Slot| numbers[slot.0];
    let or_zero = |slot: Option<Slot>| slot.map_or(T::zero(), value);
    let list = |list: &Option<Vec<Slot>>| list.iter().flatten().map(|&slot| value(slot)).collect::<Vec<T>>();
    let amplitude = value(valve.amplitude);
    match valve.kind {
        ValveKind::Check => {
            // Backward, and forward until it cracks: the throttle alone; then both side by side.
            let (throttle, open) = (or_zero(valve.throttle), or_zero(valve.open_resistance));
            let cracks = or_zero(valve.cracking_pressure) / throttle;
            Pieces { breaks: vec![cracks], slopes: vec![throttle, throttle * open / (throttle + open)] }
                .equivalent(amplitude, valve.motion)
        }
        ValveKind::Split => {
            Pieces::split(or_zero(valve.backward), or_zero(valve.forward)).equivalent(amplitude, valve.motion)
        }
        ValveKind::Table => {
            Pieces::through(&list(&valve.flow), &list(&valve.pressure_drop)).equivalent(amplitude, valve.motion)
        }
        ValveKind::Orifice => {
            // Δp = ρ/2 Q|Q|/(C_d A)²
            let diameter = or_zero(valve.diameter);
            let discharge = valve.discharge.map_or(T::constant(SHARP_EDGE), value);
            let factor = oil.density / (discharge * pipe_area(diameter)).square() * 0.5;
            of_square_law(factor, amplitude, valve.motion)
        }
    }
}
