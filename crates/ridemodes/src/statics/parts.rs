//! The parts that carry the vehicle, as numbers in any scalar.

use super::condition::Condition;
use super::loads::Loads;
use super::region::{Region, regions};
use super::{Positions, corner_loads};
use crate::axes::{CORNERS, PerCorner};
use crate::numerics::Scalar;
use crate::spec::{Slot, Stop};
use crate::vehicle::Structure;

/// (O1) A law that passes a travel on through a motion ratio that may change with it: e = MR δ + MR′ δ²/2.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Lever<T> {
    pub ratio: T,
    pub slope: T,
}

impl<T: Scalar> Lever<T> {
    pub(crate) fn travel(&self, deflection: T) -> T {
        deflection * (self.ratio + self.slope * deflection * 0.5)
    }

    /// de/dδ
    pub(crate) fn at(&self, deflection: T) -> T {
        self.ratio + self.slope * deflection
    }
}

/// Spring of a corner.
#[derive(Clone, Copy, Debug)]
pub(crate) struct SpringPart<T> {
    pub lever: Lever<T>,
    pub rate: T,
    pub cubic: T,
    /// Force at the design condition [N].
    pub preload: T,
    /// Lift of the seat [m of spring travel].
    pub seat: T,
}

impl<T: Scalar> SpringPart<T> {
    /// (O2) F = F₀ + k x + k₃ x³ with x = e + seat
    pub(crate) fn force(&self, deflection: T) -> T {
        let x = self.lever.travel(deflection) + self.seat;
        self.preload + x * (self.rate + self.cubic * x.square())
    }

    /// dF/de
    pub(crate) fn rate(&self, deflection: T) -> T {
        let x = self.lever.travel(deflection) + self.seat;
        self.rate + self.cubic * x.square() * 3.0
    }
}

/// Stop of a corner, in bump or in rebound.
#[derive(Clone, Copy, Debug)]
pub(crate) struct StopPart<T> {
    /// Stop travel per wheel travel, negative for rebound.
    pub ratio: T,
    pub gap: T,
    pub rate: T,
    pub cubic: T,
}

impl<T: Scalar> StopPart<T> {
    fn new(stop: &Stop<Slot>, numbers: &[T], bump: bool) -> Self {
        let value = |slot: Slot| numbers[slot.0];
        let ratio = value(stop.motion_ratio);
        Self {
            ratio: if bump { ratio } else { -ratio },
            gap: value(stop.gap),
            rate: value(stop.rate),
            cubic: value(stop.cubic),
        }
    }

    /// Travel into the stop, negative while there is a gap.
    pub(crate) fn depth(&self, deflection: T) -> T {
        self.ratio * deflection - self.gap
    }

    /// Force of the stop itself, k x + k₃ x³ beyond the gap.
    pub(crate) fn force(&self, deflection: T) -> T {
        let x = self.depth(deflection);
        if x.value() > 0.0 { x * (self.rate + self.cubic * x.square()) } else { T::zero() }
    }

    /// Its tangent rate.
    pub(crate) fn rate(&self, deflection: T) -> T {
        let x = self.depth(deflection);
        if x.value() > 0.0 { self.rate + self.cubic * x.square() * 3.0 } else { T::zero() }
    }
}

#[derive(Clone, Copy, Debug)]
pub(crate) struct CornerPart<T> {
    pub x: T,
    pub y: T,
    pub spring: Option<SpringPart<T>>,
    /// Force at the wheel that nothing in the file carries: of a corner without a spring.
    pub rest: T,
    pub stops: [Option<StopPart<T>>; 2],
    pub unsprung: T,
    pub tyre_rate: T,
    /// Tyre load at the design condition [N].
    pub tyre_load: T,
    /// Height of the ground [m].
    pub height: T,
    /// Vertical force on the wheel and, of the same pair, on the body: links under acceleration.
    pub on_wheel: T,
}

/// Everything that the balance is made of.
#[derive(Clone, Debug)]
pub(crate) struct Parts<T> {
    pub corners: [CornerPart<T>; 4],
    /// Bar rates at the wheels, front and rear: force on a wheel per difference of travel.
    pub bars: [T; 2],
    /// Weights and rate of each link.
    pub links: Vec<([T; 4], T)>,
    pub regions: Vec<Region<T>>,
    pub atmosphere: T,
    /// External force and moments on the body over z, pitch and roll at the design attitude.
    pub load: [T; 3],
    /// Moment per roll angle of the leaned body's weight.
    pub leaning: T,
    /// Height of the centre of gravity above the roll axis.
    pub arm: T,
    /// Weight of all that the springs carry, for scales.
    pub weight: f64,
    /// Sprung mass with payload, and its centre ahead, to the left and above the body's.
    pub mass: T,
    pub centre: [T; 3],
}

impl<T: Scalar> Parts<T> {
    /// The parts under a condition, with the share of its charge that each accumulator keeps.
    pub(crate) fn new(structure: &Structure, numbers: &[T], condition: &Condition, charge: &[f64], fast: bool) -> Self {
        let spec = &structure.spec;
        let value = |slot: Slot| numbers[slot.0];
        let loads = Loads::new(structure, numbers, condition);
        let positions = Positions::new(spec, numbers);
        let corner_load = corner_loads(spec, numbers);
        let atmosphere = value(spec.atmosphere);
        let design_oil = oil_loads(structure, numbers);
        let corners = CORNERS.map(|corner| {
            let i = corner.index();
            let data = spec.corner(corner);
            let carried = corner_load[corner] - design_oil[corner];
            let spring = data.and_then(|data| data.spring.as_ref()).map(|spring| {
                let ratio = value(spring.motion_ratio);
                SpringPart {
                    lever: Lever { ratio, slope: value(spring.motion_ratio_slope) },
                    rate: value(spring.rate),
                    cubic: value(spring.cubic),
                    preload: carried / ratio,
                    seat: T::constant(condition.spring_seat[i]),
                }
            });
            let stop = |stop: Option<&Stop<Slot>>, bump| stop.map(|stop| StopPart::new(stop, numbers, bump));
            let unsprung = data.map_or(T::zero(), |data| value(data.unsprung_mass));
            CornerPart {
                x: positions.x[corner],
                y: positions.y[corner],
                rest: if spring.is_some() { T::zero() } else { carried },
                spring,
                stops: [
                    stop(data.and_then(|data| data.bump_stop.as_ref()), true),
                    stop(data.and_then(|data| data.rebound_stop.as_ref()), false),
                ],
                unsprung,
                tyre_rate: data.map_or(T::zero(), |data| value(data.tyre.rate)),
                tyre_load: corner_load[corner] + unsprung * crate::units::STANDARD_GRAVITY,
                height: T::constant(condition.heights[i]),
                on_wheel: loads.on_wheel[i],
            }
        });
        let bar = |axle: &crate::spec::Axle<Slot>| {
            axle.anti_roll_bar.as_ref().map_or(T::zero(), |bar| value(bar.rate) / value(axle.track).square())
        };
        let links = spec.links.0.values().map(|link| {
            let weights = [link.front_left, link.front_right, link.rear_left, link.rear_right].map(value);
            (weights, value(link.rate))
        });
        Self {
            corners,
            bars: [bar(&spec.front), bar(&spec.rear)],
            links: links.collect(),
            regions: regions(structure, numbers, condition, charge, fast),
            atmosphere,
            load: loads.on_body,
            leaning: loads.leaning,
            arm: loads.arm,
            weight: value(spec.body.mass).value() * crate::units::STANDARD_GRAVITY,
            mass: loads.mass,
            centre: loads.centre,
        }
    }
}

// Share of each corner load that oil carries at the design condition, Bᵀ(p_s − p_atm).
fn oil_loads<T: Scalar>(structure: &Structure, numbers: &[T]) -> PerCorner<T> {
    let spec = &structure.spec;
    let atmosphere = numbers[spec.atmosphere.0];
    let mut loads = PerCorner([T::zero(); 4]);
    for node in &structure.network.nodes {
        for chamber in &node.chambers {
            loads[chamber.corner] +=
                chamber.signed_area(spec, numbers, T::zero()) * (numbers[node.pressure.0] - atmosphere);
        }
    }
    loads
}

/// Forces of the suspension on the body (and, reversed, on the wheels), bump positive in the deflection [N].
pub(crate) fn suspension_forces<T: Scalar>(parts: &Parts<T>, deflection: &[T; 4], pressure: &[T]) -> [T; 4] {
    let mut forces = [T::zero(); 4];
    for (i, corner) in parts.corners.iter().enumerate() {
        let delta = deflection[i];
        forces[i] += corner.rest;
        if let Some(spring) = &corner.spring {
            forces[i] += spring.force(delta) * spring.lever.at(delta);
        }
        for stop in corner.stops.iter().flatten() {
            forces[i] += stop.force(delta) * stop.ratio;
        }
    }
    for (axle, &bar) in parts.bars.iter().enumerate() {
        let (left, right) = (2 * axle, 2 * axle + 1);
        let force = bar * (deflection[left] - deflection[right]);
        forces[left] += force;
        forces[right] += -force;
    }
    for (weights, rate) in &parts.links {
        let mut travel = T::zero();
        for i in 0..4 {
            travel += weights[i] * deflection[i];
        }
        for i in 0..4 {
            forces[i] += *rate * travel * weights[i];
        }
    }
    for (region, &p) in parts.regions.iter().zip(pressure) {
        let gauge = p - parts.atmosphere;
        for chamber in &region.chambers {
            forces[chamber.corner] += chamber.area * chamber.lever.at(deflection[chamber.corner]) * gauge;
        }
    }
    forces
}

/// δ_i = w_i − (z − x_i θ + y_i φ) of the unknowns z, θ, φ, w.
pub(crate) fn deflections<T: Scalar>(parts: &Parts<T>, unknowns: &[T; 7]) -> [T; 4] {
    let [z, pitch, roll, ..] = *unknowns;
    std::array::from_fn(|i| {
        let corner = &parts.corners[i];
        unknowns[3 + i] - (z - corner.x * pitch + corner.y * roll)
    })
}

/// Tyre loads, which do not pull.
pub(crate) fn tyre_loads<T: Scalar>(parts: &Parts<T>, unknowns: &[T; 7]) -> [T; 4] {
    std::array::from_fn(|i| {
        let corner = &parts.corners[i];
        let load = corner.tyre_load + corner.tyre_rate * (corner.height - unknowns[3 + i]);
        if load.value() > 0.0 { load } else { T::zero() }
    })
}

/// What is left of the balance of the body (z, pitch, roll) and the wheels, upwards [N, N·m].
pub(crate) fn imbalance<T: Scalar>(parts: &Parts<T>, unknowns: &[T; 7], pressure: &[T], weight: f64) -> [T; 7] {
    let deflection = deflections(parts, unknowns);
    let forces = suspension_forces(parts, &deflection, pressure);
    let tyres = tyre_loads(parts, unknowns);
    let mut rows = [T::zero(); 7];
    rows[..3].copy_from_slice(&parts.load);
    rows[2] += parts.leaning * unknowns[2];
    for (i, corner) in parts.corners.iter().enumerate() {
        rows[0] += forces[i];
        rows[1] += -(corner.x * forces[i]);
        rows[2] += corner.y * forces[i];
        rows[3 + i] = tyres[i] + corner.on_wheel - forces[i] - corner.unsprung * weight;
    }
    rows
}
