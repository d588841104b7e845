//! Modes without damping.

use nalgebra::{DMatrix, DVector, SymmetricEigen};
use num_complex::Complex64;

use super::{RawMode, SHARE_NAMES, shares};
use crate::error::{Error, Result};
use crate::system::{Canonical, LinearSystem};

/// Second-order coordinates in which the mass is the identity.
pub(super) struct Whitened {
    /// L⁻ᵀ of M = L Lᵀ: u = second · `to_second` · whitened.
    pub to_second: DMatrix<f64>,
    pub stiffness: DMatrix<f64>,
}

/// Whitens the mass. Circulations stand first, so that no other coordinate comes to depend on them.
pub(super) fn whiten(split: &Canonical) -> Result<Whitened> {
    let factor = split
        .mass
        .clone()
        .cholesky()
        .ok_or_else(|| Error::Singular { matrix: "mass".into(), motion: "a motion without mass".into() })?;
    let n = split.mass.nrows();
    let mut to_second = DMatrix::identity(n, n);
    factor.l_dirty().tr_solve_lower_triangular_mut(&mut to_second);
    let stiffness = to_second.transpose() * &split.k_ss * &to_second;
    Ok(Whitened { to_second, stiffness: (&stiffness + stiffness.transpose()) * 0.5 })
}

/// Eigenvalues ω² in ascending order with their vectors, of the coordinates that are no circulation.
pub(super) fn elastic(whitened: &Whitened, loops: usize) -> (DVector<f64>, DMatrix<f64>) {
    let n = whitened.stiffness.nrows() - loops;
    let eigen = SymmetricEigen::new(whitened.stiffness.view((loops, loops), (n, n)).into_owned());
    let mut order: Vec<usize> = (0..n).collect();
    order.sort_by(|&a, &b| eigen.eigenvalues[a].total_cmp(&eigen.eigenvalues[b]));
    let values = DVector::from_fn(n, |i, _| eigen.eigenvalues[order[i]]);
    (values, eigen.eigenvectors.select_columns(&order))
}

/// Undamped modes by ascending frequency.
pub(super) fn solve(system: &LinearSystem) -> Result<Vec<RawMode>> {
    let split = Canonical::new(system, false)?;
    let whitened = whiten(&split)?;
    let loops = split.second_loops;
    let (values, vectors) = elastic(&whitened, loops);
    let count = values.len();
    let mut padded = DMatrix::zeros(count + loops, count);
    padded.view_mut((loops, 0), (count, count)).copy_from(&vectors);
    let shapes = &split.second * &whitened.to_second * padded;
    let largest = values.iter().fold(0.0_f64, |most, value| most.max(value.abs()));
    let mut modes = Vec::with_capacity(count);
    for (i, &value) in values.iter().enumerate() {
        let shape: Vec<Complex64> = shapes.column(i).iter().map(|&u| Complex64::from(u)).collect();
        if value <= 64.0 * count as f64 * f64::EPSILON * largest {
            return Err(free_motion(system, &shape, value));
        }
        modes.push(RawMode { pole: Complex64::new(0.0, value.sqrt()), shape });
    }
    Ok(modes)
}

fn free_motion(system: &LinearSystem, shape: &[Complex64], value: f64) -> Error {
    let share = shares::kinetic(system, shape);
    let main = (0..8).fold(0, |best, i| if share[i] > share[best] { i } else { best });
    Error::Singular {
        matrix: "stiffness".into(),
        motion: format!(
            "{} is {}",
            SHARE_NAMES[main],
            if value < -1e-6 { "unstable" } else { "free: nothing holds it; give it a spring, a bar or oil" }
        ),
    }
}
