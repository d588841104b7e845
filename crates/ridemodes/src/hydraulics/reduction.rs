//! Which line volumes remain as coordinates.
//!
//! Ideal pipes merge their nodes; a node without compliance ties the volumes of its lines, which
//! removes one of them; what then circulates without storing anything is found. All of it is done on
//! the incidence of the graph, with entries −1, 0, +1, so it is exact and has no derivative.

use super::chamber::Chamber;
use super::network::Network;
use crate::error::{Error, Result};

/// A quantity as a sum over kept line volumes and chamber volumes.
#[derive(Clone, Debug, Default)]
pub(crate) struct Row {
    /// Coefficient of each kept line's volume.
    pub lines: Vec<f64>,
    /// Coefficient of each chamber's volume.
    pub chambers: Vec<(Chamber, f64)>,
}

/// Nodes that ideal pipes have made one.
#[derive(Clone, Debug)]
pub(crate) struct Pool {
    pub nodes: Vec<usize>,
    /// Volume that has flowed in.
    pub inflow: Row,
}

/// The network in its remaining coordinates.
#[derive(Clone, Debug, Default)]
pub(crate) struct Reduction {
    /// Line of each remaining coordinate, ordered by name.
    pub kept: Vec<usize>,
    /// Pools that have compliance.
    pub pools: Vec<Pool>,
    /// Volume moved through each line that is no ideal pipe.
    pub moved: Vec<(usize, Row)>,
    /// Circulations in closed loops: the coordinate that stands for it, and its shape.
    pub circulations: Vec<(usize, Vec<f64>)>,
}

/// Reduces the network. `open`, `ideal` and `inertial` say it of each line, `compliant` of each node,
/// `area` gives a chamber's signed area at the wheel.
pub(crate) fn reduce(
    network: &Network,
    open: &[bool],
    ideal: &[bool],
    inertial: &[bool],
    compliant: &[bool],
    area: impl Fn(Chamber) -> f64,
) -> Result<Reduction> {
    let pool_of = network.regions(|line| open[line] && ideal[line]);
    let pools: Vec<Vec<usize>> = {
        let count = pool_of.iter().max().map_or(0, |last| last + 1);
        let mut pools = vec![Vec::new(); count];
        for (node, &pool) in pool_of.iter().enumerate() {
            pools[pool].push(node);
        }
        pools
    };
    let lines: Vec<usize> = (0..network.lines.len()).filter(|&line| open[line] && !ideal[line]).collect();
    let chambers: Vec<(Chamber, usize)> = network
        .nodes
        .iter()
        .enumerate()
        .flat_map(|(node, data)| data.chambers.iter().map(move |&chamber| (chamber, node)))
        .collect();
    // (N1, N3) inflow of each pool over [lines | chambers]: −1 where a line leaves, +1 where it arrives.
    let width = lines.len() + chambers.len();
    let inflow: Vec<Vec<f64>> = (0..pools.len())
        .map(|pool| {
            let mut row = vec![0.0; width];
            for (column, &line) in lines.iter().enumerate() {
                row[column] -= f64::from(pool_of[network.lines[line].from] == pool);
                row[column] += f64::from(pool_of[network.lines[line].to] == pool);
            }
            for (column, &(_, node)) in chambers.iter().enumerate() {
                row[lines.len() + column] = f64::from(pool_of[node] == pool);
            }
            row
        })
        .collect();
    let is_compliant = |pool: usize| pools[pool].iter().any(|&node| compliant[node]);
    // (N9) volume balance of the pools without compliance, solved for as many line volumes.
    let mut balance: Vec<Vec<f64>> =
        (0..pools.len()).filter(|&pool| !is_compliant(pool)).map(|pool| inflow[pool].clone()).collect();
    let mut order: Vec<usize> = (0..lines.len()).collect();
    order.sort_by_key(|&column| inertial[lines[column]]);
    let pivots = eliminate(&mut balance, &order);
    for row in &balance[pivots.len()..] {
        refuse_locked(&row[lines.len()..], &chambers, &area, network)?;
    }
    let mut kept_columns: Vec<usize> =
        (0..lines.len()).filter(|column| !pivots.iter().any(|(_, pivot)| pivot == column)).collect();
    kept_columns.sort_by(|&a, &b| network.lines[lines[a]].name.cmp(&network.lines[lines[b]].name));
    let row = |full: &[f64]| {
        let mut full = full.to_vec();
        for &(r, column) in &pivots {
            let factor = full[column];
            if factor != 0.0 {
                for (entry, solved) in full.iter_mut().zip(&balance[r]) {
                    *entry -= factor * solved;
                }
            }
        }
        Row {
            lines: kept_columns.iter().map(|&column| full[column]).collect(),
            chambers: chambers
                .iter()
                .zip(&full[lines.len()..])
                .filter(|(_, coefficient)| **coefficient != 0.0)
                .map(|(&(chamber, _), &coefficient)| (chamber, coefficient))
                .collect(),
        }
    };
    let moved = lines
        .iter()
        .enumerate()
        .map(|(column, &line)| {
            let mut unit = vec![0.0; width];
            unit[column] = 1.0;
            (line, row(&unit))
        })
        .collect();
    let reduced: Vec<Pool> = (0..pools.len())
        .filter(|&pool| is_compliant(pool))
        .map(|pool| Pool { nodes: pools[pool].clone(), inflow: row(&inflow[pool]) })
        .collect();
    let kept: Vec<usize> = kept_columns.iter().map(|&column| lines[column]).collect();
    let circulations = circulations(&reduced, &kept, inertial);
    Ok(Reduction { kept, pools: reduced, moved, circulations })
}

// Gauss–Jordan elimination with pivots in the given columns, the pivot rows first. On an incidence
// matrix every entry stays −1, 0 or +1.
fn eliminate(rows: &mut [Vec<f64>], columns: &[usize]) -> Vec<(usize, usize)> {
    let mut pivots = Vec::new();
    for &column in columns {
        let next = pivots.len();
        let Some(found) = (next..rows.len()).find(|&row| rows[row][column].abs() > 0.5) else { continue };
        rows.swap(next, found);
        let pivot = rows[next].clone();
        let scale = 1.0 / pivot[column];
        for (row, entries) in rows.iter_mut().enumerate() {
            let factor = if row == next { 1.0 - scale } else { entries[column] * scale };
            if factor != 0.0 {
                for (entry, value) in entries.iter_mut().zip(&pivot) {
                    *entry -= factor * value;
                }
            }
        }
        pivots.push((next, column));
    }
    pivots
}

// A balance without a line says that chamber volumes alone must cancel.
fn refuse_locked(
    coefficients: &[f64],
    chambers: &[(Chamber, usize)],
    area: &impl Fn(Chamber) -> f64,
    network: &Network,
) -> Result<()> {
    for (&(chamber, node), &own) in chambers.iter().zip(coefficients) {
        let at_corner: f64 = chambers
            .iter()
            .zip(coefficients)
            .filter(|((other, _), _)| other.corner == chamber.corner)
            .map(|(&(other, _), &coefficient)| coefficient * area(other))
            .sum();
        if own != 0.0 && at_corner != 0.0 {
            return Err(Error::Singular {
                matrix: format!("compliance of {}", network.circuits[network.nodes[node].circuit]),
                motion: format!(
                    "incompressible oil with nowhere to go locks the chamber {}_{}; give it an accumulator above its \
                     precharge, or the oil a bulk modulus and a volume",
                    chamber.corner.name(),
                    if chamber.bump { "bump" } else { "rebound" }
                ),
            });
        }
    }
    Ok(())
}

// (N10) null vectors of the pools' inflow over the kept lines: a spanning forest that takes lines without
// inertance first, and one circulation for each line left over.
fn circulations(pools: &[Pool], kept: &[usize], inertial: &[bool]) -> Vec<(usize, Vec<f64>)> {
    let mut rows: Vec<Vec<f64>> = pools.iter().map(|pool| pool.inflow.lines.clone()).collect();
    let mut order: Vec<usize> = (0..kept.len()).collect();
    order.sort_by_key(|&column| inertial[kept[column]]);
    let pivots = eliminate(&mut rows, &order);
    (0..kept.len())
        .filter(|column| !pivots.iter().any(|(_, pivot)| pivot == column))
        .map(|free| {
            let mut shape = vec![0.0; kept.len()];
            shape[free] = 1.0;
            for &(row, pivot) in &pivots {
                shape[pivot] = -rows[row][free];
            }
            (free, shape)
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::eliminate;

    #[test]
    fn elimination_solves_for_its_columns() {
        let mut rows = vec![vec![-1.0, 1.0, 0.0, 2.0], vec![1.0, 0.0, 1.0, 3.0], vec![0.0, 1.0, 1.0, 5.0]];
        let pivots = eliminate(&mut rows, &[0, 1, 2]);
        assert_eq!(pivots, [(0, 0), (1, 1)]);
        assert_eq!(rows[0], [1.0, 0.0, 1.0, 3.0]);
        assert_eq!(rows[1], [0.0, 1.0, 1.0, 5.0]);
        assert_eq!(rows[2], [0.0, 0.0, 0.0, 0.0]);
    }
}
