//! Cholesky factorisation that finds the rank of a positive semidefinite matrix.

use nalgebra::DMatrix;

/// Splits the coordinates of a positive semidefinite matrix into `range`, on which it is positive
/// definite, and the rest, for which `null` holds one null vector each (columns, `1` at its own
/// coordinate, otherwise zero outside `range`).
pub(crate) struct Ranked {
    pub range: Vec<usize>,
    pub rest: Vec<usize>,
    pub null: DMatrix<f64>,
}

/// Diagonal pivoting on the matrix scaled to unit diagonal (N. J. Higham, *Accuracy and Stability
/// of Numerical Algorithms*, section 10.3, from memory). Coordinates in `first` are taken into
/// the range before any other.
pub(crate) fn rank_revealing(matrix: &DMatrix<f64>, first: &[usize]) -> Ranked {
    let n = matrix.nrows();
    let scale: Vec<f64> = (0..n).map(|i| matrix[(i, i)].max(0.0).sqrt()).collect();
    let unit = |i: usize| if scale[i] > 0.0 { scale[i] } else { 1.0 };
    let mut work = DMatrix::from_fn(n, n, |i, j| matrix[(i, j)] / (unit(i) * unit(j)));
    let tolerance = 64.0 * n as f64 * f64::EPSILON;
    let (mut range, mut rest): (Vec<usize>, Vec<usize>) = (Vec::new(), (0..n).collect());
    // Columns of the factor, one for each pivot.
    let mut factor: Vec<Vec<f64>> = Vec::new();
    loop {
        let candidate = |among: &mut dyn Iterator<Item = usize>| {
            among.filter(|&i| work[(i, i)] > tolerance).fold(None, |best: Option<usize>, i| match best {
                Some(b) if work[(b, b)] >= work[(i, i)] => Some(b),
                _ => Some(i),
            })
        };
        let mut preferred = rest.iter().copied().filter(|i| first.contains(i));
        let Some(pivot) = candidate(&mut preferred).or_else(|| candidate(&mut rest.iter().copied())) else {
            break;
        };
        let root = work[(pivot, pivot)].sqrt();
        let column: Vec<f64> = (0..n)
            .map(|i| {
                if i == pivot {
                    root
                } else if range.contains(&i) {
                    0.0
                } else {
                    work[(i, pivot)] / root
                }
            })
            .collect();
        for i in 0..n {
            for j in 0..n {
                work[(i, j)] -= column[i] * column[j];
            }
        }
        factor.push(column);
        range.push(pivot);
        rest.retain(|&i| i != pivot);
    }
    // Null vector of rest coordinate i: e_i − E_range (M_rr)⁻¹ M_ri, by back substitution.
    let rank = range.len();
    let mut null = DMatrix::zeros(n, rest.len());
    for (k, &i) in rest.iter().enumerate() {
        let mut x = vec![0.0; rank];
        for r in (0..rank).rev() {
            let mut sum = factor[r][i];
            for (s, value) in x.iter().enumerate().skip(r + 1) {
                sum -= factor[r][range[s]] * value;
            }
            x[r] = sum / factor[r][range[r]];
        }
        null[(i, k)] = 1.0;
        for r in 0..rank {
            null[(range[r], k)] = -x[r] * unit(i) / unit(range[r]);
        }
    }
    Ranked { range, rest, null }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn null_vectors_are_null_and_preference_is_kept() {
        // Gram matrix of five vectors in three dimensions, badly scaled.
        let vectors = DMatrix::from_row_slice(
            5,
            3,
            &[1e-4, 0.0, 0.0, 0.0, 2.0, 0.0, 1e-4, 2.0, 0.0, 0.0, 0.0, 3e5, 2e-4, 2.0, 3e5],
        );
        let gram = &vectors * vectors.transpose();
        let found = rank_revealing(&gram, &[2]);
        assert_eq!(found.range.len(), 3);
        assert!(found.range.contains(&2));
        for k in 0..2 {
            let column = found.null.column(k);
            let image = vectors.transpose() * column;
            assert!(image.norm() <= 1e-12 * vectors.norm() * column.norm(), "{image}");
        }
    }

    #[test]
    fn a_zero_matrix_has_no_range() {
        let found = rank_revealing(&DMatrix::zeros(3, 3), &[]);
        assert!(found.range.is_empty());
        assert_eq!(found.null, DMatrix::identity(3, 3));
    }
}
