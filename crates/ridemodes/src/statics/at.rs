//! A solved state with what linearisation needs of it, in any scalar.

use super::Positions;
use super::condition::{Condition, Payload};
use super::parts::{Parts, deflections, imbalance};
use super::solver::{self, Solution};
use crate::axes::PerCorner;
use crate::error::{Error, Result};
use crate::gas::GasState;
use crate::hydraulics::OilState;
use crate::numerics::{Dual, Scalar};
use crate::vehicle::Vehicle;

/// Gas of an accumulator at a state.
#[derive(Clone, Copy, Debug)]
pub(crate) struct GasAt<T> {
    pub pressure: T,
    pub volume: T,
    pub full: T,
    pub empty_pressure: T,
    /// Compliances, slow (isothermal) and fast [m³/Pa].
    pub compliance: [T; 2],
}

/// A state: the parts, where they stand, and the oil.
pub(crate) struct At<T> {
    pub parts: Parts<T>,
    pub deflection: [T; 4],
    /// Pressure of each region.
    pub pressure: Vec<T>,
    pub oil: OilState<T>,
    pub gas: Vec<GasAt<T>>,
    /// Wheels that stand on the ground.
    pub contact: [bool; 4],
    /// Nodes that are open to the air.
    pub open: Vec<bool>,
}

impl<T: Scalar> At<T> {
    /// The state of a solution with the vehicle's numbers in a scalar; the solution's derivatives by them follow from
    /// the implicit function theorem (O9): with the residual F(x, θ) = 0 and the tangent −∂F/∂x, dx = (−∂F/∂x)⁻¹ ∂F/∂θ dθ.
    pub(crate) fn new(
        car: &Vehicle,
        numbers: &[T],
        condition: &Condition,
        charge: &[f64],
        solution: &Solution,
        standing: Option<&Solution>,
    ) -> Self {
        let parts = match standing {
            Some(start) => moving(car, numbers, condition, charge, start),
            None => Parts::new(car.structure(), numbers, condition, charge, false),
        };
        let mut parts = parts;
        if condition.levelled {
            // The pressures are what was solved for.
            for (region, &p) in parts.regions.iter_mut().zip(&solution.pressure) {
                region.held = Some(T::constant(p)).filter(|_| !region.hubs.is_empty());
            }
        }
        let weight = condition.weight();
        let unknowns = match condition.is_design() {
            // At the design condition nothing moves, whatever the numbers.
            true => [T::zero(); 7],
            false => differentiated(car, condition, charge, standing, &parts, solution, weight),
        };
        Self::of(car, numbers, condition, parts, &unknowns, solution)
    }

    fn of(
        car: &Vehicle,
        numbers: &[T],
        condition: &Condition,
        parts: Parts<T>,
        unknowns: &[T; 7],
        solution: &Solution,
    ) -> Self {
        let network = &car.structure().network;
        let deflection = deflections(&parts, unknowns);
        let pressure: Vec<T> = parts
            .regions
            .iter()
            .zip(&solution.pressure)
            .map(|(region, &p)| {
                let pushed = region.pushed(&deflection);
                if condition.is_design() {
                    region.held.unwrap_or(region.design_pressure)
                } else {
                    region.followed(pushed, p).unwrap_or(T::constant(p))
                }
            })
            .collect();
        let temperature = condition.temperature.map_or(numbers[car.spec().temperature.0], T::constant);
        let nothing = GasAt {
            pressure: T::zero(),
            volume: T::zero(),
            full: T::zero(),
            empty_pressure: T::zero(),
            compliance: [T::zero(); 2],
        };
        let mut gas = vec![nothing; network.accumulators.len()];
        let mut node_pressure = vec![T::zero(); network.nodes.len()];
        for (region, &p) in parts.regions.iter().zip(&pressure) {
            for &node in &region.nodes {
                node_pressure[node] = p;
            }
            for (place, (index, law, _)) in region.gases.iter().enumerate() {
                let state: GasState<T> = region.gas(place, p);
                gas[*index] = GasAt {
                    pressure: p,
                    volume: state.volume,
                    full: law.full,
                    empty_pressure: law.empty_pressure(temperature),
                    compliance: law.compliances(state, [p, temperature]),
                };
            }
        }
        let mut open = vec![false; network.nodes.len()];
        for region in &parts.regions {
            let burst = region.hubs.iter().any(|&hub| condition.is_burst(&network.circuits[hub]));
            for &node in region.nodes.iter().filter(|_| burst) {
                open[node] = true;
            }
        }
        let contact = std::array::from_fn(|i| {
            let corner = &parts.corners[i];
            let compression = corner.height.value() - unknowns[3 + i].value();
            corner.tyre_load.value() + corner.tyre_rate.value() * compression > 0.0 || condition.is_design()
        });
        Self {
            deflection,
            oil: OilState {
                temperature,
                pressure: node_pressure,
                gas: gas.iter().map(|gas| gas.compliance[1]).collect(),
            },
            pressure,
            gas,
            contact,
            open,
            parts,
        }
    }
}

impl<T: Scalar> At<T> {
    /// Corner positions from the centre of gravity with payload.
    pub(crate) fn positions(&self) -> Positions<T> {
        let corners = &self.parts.corners;
        let [x, y, _] = self.parts.centre;
        Positions {
            x: PerCorner(std::array::from_fn(|i| corners[i].x - x)),
            y: PerCorner(std::array::from_fn(|i| corners[i].y - y)),
        }
    }

    /// Mass block of body and payload about their common centre over z, pitch and roll:
    /// [[m, 0, 0], [0, I_yy, −P_xy], [0, −P_xy, I_xx]], by parallel axes.
    pub(crate) fn body(&self, mass: T, [mut roll, mut pitch, mut product]: [T; 3], payload: &[Payload]) -> [[T; 3]; 3] {
        let centre = self.parts.centre;
        let from_centre = |place: [f64; 3]| -> [T; 3] { std::array::from_fn(|i| T::constant(place[i]) - centre[i]) };
        let own = from_centre([0.0; 3]);
        let points = payload.iter().map(|one| (T::constant(one.mass), from_centre([one.x, one.y, one.z])));
        if !payload.is_empty() {
            for (m, from) in std::iter::once((mass, own)).chain(points) {
                roll += m * (from[1].square() + from[2].square());
                pitch += m * (from[0].square() + from[2].square());
                product += m * from[0] * from[1];
            }
        }
        let zero = T::zero();
        [[self.parts.mass, zero, zero], [zero, pitch, -product], [zero, -product, roll]]
    }
}

// The parts of a fast change from a standing vehicle: slow lines shut, each gas from where it stood.
fn moving<T: Scalar>(
    car: &Vehicle,
    numbers: &[T],
    condition: &Condition,
    charge: &[f64],
    start: &Solution,
) -> Parts<T> {
    let standing = condition.standing();
    let before = At::new(car, numbers, &standing, charge, start, None);
    let mut parts = Parts::new(car.structure(), numbers, condition, charge, true);
    for region in &mut parts.regions {
        let Some(&node) = region.nodes.first() else { continue };
        let from = before.oil.pressure[node];
        let states = region.gases.iter().map(|(index, law, _)| {
            let state = law.at(from, region.temperature);
            GasState { volume: before.gas[*index].volume, ..state }
        });
        let states: Vec<GasState<T>> = states.collect();
        // Oil that slow lines have let in or out stays.
        let pushed = region.pushed(&before.deflection);
        region.start = Some((states, from));
        if region.held.is_none() {
            region.added += region.missing(from, pushed);
        }
    }
    parts
}

fn differentiated<T: Scalar>(
    car: &Vehicle,
    condition: &Condition,
    charge: &[f64],
    standing: Option<&Solution>,
    parts: &Parts<T>,
    solution: &Solution,
    weight: f64,
) -> [T; 7] {
    let unknowns = solution.unknowns.map(T::constant);
    let Some(rows) = solver::residual(parts, &unknowns, &solution.pressure, weight) else { return unknowns };
    if rows.iter().all(|row| row.is_settled()) {
        return unknowns;
    }
    let plain: Vec<Dual> = car.numbers().iter().map(|&number| Dual::constant(number)).collect();
    let dual = match standing {
        Some(start) => moving(car, &plain, condition, charge, start),
        None => Parts::new(car.structure(), &plain, condition, charge, false),
    };
    let inverse = solver::tangent(&dual, &solution.unknowns, &solution.pressure, weight)
        .and_then(nalgebra::SMatrix::<f64, 7, 7>::try_inverse);
    let Some(inverse) = inverse else { return unknowns };
    std::array::from_fn(|i| {
        let mut step = T::zero();
        for (j, &row) in rows.iter().enumerate() {
            // The value is solved; only the derivative counts.
            step += (row - row.value()) * inverse[(i, j)];
        }
        unknowns[i] + step
    })
}

/// Solves for the state under a condition, from a state nearby if there is one.
pub(crate) fn solve(
    car: &Vehicle,
    condition: &Condition,
    charge: &[f64],
    near: Option<&Solution>,
) -> Result<(Solution, Option<Solution>)> {
    if condition.is_design() && charge.iter().all(|&share| share == 1.0) {
        return Ok((at_design(car, condition, charge), None));
    }
    if !condition.fast {
        return Ok((stand(car, condition, charge, near)?, None));
    }
    let start = stand(car, &condition.standing(), charge, None)?;
    let numbers = car.numbers();
    let dual: Vec<Dual> = numbers.iter().map(|&number| Dual::constant(number)).collect();
    let held = |condition: &Condition| {
        (moving(car, numbers, condition, charge, &start), moving(car, &dual, condition, charge, &start))
    };
    let first = seed(&held(condition).0, &start);
    let near = near.filter(|near| near.pressure.len() == first.pressure.len());
    let design = numbers[car.spec().temperature.0];
    // Temperature, payload and oil are those of the standing vehicle all the way.
    let part = |share: f64| {
        let moved = condition.part(share, design);
        Condition {
            temperature: condition.temperature,
            payload: condition.payload.clone(),
            oil: condition.oil.clone(),
            spring_seat: condition.spring_seat,
            ..moved
        }
    };
    let solution = ramp(&part, &|condition: &Condition, _| held(condition), near.unwrap_or(&first), &first)?;
    Ok((solution, Some(start)))
}

fn at_design(car: &Vehicle, condition: &Condition, charge: &[f64]) -> Solution {
    let parts: Parts<f64> = Parts::new(car.structure(), car.numbers(), condition, charge, false);
    let pressure = parts.regions.iter().map(|region| region.design_pressure).collect();
    let mut solution = Solution { unknowns: [0.0; 7], pressure, iterations: 0, residual: 0.0 };
    let rows = imbalance(&parts, &solution.unknowns, &solution.pressure, condition.weight());
    solution.residual = rows.iter().fold(0.0, |most: f64, row| most.max(row.abs())) / parts.weight;
    solution
}

// Pressures of regions that a start with other regions suggests.
fn seed(parts: &Parts<f64>, start: &Solution) -> Solution {
    let pressure = parts
        .regions
        .iter()
        .map(|region| region.start.as_ref().map_or(region.design_pressure, |(_, from)| *from))
        .collect();
    Solution { pressure, ..start.clone() }
}

fn stand(car: &Vehicle, condition: &Condition, charge: &[f64], near: Option<&Solution>) -> Result<Solution> {
    let design = at_design(car, condition, charge);
    let numbers = car.numbers();
    let dual: Vec<Dual> = numbers.iter().map(|&number| Dual::constant(number)).collect();
    let design_temperature = numbers[car.spec().temperature.0];
    let held = |condition: &Condition, share: f64| {
        let charge: Vec<f64> = charge.iter().map(|own| 1.0 + share * (own - 1.0)).collect();
        let mut both = (
            Parts::new(car.structure(), numbers, condition, &charge, false),
            Parts::new(car.structure(), &dual, condition, &charge, false),
        );
        // Pressures that are held are approached from the design's.
        for (plain, dual) in both.0.regions.iter_mut().zip(&mut both.1.regions) {
            if let Some(held) = plain.held {
                let p = plain.design_pressure + share * (held - plain.design_pressure);
                (plain.held, dual.held) = (Some(p), Some(Dual::constant(p)));
            }
        }
        both
    };
    let part = |share: f64| condition.part(share, design_temperature);
    let near = near.filter(|near| near.pressure.len() == design.pressure.len());
    if condition.levelled {
        return level(condition, &held, near.unwrap_or(&design), &design);
    }
    ramp(&part, &held, near.unwrap_or(&design), &design)
}

type Both = (Parts<f64>, Parts<Dual>);

// At once if that goes; otherwise in steps from the start of the way, halved where they fail.
fn ramp(
    part: &impl Fn(f64) -> Condition,
    held: &impl Fn(&Condition, f64) -> Both,
    near: &Solution,
    start: &Solution,
) -> Result<Solution> {
    let to = |share: f64, from: &Solution| {
        let condition = part(share);
        let (plain, dual) = held(&condition, share);
        solver::solve(&plain, &dual, from, condition.weight())
    };
    let mut failure = match to(1.0, near) {
        Ok(solution) => return Ok(solution),
        Err(error) => error,
    };
    let (mut here, mut share, mut step) = (start.clone(), 0.0_f64, 0.25_f64);
    for _ in 0..64 {
        let next = (share + step).min(1.0);
        match to(next, &here) {
            Ok(solution) if next >= 1.0 => return Ok(solution),
            Ok(solution) => {
                (here, share) = (solution, next);
                step *= 1.5;
            }
            Err(error) => {
                failure = error;
                step *= 0.5;
                if step < 1e-3 {
                    break;
                }
            }
        }
    }
    Err(failure)
}

// Every region with a hub is held at the pressure at which its chambers hold their design volume. Newton in these
// pressures; the pressed volumes answer by the suspension's stiffness, −∂v/∂p = b K⁻¹ bᵀ, taken by differences of the
// balance solved anew.
fn level(
    condition: &Condition,
    held: &impl Fn(&Condition, f64) -> Both,
    near: &Solution,
    design: &Solution,
) -> Result<Solution> {
    let mut pressure = near.pressure.clone();
    let (template, _) = held(condition, 1.0);
    let active: Vec<usize> = (0..template.regions.len())
        .filter(|&k| !template.regions[k].hubs.is_empty() && !template.regions[k].chambers.is_empty())
        .collect();
    let mut here = near.clone();
    let state = |pressure: &[f64], from: &Solution| -> Result<(Solution, Vec<f64>)> {
        let fixed = |condition: &Condition, share: f64| {
            let mut both = held(condition, share);
            for &k in &active {
                both.0.regions[k].held = Some(pressure[k]);
                both.1.regions[k].held = Some(Dual::constant(pressure[k]));
            }
            both
        };
        let solution = ramp(&|_| condition.clone(), &fixed, from, design)?;
        let deflection = deflections(&template, &solution.unknowns);
        let pushed = active.iter().map(|&k| template.regions[k].pushed(&deflection)).collect();
        Ok((solution, pushed))
    };
    const CHANGE: f64 = 1e-4;
    for _ in 0..30 {
        let (solution, pushed) = state(&pressure, &here)?;
        here = solution;
        let missing = nalgebra::DVector::from_vec(pushed.clone());
        let travelled = active.iter().zip(&pushed).map(|(&k, v)| {
            let area: f64 = template.regions[k].chambers.iter().map(|chamber| chamber.area.abs()).sum();
            v.abs() / area
        });
        if travelled.fold(0.0, f64::max) <= 1e-10 {
            return Ok(here);
        }
        let mut slope = nalgebra::DMatrix::zeros(active.len(), active.len());
        for (column, &k) in active.iter().enumerate() {
            let mut moved = pressure.clone();
            moved[k] *= 1.0 + CHANGE;
            let (_, other) = state(&moved, &here)?;
            for row in 0..active.len() {
                slope[(row, column)] = (other[row] - pushed[row]) / CHANGE;
            }
        }
        // Circuits that level the same motion leave a direction free: the least change is taken.
        let least = 1e-9 * slope.amax();
        let Some(step) = slope.svd(true, true).solve(&missing, least).ok() else { break };
        for (&k, change) in active.iter().zip(step.iter()) {
            pressure[k] *= (1.0 - change).clamp(0.2, 5.0);
        }
    }
    Err(Error::NotConverged {
        what: "the levelled height".into(),
        iterations: 30,
        residual: f64::NAN,
        last: here.unknowns.to_vec(),
    })
}
