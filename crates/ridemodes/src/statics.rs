//! The operating point: what carries the vehicle when it stands.

use std::sync::Arc;

use serde::{Deserialize, Serialize};

use crate::axes::{CORNERS, PerCorner};
use crate::error::Result;
use crate::hydraulics::{Network, NetworkValues, Store, Way};
use crate::numerics::Scalar;
use crate::spec::{Slot, Spec};
use crate::units::STANDARD_GRAVITY;
use crate::vehicle::Vehicle;

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
}

/// A slow line between two parts of the oil.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct SlowLine {
    /// Path of the line, e.g. `lines.balance`.
    pub name: String,
    /// Its resistance [Pa·s/m³].
    pub resistance: f64,
    /// Time in which a difference of pressure falls to 1/e with the wheels held and other slow lines shut,
    /// R C_a C_b/(C_a + C_b) [s]: of two equal accumulators R C/2.
    pub time_constant: f64,
}

/// Oil on one side of a line that is shut.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct ClosedOff {
    /// Lines whose closing bounds it.
    pub lines: Vec<String>,
    /// Its nodes.
    pub nodes: Vec<String>,
    /// Its accumulators.
    pub accumulators: Vec<String>,
    /// Absolute pressure [Pa].
    pub pressure: f64,
    /// Compliance of all that it holds, the denominator of (N16) [m³/Pa].
    pub compliance: f64,
}

/// Where and under which loads the vehicle stands.
///
/// It is the design condition: no deflection, system pressures and temperature as the file gives
/// them; oil under pressure above the atmosphere carries its share of each corner, the spring
/// preload is what is left.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct OperatingPoint {
    pub(crate) vehicle: Vehicle,
    /// Heave z [m], pitch [rad], roll [rad] from the design condition.
    pub attitude: [f64; 3],
    /// Suspension deflection from the design condition, bump positive [m].
    pub deflection: PerCorner<f64>,
    /// Vertical tyre loads [N].
    pub tyre_load: PerCorner<f64>,
    /// Sprung corner loads [N].
    pub corner_load: PerCorner<f64>,
    /// Share of the corner load that the oil carries, at the wheel [N].
    pub oil_load: PerCorner<f64>,
    /// Share that the spring carries, at the wheel [N].
    pub spring_load: PerCorner<f64>,
    /// Force in the spring itself [N].
    pub spring_preload: PerCorner<f64>,
    /// Names of the circuits, in their order.
    pub circuits: Vec<String>,
    /// Absolute pressure of each circuit [Pa].
    pub pressure: Vec<f64>,
    /// Gas volume of each circuit [m³].
    pub gas_volume: Vec<f64>,
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
    /// What the engineer should know.
    pub warnings: Vec<String>,
}

impl Vehicle {
    /// The operating point at the design condition.
    pub fn settle(&self) -> Result<OperatingPoint> {
        let (spec, numbers) = (self.spec(), self.numbers());
        let value = |slot: Slot| numbers[slot.0];
        let network = &self.structure().network;
        let (atmosphere, temperature) = (value(spec.atmosphere), value(spec.temperature));
        let corner_load = corner_loads(spec, numbers);
        // F_oil = Bᵀ (p − p_atm)
        let mut oil_load = PerCorner([0.0; 4]);
        for node in &network.nodes {
            for chamber in &node.chambers {
                oil_load[chamber.corner] += chamber.signed_area(spec, numbers) * (value(node.pressure) - atmosphere);
            }
        }
        let spring_load = PerCorner::new(|corner| corner_load[corner] - oil_load[corner]);
        let spring = |corner| spec.corner(corner).and_then(|corner| corner.spring.as_ref());
        let spring_preload = PerCorner::new(|corner| {
            spring(corner).map_or(0.0, |spring| spring_load[corner] / value(spring.motion_ratio))
        });
        let tyre_load = PerCorner::new(|corner| {
            let wheel = spec.corner(corner).map_or(0.0, |corner| value(corner.unsprung_mass));
            corner_load[corner] + wheel * STANDARD_GRAVITY
        });
        let accumulators: Vec<AccumulatorState> = network
            .accumulators
            .iter()
            .map(|accumulator| {
                let gas = accumulator.gas(numbers, temperature);
                AccumulatorState {
                    name: accumulator.name.to_string(),
                    pressure: value(accumulator.pressure),
                    gas_volume: gas.volume,
                    full_volume: gas.full,
                    empty_pressure: gas.empty_pressure,
                }
            })
            .collect();
        let mut gas_volume = vec![0.0; network.circuits.len()];
        for (reference, state) in network.accumulators.iter().zip(&accumulators) {
            gas_volume[reference.circuit] += state.gas_volume;
        }
        let friction = PerCorner::new(|corner| {
            let Some(corner) = spec.corner(corner) else { return 0.0 };
            let damper = corner.damper.as_ref().map(|damper| value(damper.friction) * value(damper.motion_ratio));
            let seals = corner.cylinder.as_ref().map(|own| value(own.friction) * value(own.motion_ratio));
            damper.unwrap_or(0.0) + seals.unwrap_or(0.0)
        });
        let (slow_lines, closed_off) = lines_apart(network, &network.values(spec, numbers), numbers);
        let mut warnings = Vec::new();
        for corner in CORNERS {
            let name = corner.name();
            if corner_load[corner] <= 0.0 {
                warnings
                    .push(format!("{name}: the corner load is {:.0} N; the body would lift off", corner_load[corner]));
            }
            if spec.corner(corner).is_some_and(|corner| value(corner.tyre.rate) == 0.0) {
                warnings.push(format!("{name}: the tyre has no rate, as off the ground; the loads are those on it"));
            }
            if spring(corner).is_none() {
                if spring_load[corner].abs() > 1e-6 * corner_load[corner].abs() {
                    warnings.push(format!(
                        "{name}: the oil carries {:.0} N of {:.0} N and there is no spring for the rest; pressure {} by {:.1} %",
                        oil_load[corner],
                        corner_load[corner],
                        if spring_load[corner] > 0.0 { "too low" } else { "too high" },
                        100.0 * (spring_load[corner] / oil_load[corner]).abs()
                    ));
                }
            } else if spring_load[corner] < 0.0 {
                warnings.push(format!(
                    "{name}: the oil carries {:.0} N, more than the corner's {:.0} N; the spring would have to pull",
                    oil_load[corner], corner_load[corner]
                ));
            }
        }
        for state in &accumulators {
            if state.pressure < state.empty_pressure {
                warnings.push(format!(
                    "{}: the system pressure {:.2} bar abs is below the precharge of {:.2} bar abs at this temperature; the accumulator is empty of oil and rigid",
                    state.name,
                    state.pressure / 1e5,
                    state.empty_pressure / 1e5
                ));
            }
        }
        Ok(OperatingPoint {
            vehicle: self.clone(),
            attitude: [0.0; 3],
            deflection: PerCorner([0.0; 4]),
            tyre_load,
            corner_load,
            oil_load,
            spring_load,
            spring_preload,
            circuits: network.circuits.iter().map(Arc::<str>::to_string).collect(),
            pressure: network.pressures.iter().map(|&pressure| value(pressure)).collect(),
            gas_volume,
            accumulators,
            slow_lines,
            closed_off,
            friction,
            atmosphere,
            temperature,
            warnings,
        })
    }
}

// Slow lines with their time constants, and what shut lines close off.
fn lines_apart(network: &Network, values: &NetworkValues<f64>, numbers: &[f64]) -> (Vec<SlowLine>, Vec<ClosedOff>) {
    let compliance = |region: &[usize], own: usize| -> f64 {
        (0..region.len()).filter(|&node| region[node] == own).map(|node| values.node_compliance(node)).sum()
    };
    let fast = network.regions(|line| !values.lines[line].closed && !values.lines[line].slow);
    let slow_lines = network
        .ways
        .iter()
        .filter(|way| values.lines[way.lines.start].slow && !values.lines[way.lines.start].closed)
        .map(|way| {
            let parts = || way.lines.clone().map(|line| values.lines[line]);
            let resistance: f64 = parts().map(|line| line.throttle + line.valve + line.pipe).sum();
            let line = &network.lines[way.lines.start];
            let (a, b) = (fast[line.from], fast[line.to]);
            let (from, to) = (compliance(&fast, a), compliance(&fast, b));
            // (N15) τ = R C_a C_b/(C_a + C_b)
            let series = if a == b || from + to == 0.0 { 0.0 } else { from * to / (from + to) };
            SlowLine { name: way.name.to_string(), resistance, time_constant: resistance * series }
        })
        .collect();
    let shut: Vec<&Way> = network.ways.iter().filter(|way| values.lines[way.lines.start].closed).collect();
    let region = network.regions(|line| !values.lines[line].closed);
    let count = region.iter().max().map_or(0, |last| last + 1);
    let bounds = |way: &Way, own: usize| {
        let line = &network.lines[way.lines.start];
        region[line.from] == own || region[line.to] == own
    };
    let closed_off = (0..count)
        .filter_map(|own| {
            let lines: Vec<String> =
                shut.iter().filter(|way| bounds(way, own)).map(|way| way.name.to_string()).collect();
            let nodes: Vec<usize> = (0..region.len()).filter(|&node| region[node] == own).collect();
            let first = *nodes.first().filter(|_| !lines.is_empty())?;
            let names = nodes.iter().map(|&node| network.nodes[node].name.to_string()).collect();
            let gas =
                nodes.iter().flat_map(|&node| &network.nodes[node].stores).filter_map(|named| match named.store {
                    Store::Gas(index) => Some(network.accumulators[index].name.to_string()),
                    _ => None,
                });
            Some(ClosedOff {
                accumulators: gas.collect(),
                lines,
                nodes: names,
                pressure: numbers[network.nodes[first].pressure.0],
                compliance: compliance(&region, own),
            })
        })
        .collect();
    (slow_lines, closed_off)
}

impl OperatingPoint {
    /// What a linear result takes for granted here; `shut` where slow lines are.
    pub(crate) fn assumptions(&self, shut: bool) -> Vec<String> {
        let slow = self.slow_lines.iter().map(|line| {
            let state = if shut { "is shut, as a slow line is to vibration" } else { "is slow and flows" };
            format!("{} {state}; its time constant is {:.3} s with the wheels held", line.name, line.time_constant)
        });
        let mut closed: Vec<&String> = self.closed_off.iter().flat_map(|part| &part.lines).collect();
        closed.sort_unstable();
        closed.dedup();
        let closed = closed.into_iter().map(|line| format!("{line} is closed; the oil behind it is trapped"));
        let network = &self.vehicle.structure().network;
        let spec = self.vehicle.spec();
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
