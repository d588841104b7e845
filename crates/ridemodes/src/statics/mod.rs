//! The operating point: what carries the vehicle when it stands.

mod at;
mod closing;
mod condition;
mod limits;
mod loads;
mod parts;
mod region;
mod solver;

use serde::{Deserialize, Serialize};

use crate::axes::{CORNERS, PerCorner};
use crate::error::Result;
use crate::numerics::{Dual, Scalar};
use crate::spec::{Slot, Spec};
use crate::units::STANDARD_GRAVITY;
use crate::vehicle::Vehicle;

pub(crate) use at::At;
use closing::lines_apart;
pub use closing::{ClosedOff, SlowLine};
pub use condition::{Condition, Fault, Payload};
pub use limits::Limit;
use parts::{suspension_forces, tyre_loads};
use solver::Solution;

/// Corner positions from the centre of gravity, x forward and y left [m].
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
pub(crate) struct Positions<T> {
    pub x: PerCorner<T>,
    pub y: PerCorner<T>,
}

impl<T: Scalar> Positions<T> {
    pub(crate) fn new(spec: &Spec<Slot>, numbers: &[T]) -> Self {
        let value = |slot: Slot| numbers[slot.0];
        Self {
            x: PerCorner::new(|corner| {
                let distance = value(spec.axle(corner).distance);
                if corner.is_front() { distance } else { -distance }
            }),
            y: PerCorner::new(|corner| {
                let half = value(spec.axle(corner).track) * 0.5;
                (if corner.is_left() { half } else { -half }) - value(spec.body.cg_offset)
            }),
        }
    }
}

/// Static sprung corner loads F [N]: Jᵀ F = [m g, 0, 0] and the given warp preload
/// (F_FL − F_FR − F_RL + F_RR)/4.
pub(crate) fn corner_loads<T: Scalar>(spec: &Spec<Slot>, numbers: &[T]) -> PerCorner<T> {
    let value = |slot: Slot| numbers[slot.0];
    let weight = value(spec.body.mass) * STANDARD_GRAVITY;
    let (a, b) = (value(spec.front.distance), value(spec.rear.distance));
    let (track_front, track_rear) = (value(spec.front.track), value(spec.rear.track));
    // Each axle's half, plus and minus u left and right:
    // u_f t_f + u_r t_r = m g·offset (roll balance), u_f − u_r = 2·preload (warp).
    let front = weight * b / (a + b) * 0.5;
    let rear = weight * a / (a + b) * 0.5;
    let preload = value(spec.body.warp_preload) * 2.0;
    let u_front = (weight * value(spec.body.cg_offset) + preload * track_rear) / (track_front + track_rear);
    let u_rear = u_front - preload;
    PerCorner([front + u_front, front - u_front, rear + u_rear, rear - u_rear])
}

/// An accumulator at an operating point.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct AccumulatorState {
    /// Path of the accumulator, e.g. `circuits.left.accumulators.main`.
    pub name: String,
    /// Absolute pressure [Pa].
    pub pressure: f64,
    /// Gas volume [m³].
    pub gas_volume: f64,
    /// Gas volume when empty of oil [m³].
    pub full_volume: f64,
    /// Absolute pressure below which it is empty of oil [Pa].
    pub empty_pressure: f64,
    /// Gas volume at which the separator meets its end stop [m³].
    pub least_volume: f64,
}

/// Where and under which loads the vehicle stands.
///
/// At the design condition there is no deflection, system pressures and temperature are as the file gives them; oil
/// under pressure above the atmosphere carries its share of each corner, the spring preload is what is left. Every other
/// state is solved from these amounts of oil, gas and preload.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct OperatingPoint {
    pub(crate) vehicle: Vehicle,
    /// The vehicle with what faults change.
    pub(crate) car: Vehicle,
    /// Share of its charge that each accumulator keeps.
    pub(crate) charge: Vec<f64>,
    pub(crate) solution: Solution,
    /// The standing vehicle that a fast state starts from.
    pub(crate) standing: Option<Solution>,
    /// What it stands under.
    pub condition: Condition,
    /// Heave z [m], pitch [rad], roll [rad] of the body's centre of gravity from the design condition.
    pub attitude: [f64; 3],
    /// Height of the wheels from the design condition [m].
    pub wheels: PerCorner<f64>,
    /// Suspension deflection from the design condition, bump positive [m].
    pub deflection: PerCorner<f64>,
    /// Vertical tyre loads [N].
    pub tyre_load: PerCorner<f64>,
    /// Suspension forces on the body [N].
    pub corner_load: PerCorner<f64>,
    /// Share of the corner load that the oil carries, at the wheel [N].
    pub oil_load: PerCorner<f64>,
    /// Share that the spring carries, at the wheel [N].
    pub spring_load: PerCorner<f64>,
    /// Force in the spring itself [N].
    pub spring_preload: PerCorner<f64>,
    /// Share that the stops carry, at the wheel [N].
    pub stop_load: PerCorner<f64>,
    /// Travel of the pistons from mid-stroke, bump positive [m]; NaN without a cylinder.
    pub piston_travel: PerCorner<f64>,
    /// Names of the circuits, in their order.
    pub circuits: Vec<String>,
    /// Absolute pressure of each circuit [Pa].
    pub pressure: Vec<f64>,
    /// Gas volume of each circuit [m³].
    pub gas_volume: Vec<f64>,
    /// Oil volume added to each circuit since the design condition [m³].
    pub oil_added: Vec<f64>,
    /// Volume of the cavity in each circuit where oil has torn off [m³].
    pub cavity: Vec<f64>,
    /// Accumulators, in the order of circuits and names.
    pub accumulators: Vec<AccumulatorState>,
    /// Lines that only balance slowly.
    pub slow_lines: Vec<SlowLine>,
    /// What lines that are shut have closed off.
    pub closed_off: Vec<ClosedOff>,
    /// Dry friction of damper and cylinder at each wheel, ± [N]: within this band a corner may stand.
    pub friction: PerCorner<f64>,
    /// Absolute pressure of the air around [Pa].
    pub atmosphere: f64,
    /// Temperature of gas and oil [K].
    pub temperature: f64,
    /// Margins to what limits the suspension; what is passed is marked.
    pub limits: Vec<Limit>,
    /// What the engineer should know.
    pub warnings: Vec<String>,
}

impl Vehicle {
    /// The operating point at the design condition.
    ///
    /// # Errors
    /// None that a valid vehicle brings about.
    pub fn settle(&self) -> Result<OperatingPoint> {
        self.settle_under(&Condition::default())
    }

    /// The operating point under a condition.
    ///
    /// # Errors
    /// [`Error::InvalidInput`](crate::Error::InvalidInput) with everything that is wrong with the condition;
    /// [`Error::NotConverged`](crate::Error::NotConverged) with the last state where no equilibrium is found.
    pub fn settle_under(&self, condition: &Condition) -> Result<OperatingPoint> {
        condition.check(self)?;
        self.settle_near(condition, None)
    }

    /// The same for a condition that has been checked, from a state nearby.
    pub(crate) fn settle_near(&self, condition: &Condition, near: Option<&OperatingPoint>) -> Result<OperatingPoint> {
        let (car, charge) = condition.faulty(self)?;
        let solved = at::solve(&car, condition, &charge, near.map(|point| &point.solution))?;
        Ok(OperatingPoint::new(self, car, charge, condition.clone(), solved))
    }

    /// The operating point of a load case of the file.
    ///
    /// # Errors
    /// As [`settle_under`](Self::settle_under).
    pub fn settle_case(&self, name: &str) -> Result<OperatingPoint> {
        self.settle_under(&Condition::of_case(self, name)?)
    }

    /// Names of the load cases in the file, in their order.
    pub fn cases(&self) -> Vec<&str> {
        self.spec().cases.0.keys().map(String::as_str).collect()
    }
}

/// A line that balances faster than this is felt by the body and not slow [s].
const SLOW: f64 = 1.0;

impl OperatingPoint {
    /// Reads off everything from a solution.
    pub(crate) fn new(
        vehicle: &Vehicle,
        car: Vehicle,
        charge: Vec<f64>,
        condition: Condition,
        (solution, standing): (Solution, Option<Solution>),
    ) -> Self {
        let (spec, numbers) = (car.spec(), car.numbers());
        let value = |slot: Slot| numbers[slot.0];
        let network = &car.structure().network;
        let at = At::new(&car, numbers, &condition, &charge, &solution, standing.as_ref());
        let parts = &at.parts;
        let atmosphere = value(spec.atmosphere);
        let deflection = PerCorner(at.deflection);
        let forces = suspension_forces(parts, &at.deflection, &at.pressure);
        let spring_preload = PerCorner::new(|corner| {
            let i = corner.index();
            parts.corners[i].spring.as_ref().map_or(0.0, |spring| spring.force(at.deflection[i]))
        });
        let spring_load = PerCorner::new(|corner| {
            let i = corner.index();
            let part = &parts.corners[i];
            part.spring
                .as_ref()
                .map_or(part.rest, |spring| spring.force(at.deflection[i]) * spring.lever.at(at.deflection[i]))
        });
        let stop_load = PerCorner::new(|corner| {
            let i = corner.index();
            parts.corners[i].stops.iter().flatten().map(|stop| stop.force(at.deflection[i]) * stop.ratio).sum()
        });
        let mut oil_load = PerCorner([0.0; 4]);
        for (region, pressure) in parts.regions.iter().zip(&at.pressure) {
            for chamber in &region.chambers {
                let lever = chamber.lever.at(at.deflection[chamber.corner]);
                oil_load.0[chamber.corner] += chamber.area * lever * (pressure - atmosphere);
            }
        }
        let piston_travel = PerCorner::new(|corner| {
            let cylinder = spec.corner(corner).and_then(|corner| corner.cylinder.as_ref());
            cylinder.map_or(f64::NAN, |cylinder| {
                let (ratio, slope) = (value(cylinder.motion_ratio), value(cylinder.motion_ratio_slope));
                deflection[corner] * (ratio + 0.5 * slope * deflection[corner])
            })
        });
        let tyre_load = PerCorner(tyre_loads(parts, &solution.unknowns));
        let accumulators: Vec<AccumulatorState> = network
            .accumulators
            .iter()
            .enumerate()
            .map(|(index, accumulator)| AccumulatorState {
                name: accumulator.name.to_string(),
                pressure: at.gas[index].pressure,
                gas_volume: at.gas[index].volume,
                full_volume: at.gas[index].full,
                empty_pressure: at.gas[index].empty_pressure,
                least_volume: value(accumulator.least_gas_volume),
            })
            .collect();
        let count = network.circuits.len();
        let (mut pressure, mut gas_volume) = (vec![0.0; count], vec![0.0; count]);
        let (mut oil_added, mut cavity) = (vec![0.0; count], vec![0.0; count]);
        for (region, &p) in parts.regions.iter().zip(&at.pressure) {
            let pushed = region.pushed(&at.deflection);
            for &circuit in &region.hubs {
                pressure[circuit] = p;
                let found = region.held.is_some();
                oil_added[circuit] = if found { region.missing(p, pushed) } else { 0.0 } + region.added;
                cavity[circuit] = region.cavity(p, pushed);
            }
        }
        for (reference, state) in network.accumulators.iter().zip(&accumulators) {
            gas_volume[reference.circuit] += state.gas_volume;
        }
        let friction = PerCorner::new(|corner| {
            let Some(corner) = spec.corner(corner) else { return 0.0 };
            let damper = corner.damper.as_ref().map(|damper| value(damper.friction) * value(damper.motion_ratio));
            let seals = corner.cylinder.as_ref().map(|own| value(own.friction) * value(own.motion_ratio));
            damper.unwrap_or(0.0) + seals.unwrap_or(0.0)
        });
        let (slow_lines, closed_off) = lines_apart(network, &network.values(spec, numbers, &at.oil), &at.oil);
        let mut point = Self {
            vehicle: vehicle.clone(),
            charge,
            attitude: [solution.unknowns[0], solution.unknowns[1], solution.unknowns[2]],
            wheels: PerCorner(std::array::from_fn(|i| solution.unknowns[3 + i])),
            solution,
            standing,
            temperature: condition.temperature.unwrap_or_else(|| value(spec.temperature)),
            condition,
            deflection,
            tyre_load,
            corner_load: PerCorner(forces),
            oil_load,
            spring_load,
            spring_preload,
            stop_load,
            piston_travel,
            circuits: network.circuits.iter().map(ToString::to_string).collect(),
            pressure,
            gas_volume,
            oil_added,
            cavity,
            accumulators,
            slow_lines,
            closed_off,
            friction,
            atmosphere,
            limits: Vec::new(),
            warnings: Vec::new(),
            car: car.clone(),
        };
        point.limits = limits::limits(&point);
        point.warnings = limits::warnings(&point);
        let without_gas = parts.regions.iter().filter(|region| !region.chambers.is_empty() && region.gases.is_empty());
        for line in point.slow_lines.iter().filter(|line| line.time_constant < SLOW) {
            point.warnings.push(format!(
                "{}: marked slow, but it balances in {:.2e} s; results take it as shut",
                line.name, line.time_constant
            ));
        }
        point.warnings.extend(without_gas.map(|region| {
            let names: Vec<&str> = region.nodes.iter().map(|&node| &*network.nodes[node].name).collect();
            let more = if names.len() > 1 { format!(" and {} more nodes", names.len() - 1) } else { String::new() };
            format!("{}{more}: no way to an accumulator; only the oil's own compressibility gives", names[0])
        }));
        point
    }
}

/// How a state answers to a load.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct LoadSlope {
    /// Heave, pitch, roll and wheels per load.
    pub unknowns: [f64; 7],
    /// Pressure of each circuit per load.
    pub pressure: Vec<f64>,
}

impl OperatingPoint {
    /// Slopes by lateral and by longitudinal acceleration, (O9) in the loads, which are linear in both; `None` where the
    /// state is at the verge of tipping over.
    pub(crate) fn load_slopes(&self) -> Option<[LoadSlope; 2]> {
        let numbers = self.car.numbers();
        let plain: Vec<Dual> = numbers.iter().map(|&number| Dual::constant(number)).collect();
        let at = self.at(&plain);
        let Solution { unknowns, pressure, .. } = &self.solution;
        let inverse = solver::tangent(&at.parts, unknowns, pressure, self.condition.weight())?.try_inverse()?;
        let structure = self.car.structure();
        let here = loads::external_loads(structure, numbers, &self.condition);
        let slope = |change: &dyn Fn(&mut Condition)| {
            let mut condition = self.condition.clone();
            change(&mut condition);
            let there = loads::external_loads(structure, numbers, &condition);
            let moved = inverse * nalgebra::SVector::<f64, 7>::from_fn(|i, _| there[i] - here[i]);
            let seeded: [Dual; 7] = std::array::from_fn(|i| Dual { value: unknowns[i], derivative: moved[i] });
            let deflection = parts::deflections(&at.parts, &seeded);
            let mut by_circuit = vec![0.0; self.circuits.len()];
            for (region, &p) in at.parts.regions.iter().zip(pressure) {
                let slope = region.followed(region.pushed(&deflection), p).map_or(0.0, |p| p.derivative);
                for &circuit in &region.hubs {
                    by_circuit[circuit] = slope;
                }
            }
            LoadSlope { unknowns: moved.into(), pressure: by_circuit }
        };
        // Braking and drive have other shares through the links: the change keeps to the side it is on.
        let ahead = if self.condition.ahead() < 0.0 { -1.0 } else { 1.0 };
        let mut longitudinal = slope(&|condition| condition.longitudinal += ahead);
        longitudinal.unknowns.iter_mut().chain(&mut longitudinal.pressure).for_each(|part| *part *= ahead);
        Some([slope(&|condition| condition.lateral += 1.0), longitudinal])
    }

    /// (O14) Suspension force and tangent along a pattern of deflections s·pattern from the design height on, patternᵀF − its
    /// value at rest [N], [N/m]; `None` where oil has nowhere to go.
    pub(crate) fn forces_along(&self, pattern: &[f64; 4], s: f64, condition: &Condition) -> Option<(f64, f64)> {
        let numbers: Vec<Dual> = self.car.numbers().iter().map(|&number| Dual::constant(number)).collect();
        let standing = condition.fast.then_some(&self.solution);
        let at = At::new(&self.car, &numbers, condition, &self.charge, &self.solution, standing);
        let force = |s: Dual| -> Option<Dual> {
            let deflection: [Dual; 4] = pattern.map(|part| s * part);
            let pressure: Option<Vec<Dual>> = at
                .parts
                .regions
                .iter()
                .map(|region| region.pressure(region.pushed(&deflection), region.design_pressure.value))
                .collect();
            let forces = suspension_forces(&at.parts, &deflection, &pressure?);
            let mut along = Dual::zero();
            for (force, part) in forces.iter().zip(pattern) {
                along += *force * *part;
            }
            Some(along)
        };
        let (here, rest) = (force(Dual::variable(s))?, force(Dual::constant(0.0))?);
        Some((here.value - rest.value, here.derivative))
    }

    /// Names of the seats and their places from the centre of gravity with payload, ahead, to the left and above [m].
    pub(crate) fn seats(&self) -> Vec<(String, [f64; 3])> {
        let (spec, numbers) = (self.car.spec(), self.car.numbers());
        let value = |slot: Slot| numbers[slot.0];
        let [x, y, z] = self.at::<f64>(numbers).parts.centre;
        let place = |seat: &crate::spec::Seat<Slot>| {
            let left = value(seat.y) - value(spec.body.cg_offset);
            [value(seat.x) - x, left - y, value(seat.height) - value(spec.body.cg_height) - z]
        };
        spec.seats.0.iter().map(|(name, seat)| (name.clone(), place(seat))).collect()
    }

    /// Share of the lateral load transfer that the front axle takes; NaN without any.
    pub fn front_transfer(&self) -> f64 {
        let load = self.tyre_load.as_array();
        let (front, rear) = (load[1] - load[0], load[3] - load[2]);
        let total = front + rear;
        if total.abs() > 1e-9 * load.iter().sum::<f64>() { front / total } else { f64::NAN }
    }

    /// Cross weight (FR + RL)/ΣF of the tyre loads.
    pub fn cross_weight(&self) -> f64 {
        let load = self.tyre_load.as_array();
        (load[1] + load[2]) / load.iter().sum::<f64>()
    }

    /// The slope of the forces on body and wheels by central differences, −∂F/∂(z, θ, φ, w), pressures solved anew.
    #[cfg(test)]
    pub(crate) fn numeric_tangent(&self, step: f64) -> [[f64; 7]; 7] {
        let at: At<f64> = self.at(self.car.numbers());
        let forces = |unknowns: &[f64; 7]| {
            let deflection = parts::deflections(&at.parts, unknowns);
            let regions = at.parts.regions.iter().zip(&at.pressure);
            let pressure: Option<Vec<f64>> =
                regions.map(|(region, &p)| region.pressure(region.pushed(&deflection), p)).collect();
            pressure.map(|pressure| parts::imbalance(&at.parts, unknowns, &pressure, self.condition.weight()))
        };
        let mut slope = [[0.0; 7]; 7];
        for column in 0..7 {
            let moved = |sign: f64| {
                let mut unknowns = self.solution.unknowns;
                unknowns[column] += sign * step;
                forces(&unknowns).unwrap_or([f64::NAN; 7])
            };
            let (above, below) = (moved(1.0), moved(-1.0));
            for row in 0..7 {
                slope[row][column] = -(above[row] - below[row]) / (2.0 * step);
            }
        }
        slope
    }

    /// The state with the vehicle's numbers in any scalar.
    pub(crate) fn at<T: Scalar>(&self, numbers: &[T]) -> At<T> {
        At::new(&self.car, numbers, &self.condition, &self.charge, &self.solution, self.standing.as_ref())
    }

    /// What a linear result takes for granted here; `shut` where slow lines are.
    pub(crate) fn assumptions(&self, shut: bool) -> Vec<String> {
        let slow = self.slow_lines.iter().map(|line| {
            let state = if shut { "is shut, as a slow line is to vibration" } else { "is slow and flows" };
            let time = line.time_constant;
            let time = if time == 0.0 || time >= 0.1 { format!("{time:.3}") } else { format!("{time:.2e}") };
            format!("{} {state}; its time constant is {time} s with the wheels held", line.name)
        });
        let mut closed: Vec<&String> = self.closed_off.iter().flat_map(|part| &part.lines).collect();
        closed.sort_unstable();
        closed.dedup();
        let traps = |line: &String| {
            self.closed_off.iter().any(|part| part.accumulators.is_empty() && part.lines.contains(line))
        };
        let closed = closed.into_iter().map(|line| {
            let what =
                if traps(line) { "is closed; oil without an accumulator is trapped behind it" } else { "is closed" };
            format!("{line} {what}")
        });
        let network = &self.car.structure().network;
        let spec = self.car.spec();
        let tables = CORNERS
            .iter()
            .filter_map(|&corner| spec.corner(corner))
            .any(|corner| corner.damper.as_ref().is_some_and(|damper| damper.force.is_some()));
        let linearised =
            tables || network.lines.iter().any(|line| line.valve.is_some()) || *self.friction.as_array() != [0.0; 4];
        let amplitudes = linearised
            .then(|| "tables, valves and dry friction are taken as linear at the file's amplitudes".to_owned());
        slow.chain(closed).chain(amplitudes).collect()
    }

    /// The vehicle that stands there.
    pub fn vehicle(&self) -> &Vehicle {
        &self.vehicle
    }
}

#[cfg(test)]
mod tests {
    use super::parts::deflections;
    use super::*;

    pub(crate) fn loaded() -> Condition {
        Condition {
            lateral: 2.5,
            longitudinal: -1.0,
            temperature: Some(315.0),
            payload: vec![Payload { mass: 80.0, x: -0.3, y: 0.2, z: 0.1 }],
            heights: [0.012, 0.0, -0.01, 0.0],
            ..Condition::default()
        }
    }

    // The state is a minimum of the total potential: along random ways off it the work against the imbalance, which is
    // minus its gradient, is positive. Simpson's rule along each way.
    #[test]
    fn no_way_off_a_state_gains_energy() {
        let mut seed = 0.37_f64;
        let mut random = move || {
            seed = (seed * 997.0 + 0.123).fract();
            2.0 * seed - 1.0
        };
        for name in Vehicle::examples() {
            let car = Vehicle::example(name).unwrap();
            let point = car.settle_under(&loaded()).unwrap();
            let at: At<f64> = point.at(point.car.numbers());
            let weight = point.condition.weight();
            let imbalance = |unknowns: &[f64; 7]| {
                let deflection = deflections(&at.parts, unknowns);
                let regions = at.parts.regions.iter().zip(&at.pressure);
                let pressure: Option<Vec<f64>> =
                    regions.map(|(region, &p)| region.pressure(region.pushed(&deflection), p)).collect();
                parts::imbalance(&at.parts, unknowns, &pressure.unwrap(), weight)
            };
            for _ in 0..60 {
                let way: [f64; 7] = std::array::from_fn(|_| 0.008 * random());
                let push = |s: f64| -> f64 {
                    let unknowns = std::array::from_fn(|i| point.solution.unknowns[i] + s * way[i]);
                    -imbalance(&unknowns).iter().zip(&way).map(|(force, part)| force * part).sum::<f64>()
                };
                let work: f64 = (0..=20)
                    .map(|k| f64::from(if k == 0 || k == 20 { 1 } else { 2 + 2 * (k % 2) }) * push(f64::from(k) / 20.0))
                    .sum::<f64>()
                    / 60.0;
                assert!(work > 0.0, "{name}: {work} along {way:?}");
            }
        }
    }
}
