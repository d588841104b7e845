//! The state in which forces and oil volumes balance.
//!
//! Unknown are heave, pitch, roll and the four wheels; the pressure of each region follows from the volume its chambers
//! push in, which is one monotone equation. The tangent is exact, of the one residual in dual numbers.

use nalgebra::{SMatrix, SVector};
use serde::{Deserialize, Serialize};

use super::parts::{Parts, deflections, imbalance, tyre_loads};
use crate::error::{Error, Result};
use crate::numerics::{Dual, Scalar};

type Vector = SVector<f64, 7>;
type Tangent = SMatrix<f64, 7, 7>;

/// A solved balance.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub(crate) struct Solution {
    pub unknowns: [f64; 7],
    pub pressure: Vec<f64>,
    pub iterations: usize,
    /// Largest imbalance over the weight.
    pub residual: f64,
}

/// Imbalance over the weight below which a state is in balance.
const BALANCED: f64 = 1e-11;
const MOST_ITERATIONS: usize = 80;

// Pressures of all regions at some unknowns.
fn pressures<T: Scalar>(parts: &Parts<T>, unknowns: &[T; 7], guess: &[f64]) -> Option<Vec<T>> {
    let deflection = deflections(parts, unknowns);
    parts.regions.iter().zip(guess).map(|(region, &guess)| region.pressure(region.pushed(&deflection), guess)).collect()
}

/// The residual, generic in the scalar: unknowns and numbers may both carry derivatives.
pub(crate) fn residual<T: Scalar>(parts: &Parts<T>, unknowns: &[T; 7], guess: &[f64], weight: f64) -> Option<[T; 7]> {
    let pressure = pressures(parts, unknowns, guess)?;
    Some(imbalance(parts, unknowns, &pressure, weight))
}

// −∂residual/∂unknowns, a tangent stiffness, by seven dual directions.
pub(crate) fn tangent(parts: &Parts<Dual>, unknowns: &[f64; 7], pressure: &[f64], weight: f64) -> Option<Tangent> {
    let mut tangent = Tangent::zeros();
    for column in 0..7 {
        let seeded: [Dual; 7] =
            std::array::from_fn(
                |i| {
                    if i == column { Dual::variable(unknowns[i]) } else { Dual::constant(unknowns[i]) }
                },
            );
        let rows = residual(parts, &seeded, pressure, weight)?;
        for (row, value) in rows.iter().enumerate() {
            tangent[(row, column)] = -value.derivative;
        }
    }
    Some(tangent)
}

/// Newton's method with a line search on the imbalance, from a start on.
pub(crate) fn solve(parts: &Parts<f64>, dual: &Parts<Dual>, start: &Solution, weight: f64) -> Result<Solution> {
    let mut unknowns = start.unknowns;
    let mut pressure = start.pressure.clone();
    let rigid = |unknowns: &[f64; 7], iterations| failed(parts, unknowns, iterations, f64::NAN);
    let balance = |unknowns: &[f64; 7], guess: &[f64]| -> Option<(Vec<f64>, Vector, f64)> {
        let pressure = pressures(parts, unknowns, guess)?;
        let rows = Vector::from(imbalance(parts, unknowns, &pressure, weight));
        let size = rows.amax() / parts.weight;
        size.is_finite().then_some((pressure, rows, size))
    };
    let Some((first, mut rows, mut size)) = balance(&unknowns, &pressure) else { return Err(rigid(&unknowns, 0)) };
    pressure = first;
    let mut best = size;
    for iteration in 0..MOST_ITERATIONS {
        if size <= BALANCED {
            // One step more costs little and takes the rounding.
            let polished =
                step(dual, &unknowns, &pressure, &rows, weight, 0.0).map(|step| moved(&unknowns, &step, 1.0));
            if let Some(next) = polished
                && let Some((p, _, better)) = balance(&next, &pressure)
                && better < size
            {
                return Ok(Solution { unknowns: next, pressure: p, iterations: iteration, residual: better });
            }
            return Ok(Solution { unknowns, pressure, iterations: iteration, residual: size });
        }
        // A singular or downhill tangent is stiffened until the step goes down.
        let mut accepted = false;
        for stiffening in [0.0, 1e-4, 1e-2, 1.0, 100.0] {
            let Some(direction) = step(dual, &unknowns, &pressure, &rows, weight, stiffening) else { continue };
            // No wheel moves by more than this at once: laws change on the way.
            let most = direction.amax();
            let mut share = if most > 0.3 { 0.3 / most } else { 1.0 };
            for _ in 0..12 {
                let next = moved(&unknowns, &direction, share);
                if let Some((p, r, s)) = balance(&next, &pressure)
                    && s < (1.0 - 1e-4 * share) * size
                {
                    (unknowns, pressure, rows, size) = (next, p, r, s);
                    accepted = true;
                    break;
                }
                share *= 0.5;
            }
            if accepted {
                break;
            }
        }
        best = best.min(size);
        if !accepted {
            // At the rounding of stiff stops and oil nothing goes down any more.
            if size <= 1e-9 {
                return Ok(Solution { unknowns, pressure, iterations: iteration, residual: size });
            }
            return Err(failed(parts, &unknowns, iteration, best));
        }
    }
    Err(failed(parts, &unknowns, MOST_ITERATIONS, best))
}

fn moved(unknowns: &[f64; 7], step: &Vector, share: f64) -> [f64; 7] {
    std::array::from_fn(|i| unknowns[i] + share * step[i])
}

fn step(
    dual: &Parts<Dual>,
    unknowns: &[f64; 7],
    pressure: &[f64],
    rows: &Vector,
    weight: f64,
    stiffening: f64,
) -> Option<Vector> {
    let mut tangent = tangent(dual, unknowns, pressure, weight)?;
    let scale = tangent.diagonal().amax();
    for i in 0..7 {
        tangent[(i, i)] += stiffening * scale;
    }
    let step = tangent.lu().solve(rows)?;
    step.iter().all(|entry| entry.is_finite()).then_some(step)
}

/// The state did not settle.
pub(crate) fn failed(parts: &Parts<f64>, unknowns: &[f64; 7], iterations: usize, residual: f64) -> Error {
    let loads = tyre_loads(parts, unknowns);
    let off = loads.iter().filter(|&&load| load == 0.0).count();
    let what = match off {
        0 => "the static equilibrium".to_owned(),
        1 => "the static equilibrium with one wheel off the ground".to_owned(),
        _ => format!("the static equilibrium with {off} wheels off the ground (does it tip over?)"),
    };
    Error::NotConverged { what, iterations, residual, last: unknowns.to_vec() }
}
