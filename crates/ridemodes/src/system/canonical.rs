//! The system in coordinates that have states: second order, first order, and static ones condensed.
//!
//! M may be singular. On its null space the coordinates are of first order; where C vanishes too they
//! follow statically. A circulation in a closed loop is stored by nothing (its column of K is zero): only
//! its flow is a state, or not even that. With positive semidefinite M and C the null spaces are those of
//! the quadratic forms, so the split is a congruence and everything stays symmetric.

use nalgebra::{Cholesky, DMatrix, DVector, Dyn};

use super::LinearSystem;
use crate::error::{Error, Result};
use crate::numerics::rank_revealing;

/// M, C, K in the split coordinates u = `second` η + `first` ζ, with nothing left that is static:
///
/// η̈ terms: `mass`, `c_ss`, `k_ss`; coupling `c_sf`, `k_sf`; ζ̇ terms: `c_ff`, `k_ff`.
/// The leading `second_loops` of η and `first_loops` of ζ are circulations: columns of K zero.
#[derive(Clone, Debug)]
pub(crate) struct Canonical {
    pub second: DMatrix<f64>,
    pub first: DMatrix<f64>,
    /// Coordinate that stands for each η and ζ.
    pub second_names: Vec<usize>,
    pub first_names: Vec<usize>,
    pub second_loops: usize,
    pub first_loops: usize,
    pub mass: DMatrix<f64>,
    pub c_ss: DMatrix<f64>,
    pub c_sf: DMatrix<f64>,
    pub c_ff: DMatrix<f64>,
    pub k_ss: DMatrix<f64>,
    pub k_sf: DMatrix<f64>,
    pub k_ff: DMatrix<f64>,
}

impl Canonical {
    /// Splits the coordinates. Without damping, everything that has no mass is static.
    pub(crate) fn new(system: &LinearSystem, damped: bool) -> Result<Self> {
        let n = system.coordinates.len();
        let loops: Vec<usize> = system.circulations.iter().map(|(free, _)| *free).collect();
        // Volumes as tree volumes and circulations: columns of the loops' coordinates are their shapes.
        let mut basis = DMatrix::identity(n, n);
        for (free, shape) in &system.circulations {
            basis.set_column(*free, &DVector::from_column_slice(shape));
        }
        let congruent = |matrix: &DMatrix<f64>| {
            if loops.is_empty() { matrix.clone() } else { basis.transpose() * matrix * &basis }
        };
        let mass = congruent(&system.mass);
        let damping = congruent(&system.damping);
        let mut stiffness = congruent(&system.stiffness);
        for &free in &loops {
            // Zero by construction; here without rounding.
            stiffness.row_mut(free).fill(0.0);
            stiffness.column_mut(free).fill(0.0);
        }

        let split = rank_revealing(&mass, &loops);
        let (second_names, second_loops) = loops_first(&split.range, &loops);
        let mut second = DMatrix::zeros(n, second_names.len());
        for (column, &coordinate) in second_names.iter().enumerate() {
            second[(coordinate, column)] = 1.0;
        }
        let massless = split.null;
        let in_loop: Vec<usize> = (0..split.rest.len()).filter(|&k| loops.contains(&split.rest[k])).collect();
        let (first_positions, first_loops, idle) = if damped {
            let split = rank_revealing(&(massless.transpose() * &damping * &massless), &in_loop);
            let (range, count) = loops_first(&split.range, &in_loop);
            // Null vectors of C within those of M; idle circulations have no effect at all.
            let kept: Vec<usize> = (0..split.rest.len()).filter(|&k| !in_loop.contains(&split.rest[k])).collect();
            (range, count, &massless * split.null.select_columns(&kept))
        } else {
            let kept: Vec<usize> = (0..split.rest.len()).filter(|k| !in_loop.contains(k)).collect();
            (Vec::new(), 0, massless.select_columns(&kept))
        };
        let mut first = massless.select_columns(&first_positions);
        let first_names: Vec<usize> = first_positions.iter().map(|&k| split.rest[k]).collect();

        if idle.ncols() > 0 {
            // K_ii y_i + K_is η + K_if ζ = 0 takes the static coordinates out; M and C vanish on them.
            let own = &idle.transpose() * &stiffness * &idle;
            let factor = scaled_cholesky(&own).ok_or_else(|| Error::Singular {
                matrix: "stiffness of the coordinates without mass and damping".into(),
                motion: "a volume that nothing holds".into(),
            })?;
            for part in [&mut second, &mut first] {
                let coupling = &idle.transpose() * &stiffness * &*part;
                *part -= &idle * factor.solve(&coupling);
            }
        }
        let form = |a: &DMatrix<f64>, matrix: &DMatrix<f64>, b: &DMatrix<f64>| a.transpose() * matrix * b;
        let zero_damping = DMatrix::zeros(n, n);
        let damping = if damped { &damping } else { &zero_damping };
        Ok(Self {
            mass: symmetric(form(&second, &mass, &second)),
            c_ss: symmetric(form(&second, damping, &second)),
            c_sf: form(&second, damping, &first),
            c_ff: symmetric(form(&first, damping, &first)),
            k_ss: symmetric(form(&second, &stiffness, &second)),
            k_sf: form(&second, &stiffness, &first),
            k_ff: symmetric(form(&first, &stiffness, &first)),
            second: &basis * second,
            first: &basis * first,
            second_names,
            first_names,
            second_loops,
            first_loops,
        })
    }

    /// Number of states (N11).
    pub(crate) fn states(&self) -> usize {
        2 * self.second_names.len() - self.second_loops + self.first_names.len() - self.first_loops
    }
}

// The members of `loops` first, each part in ascending order.
fn loops_first(range: &[usize], loops: &[usize]) -> (Vec<usize>, usize) {
    let (mut leading, mut others): (Vec<usize>, Vec<usize>) = range.iter().partition(|i| loops.contains(i));
    leading.sort_unstable();
    others.sort_unstable();
    let count = leading.len();
    leading.extend(others);
    (leading, count)
}

fn symmetric(matrix: DMatrix<f64>) -> DMatrix<f64> {
    (&matrix + matrix.transpose()) * 0.5
}

/// Cholesky factor of a positive definite matrix whose coordinates have different units.
pub(crate) struct ScaledCholesky {
    scale: DVector<f64>,
    factor: Cholesky<f64, Dyn>,
}

/// `None` where the matrix is not positive definite to rounding.
pub(crate) fn scaled_cholesky(matrix: &DMatrix<f64>) -> Option<ScaledCholesky> {
    let n = matrix.nrows();
    if (0..n).any(|i| matrix[(i, i)].is_nan() || matrix[(i, i)] <= 0.0) {
        return None;
    }
    let scale = DVector::from_fn(n, |i, _| 1.0 / matrix[(i, i)].sqrt());
    let unit = DMatrix::from_fn(n, n, |i, j| scale[i] * matrix[(i, j)] * scale[j]);
    let factor = Cholesky::new(unit)?;
    let smallest = factor.l_dirty().diagonal().min();
    (smallest * smallest > 64.0 * n as f64 * f64::EPSILON).then_some(ScaledCholesky { scale, factor })
}

impl ScaledCholesky {
    pub(crate) fn solve(&self, right: &DMatrix<f64>) -> DMatrix<f64> {
        let scaled = DMatrix::from_fn(right.nrows(), right.ncols(), |i, j| self.scale[i] * right[(i, j)]);
        let mut solved = self.factor.solve(&scaled);
        for mut column in solved.column_iter_mut() {
            column.component_mul_assign(&self.scale);
        }
        solved
    }
}
