//! Margins to what limits a suspension.

use serde::{Deserialize, Serialize};

use super::OperatingPoint;
use crate::axes::CORNERS;
use crate::spec::Slot;

/// A limit with the margin to it.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct Limit {
    /// What it limits, e.g. `front_left.lift_off` or `circuits.left.minimum_pressure`.
    pub name: String,
    /// Where the state stands.
    pub value: f64,
    /// Where the limit is.
    pub limit: f64,
    /// Unit of both.
    pub unit: String,
    /// How far the state is from it; negative once it is passed.
    pub margin: f64,
}

impl Limit {
    /// Whether the state is beyond it.
    pub fn is_passed(&self) -> bool {
        self.margin < 0.0
    }
}

// The value may not fall below the limit, or (`most`) not rise above it.
fn limit(name: String, value: f64, bound: f64, unit: &str, most: bool) -> Limit {
    let margin = if most { bound - value } else { value - bound };
    Limit { name, value, limit: bound, unit: unit.into(), margin }
}

/// All limits of a state: wheels, stops, strokes, then circuits and accumulators.
pub(super) fn limits(point: &OperatingPoint) -> Vec<Limit> {
    let spec = point.car.spec();
    let value = |slot: Slot| point.car.numbers()[slot.0];
    let mut all = Vec::new();
    for corner in CORNERS {
        let (name, delta) = (corner.name(), point.deflection[corner]);
        let Some(data) = spec.corner(corner) else { continue };
        let load = point.tyre_load[corner];
        // A wheel just off the ground has no load left.
        let mut lift = limit(format!("{name}.lift_off"), load, 0.0, "N", false);
        if load == 0.0 {
            lift.margin = -f64::MIN_POSITIVE;
        }
        all.push(lift);
        for (stop, key, sign) in [(&data.bump_stop, "bump_stop", 1.0), (&data.rebound_stop, "rebound_stop", -1.0)] {
            if let Some(stop) = stop {
                let travel = sign * delta * value(stop.motion_ratio);
                all.push(limit(format!("{name}.{key}"), travel, value(stop.gap), "m", true));
            }
        }
        if let Some(cylinder) = &data.cylinder
            && value(cylinder.stroke) > 0.0
        {
            let end = 0.5 * value(cylinder.stroke);
            all.push(limit(format!("{name}.stroke"), point.piston_travel[corner].abs(), end, "m", true));
        }
        if data.spring.is_some() {
            all.push(limit(format!("{name}.spring_pull"), point.spring_preload[corner], 0.0, "N", false));
        }
    }
    for (index, name) in point.circuits.iter().enumerate() {
        let own = &spec.circuits.0[name];
        let pressure = point.pressure[index];
        let base = format!("circuits.{name}");
        for state in point.accumulators.iter().filter(|state| state.name.starts_with(&format!("{base}."))) {
            all.push(limit(format!("{}.empty", state.name), state.pressure, state.empty_pressure, "Pa", false));
            if state.least_volume > 0.0 {
                let mut stop =
                    limit(format!("{}.end_stop", state.name), state.gas_volume, state.least_volume, "m^3", false);
                if stop.margin <= 0.0 {
                    stop.margin = -f64::MIN_POSITIVE;
                }
                all.push(stop);
            }
        }
        let least = own.minimum_pressure.map_or(point.atmosphere + 1e5, value);
        all.push(limit(format!("{base}.minimum_pressure"), pressure, least, "Pa", false));
        let mut cavitation = limit(format!("{base}.cavitation"), pressure, 0.0, "Pa", false);
        if point.cavity[index] > 0.0 {
            cavitation.margin = -pressure;
        }
        all.push(cavitation);
    }
    all
}

/// What the engineer should know.
pub(super) fn warnings(point: &OperatingPoint) -> Vec<String> {
    let spec = point.car.spec();
    let value = |slot: Slot| point.car.numbers()[slot.0];
    let mut warnings = Vec::new();
    let design = point.condition.is_design();
    for corner in CORNERS {
        let name = corner.name();
        let Some(data) = spec.corner(corner) else { continue };
        let (load, oil, spring) = (point.corner_load[corner], point.oil_load[corner], point.spring_load[corner]);
        if design && load <= 0.0 {
            warnings.push(format!("{name}: the corner load is {load:.0} N; the body would lift off"));
        }
        if value(data.tyre.rate) == 0.0 {
            warnings.push(format!("{name}: the tyre has no rate, as off the ground; the loads are those on it"));
        } else if point.tyre_load[corner] == 0.0 {
            warnings.push(format!("{name}: the wheel is off the ground"));
        }
        if data.spring.is_none() {
            if spring.abs() > 1e-6 * load.abs() {
                warnings.push(format!(
                    "{name}: the oil carries {oil:.0} N of {load:.0} N and there is no spring for the rest; pressure {} by {:.1} %",
                    if spring > 0.0 { "too low" } else { "too high" },
                    100.0 * (spring / oil).abs()
                ));
            }
        } else if spring < 0.0 {
            warnings.push(format!(
                "{name}: the oil carries {oil:.0} N, more than the corner's {load:.0} N; the spring would have to pull"
            ));
        }
        if point.stop_load[corner] != 0.0 {
            warnings.push(format!("{name}: on its stop with {:.0} N", point.stop_load[corner].abs()));
        }
        let stroke = data.cylinder.as_ref().map_or(0.0, |cylinder| value(cylinder.stroke));
        if stroke > 0.0 && point.piston_travel[corner].abs() > 0.5 * stroke {
            warnings.push(format!(
                "{name}: the piston would be {:.1} mm beyond its stroke",
                1e3 * (point.piston_travel[corner].abs() - 0.5 * stroke)
            ));
        }
    }
    for state in &point.accumulators {
        if state.full_volume > 0.0 && state.empty_pressure == 0.0 {
            warnings.push(format!("{}: has lost its charge; oil fills it", state.name));
        } else if state.pressure < state.empty_pressure {
            warnings.push(format!(
                "{}: the system pressure {:.2} bar abs is below the precharge of {:.2} bar abs at this temperature; the accumulator is empty of oil and rigid",
                state.name,
                state.pressure / 1e5,
                state.empty_pressure / 1e5
            ));
        }
        if state.least_volume > 0.0 && state.gas_volume <= state.least_volume {
            warnings.push(format!("{}: the separator is at its end stop", state.name));
        }
    }
    for (name, cavity) in point.circuits.iter().zip(&point.cavity) {
        if *cavity > 0.0 {
            warnings.push(format!("circuits.{name}: the oil has torn off; a cavity of {:.1} cm³", 1e6 * cavity));
        }
    }
    warnings
}
