//! One-to-one assignment of largest total score.

/// Assigns every row a column of its own so that the sum of `score(row, column)` is largest.
///
/// Needs `rows <= columns`. Shortest augmenting paths with potentials, O(rows² · columns);
/// H. W. Kuhn, Naval Research Logistics Quarterly 2 (1955) 83-97; J. Munkres, J. SIAM 5 (1957) 32-38
/// (from memory). Equal totals go to the earlier column.
pub(crate) fn best_assignment(rows: usize, columns: usize, score: impl Fn(usize, usize) -> f64) -> Vec<usize> {
    debug_assert!(rows <= columns);
    // Row and column 0 are sentinels; `owner[j]` is the row that holds column j.
    let mut row_price = vec![0.0; rows + 1];
    let mut column_price = vec![0.0; columns + 1];
    let mut owner = vec![0usize; columns + 1];
    for row in 1..=rows {
        let mut reach = vec![f64::INFINITY; columns + 1];
        let mut from = vec![0usize; columns + 1];
        let mut done = vec![false; columns + 1];
        let mut column = 0;
        owner[0] = row;
        while owner[column] != 0 {
            done[column] = true;
            let current = owner[column];
            let (mut step, mut next) = (f64::INFINITY, 0);
            for j in (1..=columns).filter(|&j| !done[j]) {
                let slack = -score(current - 1, j - 1) - row_price[current] - column_price[j];
                if slack < reach[j] {
                    reach[j] = slack;
                    from[j] = column;
                }
                if reach[j] < step {
                    step = reach[j];
                    next = j;
                }
            }
            for j in 0..=columns {
                if done[j] {
                    row_price[owner[j]] += step;
                    column_price[j] -= step;
                } else {
                    reach[j] -= step;
                }
            }
            column = next;
        }
        while column != 0 {
            owner[column] = owner[from[column]];
            column = from[column];
        }
    }
    let mut chosen = vec![0; rows];
    for j in 1..=columns {
        if owner[j] != 0 {
            chosen[owner[j] - 1] = j - 1;
        }
    }
    chosen
}

#[cfg(test)]
mod tests {
    use super::best_assignment;

    fn brute(
        rows: usize,
        columns: usize,
        score: &dyn Fn(usize, usize) -> f64,
        row: usize,
        used: &mut Vec<bool>,
    ) -> f64 {
        if row == rows {
            return 0.0;
        }
        let mut best = f64::NEG_INFINITY;
        for j in 0..columns {
            if !used[j] {
                used[j] = true;
                best = best.max(score(row, j) + brute(rows, columns, score, row + 1, used));
                used[j] = false;
            }
        }
        best
    }

    #[test]
    fn equals_exhaustive_search() {
        let mut seed = 7u64;
        for (rows, columns) in [(1, 1), (3, 3), (4, 6), (5, 5), (2, 7)] {
            for _ in 0..50 {
                let table: Vec<f64> = (0..rows * columns)
                    .map(|_| {
                        seed = seed.wrapping_mul(6364136223846793005).wrapping_add(1442695040888963407);
                        (seed >> 11) as f64 / (1u64 << 53) as f64
                    })
                    .collect();
                let score = |i: usize, j: usize| table[i * columns + j];
                let chosen = best_assignment(rows, columns, score);
                let total: f64 = chosen.iter().enumerate().map(|(i, &j)| score(i, j)).sum();
                let mut distinct = chosen.clone();
                distinct.sort_unstable();
                distinct.dedup();
                assert_eq!(distinct.len(), rows);
                approx::assert_relative_eq!(
                    total,
                    brute(rows, columns, &score, 0, &mut vec![false; columns]),
                    epsilon = 1e-12
                );
            }
        }
    }
}
