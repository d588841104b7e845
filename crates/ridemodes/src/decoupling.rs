//! Which value of a number would decouple two motions.

use serde::{Deserialize, Serialize};

use crate::axes::MOTION_NAMES;
use crate::error::{Error, Result, Violation};
use crate::spec::nearest;
use crate::vehicle::{Parameter, Vehicle};

/// What one number can do about a coupling.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct Remedy {
    /// Path of the number.
    pub path: String,
    /// Its value [SI].
    pub value: f64,
    /// Unit.
    pub unit: String,
    /// Value nearest to its own at which the coupling vanishes; `None` where none does within the range.
    pub solution: Option<f64>,
    /// Coupling K_ij/√(K_ii K_jj) at the solution, or the least met.
    pub cross: f64,
    /// Value at which that is met.
    pub at: f64,
    /// Range that was searched: within the bounds, a thousandth to a thousand times the value.
    pub range: [f64; 2],
}

/// The numbers that could decouple two motions in stiffness, the smallest change first; then those that cannot,
/// by the coupling they leave.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct Decoupling {
    /// The two motions.
    pub motions: [String; 2],
    /// Coupling as it is.
    pub cross: f64,
    /// What each number that has any effect can do.
    pub remedies: Vec<Remedy>,
}

const REACH: f64 = 1e3;
const STATIONS: usize = 61;

impl Vehicle {
    /// For every number the value that would decouple two motions in stiffness, solved one number at a time.
    ///
    /// # Errors
    /// [`Error::InvalidInput`] for a name that is no motion.
    pub fn decoupling(&self, first: &str, second: &str) -> Result<Decoupling> {
        let place = |name: &str| {
            MOTION_NAMES.iter().position(|known| *known == name).ok_or_else(|| {
                Error::invalid(
                    Violation::new("motion", format!("\"{name}\""), "no such motion")
                        .hint(nearest(name, MOTION_NAMES.into_iter())),
                )
            })
        };
        let (i, j) = (place(first)?, place(second)?);
        if i == j {
            return Err(Error::invalid(Violation::new("motion", format!("\"{first}\""), "give two different motions")));
        }
        let motions = self.settle()?.linear()?.motions()?;
        let mut remedies: Vec<Remedy> = Vec::new();
        for parameter in self.parameters() {
            // Off-diagonal and normalised coupling at a value; `None` where the vehicle cannot be.
            let at = |value: f64| {
                let car = self.with_values([(parameter.path.as_str(), value)]).ok()?;
                let motions = car.settle().ok()?.linear().ok()?.motions().ok()?;
                Some((motions.stiffness.total[(i, j)], motions.stiffness.cross[(i, j)]))
            };
            remedies.extend(remedy(&parameter, &at));
        }
        let change = |remedy: &Remedy| remedy.solution.map_or(f64::INFINITY, |x| ((x / remedy.value).ln()).abs());
        remedies.sort_by(|a, b| {
            change(a).total_cmp(&change(b)).then(a.cross.abs().total_cmp(&b.cross.abs())).then(a.path.cmp(&b.path))
        });
        Ok(Decoupling {
            motions: [first.to_owned(), second.to_owned()],
            cross: motions.stiffness.cross[(i, j)],
            remedies,
        })
    }
}

// Stations over the range find the changes of sign, bisection the zero nearest to the present value.
fn remedy(parameter: &Parameter, at: &impl Fn(f64) -> Option<(f64, f64)>) -> Option<Remedy> {
    let value = parameter.value;
    let bounds = parameter.bounds;
    let range = if value == 0.0 {
        // No scale of its own: nothing to search along.
        return None;
    } else {
        let ends = [value / REACH, value * REACH];
        [ends[0].min(ends[1]).max(bounds.least), ends[0].max(ends[1]).min(bounds.largest)]
    };
    let station = |k: usize| {
        let low = (range[0] / value).max(1.0 / REACH).ln();
        let high = (range[1] / value).max(1.0 / REACH).ln();
        value * (low + (high - low) * k as f64 / (STATIONS - 1) as f64).exp()
    };
    let mut points: Vec<(f64, f64, f64)> = (0..STATIONS)
        .map(station)
        .chain([value])
        .filter_map(|x| at(x).map(|(entry, cross)| (x, entry, cross)))
        .collect();
    points.sort_by(|a, b| a.0.total_cmp(&b.0));
    points.dedup_by(|a, b| a.0 == b.0);
    let (least, most) = points.iter().fold((f64::INFINITY, f64::NEG_INFINITY), |(l, m), p| (l.min(p.1), m.max(p.1)));
    let present = at(value)?;
    if most - least <= 1e-9 * present.0.abs().max(most.abs()) {
        return None; // it does not move the coupling
    }
    let mut solution: Option<f64> = None;
    for pair in points.windows(2) {
        let ((a, below, _), (b, above, _)) = (pair[0], pair[1]);
        if (below <= 0.0) == (above <= 0.0) {
            continue;
        }
        let zero = bisect(a, b, below, at);
        let nearer = |old: f64| (zero / value).ln().abs() < (old / value).ln().abs();
        if solution.is_none_or(nearer) {
            solution = Some(zero);
        }
    }
    let best = points.iter().copied().min_by(|a, b| a.2.abs().total_cmp(&b.2.abs()))?;
    let (cross, place) = match solution.and_then(|x| at(x).map(|(_, cross)| (cross, x))) {
        Some(found) => found,
        None => (best.2, best.0),
    };
    Some(Remedy {
        path: parameter.path.clone(),
        value,
        unit: parameter.unit.to_owned(),
        solution,
        cross,
        at: place,
        range,
    })
}

fn bisect(mut a: f64, mut b: f64, at_a: f64, at: &impl Fn(f64) -> Option<(f64, f64)>) -> f64 {
    for _ in 0..200 {
        let middle = 0.5 * (a + b);
        if middle <= a.min(b) || middle >= a.max(b) {
            break;
        }
        match at(middle) {
            Some((entry, _)) if (entry <= 0.0) == (at_a <= 0.0) => a = middle,
            _ => b = middle,
        }
    }
    0.5 * (a + b)
}
