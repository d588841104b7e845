//! One number varied, every mode followed by its shape.

use ndarray::Array2;
use num_complex::Complex64;
use serde::{Deserialize, Serialize};

use crate::error::Result;
use crate::modes::Modes;
use crate::numerics::best_assignment;
use crate::states::{check, unit_of, varied};
use crate::statics::Condition;
use crate::system::LinearSystem;
use crate::vehicle::Vehicle;

/// Modes along a sweep of one number.
///
/// A branch is a mode followed by shape, also where frequencies approach and part again. Where a pair turns into
/// two real poles one of them carries the branch on and the other begins a new one; where a branch is not there,
/// its entries are NaN.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct Sweep {
    /// Path that is varied.
    pub path: String,
    /// Unit of the values.
    pub unit: String,
    /// Values [SI].
    pub values: Vec<f64>,
    /// Label of each branch where it begins; a branch that begins later says so.
    pub label: Vec<String>,
    /// Poles (branches × values) [rad/s].
    pub pole: Array2<Complex64>,
    /// Natural frequencies (branches × values) [Hz].
    pub frequency: Array2<f64>,
    /// Damping ratios (branches × values).
    pub damping_ratio: Array2<f64>,
    /// Row of each branch in `modes` (branches × values), −1 where it is not there.
    pub row: Array2<i64>,
    /// The modes at each value, by ascending frequency.
    pub modes: Vec<Modes>,
    /// Least likeness met from step to step on each branch, 1 for the same shape.
    pub likeness: Vec<f64>,
}

// Steps whose matches are less alike than this are halved, this many times at most.
const CLEAR: f64 = 0.9;
const HALVINGS: usize = 10;

struct Station {
    value: f64,
    system: LinearSystem,
    modes: Modes,
}

impl Vehicle {
    fn station(&self, path: &str, value: f64, base: &Condition) -> Result<Station> {
        let (car, condition) = varied(self, base, path, value)?;
        let system = car.settle_near(&condition, None)?.linear()?;
        let modes = system.modes()?;
        Ok(Station { value, system, modes })
    }

    /// Varies the number at a path and follows every mode by shape, halving steps that leave it unclear.
    ///
    /// # Errors
    /// [`Error::InvalidInput`](crate::Error::InvalidInput) for an unknown path or a value out of its bounds; nothing is
    /// computed then.
    pub fn sweep(&self, path: &str, values: &[f64]) -> Result<Sweep> {
        self.sweep_under(path, values, &Condition::default())
    }

    /// The same under a condition; `path` may be one of its keywords, see [`states`](Self::states).
    ///
    /// # Errors
    /// As [`sweep`](Self::sweep), and where a state does not settle.
    pub fn sweep_under(&self, path: &str, values: &[f64], base: &Condition) -> Result<Sweep> {
        check(self, base, path, values)?;
        let unit = unit_of(self, path);
        let mut stations: Vec<Station> = Vec::with_capacity(values.len());
        // branches[b][k]: row of branch b at value k
        let mut branches: Vec<Vec<Option<usize>>> = Vec::new();
        let mut likeness: Vec<f64> = Vec::new();
        let mut label: Vec<String> = Vec::new();
        for (place, &value) in values.iter().enumerate() {
            let next = self.station(path, value, base)?;
            let links = match stations.last() {
                Some(last) => self.follow(path, base, last, &next, HALVINGS)?,
                None => Vec::new(),
            };
            let mut taken = vec![false; next.modes.len()];
            for (branch, rows) in branches.iter_mut().enumerate() {
                let link = rows[place - 1].and_then(|row| links[row]);
                if let Some((row, alike)) = link {
                    taken[row] = true;
                    likeness[branch] = likeness[branch].min(alike);
                }
                rows.push(link.map(|(row, _)| row));
            }
            for row in (0..next.modes.len()).filter(|&row| !taken[row]) {
                let mut rows = vec![None; place];
                rows.push(Some(row));
                branches.push(rows);
                likeness.push(1.0);
                let name = &next.modes.label[row];
                label.push(if place == 0 { name.clone() } else { format!("{name} from {value:.6e}") });
            }
            stations.push(next);
        }
        let shape = (branches.len(), values.len());
        let at = |branch: usize, place: usize| branches[branch][place].map(|row| (row, &stations[place].modes));
        let number = |of: &dyn Fn(usize, &Modes) -> f64| {
            Array2::from_shape_fn(shape, |(branch, place)| {
                at(branch, place).map_or(f64::NAN, |(row, modes)| of(row, modes))
            })
        };
        Ok(Sweep {
            path: path.to_owned(),
            unit,
            values: values.to_vec(),
            pole: Array2::from_shape_fn(shape, |(branch, place)| {
                at(branch, place).map_or(Complex64::new(f64::NAN, f64::NAN), |(row, modes)| modes.pole[row])
            }),
            frequency: number(&|row, modes| modes.frequency[row]),
            damping_ratio: number(&|row, modes| modes.damping_ratio[row]),
            row: Array2::from_shape_fn(shape, |(branch, place)| at(branch, place).map_or(-1, |(row, _)| row as i64)),
            label,
            likeness,
            modes: stations.into_iter().map(|station| station.modes).collect(),
        })
    }

    // For each row at one station its row at the next and the least likeness on the way.
    fn follow(
        &self,
        path: &str,
        base: &Condition,
        from: &Station,
        to: &Station,
        halvings: usize,
    ) -> Result<Vec<Option<(usize, f64)>>> {
        let links = link(from, to);
        let unclear = links.iter().flatten().any(|&(_, alike)| alike < CLEAR);
        if !unclear || halvings == 0 {
            return Ok(links);
        }
        let middle = self.station(path, 0.5 * (from.value + to.value), base)?;
        let first = self.follow(path, base, from, &middle, halvings - 1)?;
        let second = self.follow(path, base, &middle, to, halvings - 1)?;
        Ok(first
            .into_iter()
            .map(|link| {
                let (row, alike) = link?;
                let (row, further) = second[row]?;
                Some((row, alike.min(further)))
            })
            .collect())
    }
}

fn link(from: &Station, to: &Station) -> Vec<Option<(usize, f64)>> {
    let (a, b) = (from.modes.len(), to.modes.len());
    let alike = |i: usize, j: usize| likeness(from, i, to, j);
    let mut links = vec![None; a];
    if a <= b {
        for (i, j) in best_assignment(a, b, alike).into_iter().enumerate() {
            links[i] = Some((j, alike(i, j)));
        }
    } else {
        for (j, i) in best_assignment(b, a, |j, i| alike(i, j)).into_iter().enumerate() {
            links[i] = Some((j, alike(i, j)));
        }
    }
    links
}

// Modal assurance over all states: |ψ₁ᴴ W ψ₂|² with the strain and kinetic energies as the measure, so that
// relaxations, which hardly move a mass, are told apart too; times the nearness of the poles, which decides
// between equal shapes (the two real poles of one motion).
fn likeness(from: &Station, i: usize, to: &Station, j: usize) -> f64 {
    let (a, b) = (from.modes.shape.row(i), to.modes.shape.row(j));
    if a.len() != b.len() {
        return 0.0;
    }
    let (p, q) = (from.modes.pole[i], to.modes.pole[j]);
    let form =
        |x: ndarray::ArrayView1<'_, Complex64>, px: Complex64, y: ndarray::ArrayView1<'_, Complex64>, py: Complex64| {
            let mut total = Complex64::new(0.0, 0.0);
            for (r, u) in x.iter().enumerate() {
                for (c, v) in y.iter().enumerate() {
                    let mass = from.system.mass()[(r, c)];
                    let stiffness = from.system.stiffness()[(r, c)];
                    if mass != 0.0 || stiffness != 0.0 {
                        total += u.conj() * v * (px.conj() * py * mass + stiffness);
                    }
                }
            }
            total
        };
    let scale = form(a, p, a, p).re * form(b, q, b, q).re;
    if scale <= 0.0 {
        return 0.0;
    }
    let near = (-(p - q).norm() / (p.norm() + q.norm())).exp();
    form(a, p, b, q).norm_sqr() / scale * near
}
