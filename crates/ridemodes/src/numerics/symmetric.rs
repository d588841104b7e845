//! Complex symmetric equations.

use nalgebra::{DMatrix, DVector};
use num_complex::Complex64;

/// A = L D Lᵀ of a complex symmetric A (transposed, not conjugated) without pivoting, at a quarter of the cost of a
/// pivoted factorisation of these sizes. What it solves is to be checked by its residual.
pub(crate) struct SymmetricFactor {
    /// Column by column: L below the diagonal, 1/D on it.
    entries: DMatrix<Complex64>,
}

impl SymmetricFactor {
    pub(crate) fn new(mut matrix: DMatrix<Complex64>) -> Self {
        let n = matrix.nrows();
        let entries = matrix.as_mut_slice();
        for k in 0..n {
            let inverse = entries[k * n + k].inv();
            for j in k + 1..n {
                let factor = entries[k * n + j] * inverse;
                for i in j..n {
                    let own = entries[k * n + i];
                    entries[j * n + i] -= factor * own;
                }
            }
            for i in k + 1..n {
                entries[k * n + i] *= inverse;
            }
            entries[k * n + k] = inverse;
        }
        Self { entries: matrix }
    }

    pub(crate) fn solve(&self, right: &DVector<Complex64>) -> DVector<Complex64> {
        let n = right.len();
        let entries = self.entries.as_slice();
        let mut x = right.clone();
        for k in 0..n {
            let own = x[k];
            for i in k + 1..n {
                x[i] -= entries[k * n + i] * own;
            }
            x[k] = own * entries[k * n + k];
        }
        for k in (0..n).rev() {
            for i in k + 1..n {
                let above = x[i];
                x[k] -= entries[k * n + i] * above;
            }
        }
        x
    }
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
        assert!((SymmetricFactor::new(a).solve(&b) - &expected).norm() <= 1e-13 * expected.norm());
    }
}
