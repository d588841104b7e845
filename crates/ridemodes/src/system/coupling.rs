//! What wheel travel alone feels: the quasi-static limit and the dynamic coupling of the oil.

use nalgebra::{DMatrix, Matrix4};
use ndarray::Array3;
use num_complex::Complex64;

use super::canonical::scaled_cholesky;
use super::{Element, LinearSystem};
use crate::axes::MECHANICAL;
use crate::error::{Error, Result};

/// Volumes and inner coordinates per wheel travel at vanishing frequency, u_i = X δ.
///
/// In closed loops X is the one of least dissipation XᵀCX.
#[derive(Clone, Debug)]
pub(crate) struct QuasiStatic {
    /// [I₄; X]: travel and inner coordinates per wheel travel ((4 + inner) × 4).
    follow: DMatrix<f64>,
}

// The element's row over wheel travel and inner coordinates. The wheel columns of a row that acts
// between wheel and body are its row over the deflections.
fn inner_row(element: &Element) -> impl Iterator<Item = f64> + '_ {
    element.row[3..].iter().copied()
}

fn between_wheel_and_body(element: &&Element) -> bool {
    element.kind.is_hydraulic() || element.kind.is_conventional()
}

impl QuasiStatic {
    pub(crate) fn new(system: &LinearSystem) -> Result<Self> {
        let inner = system.coordinates.len() - MECHANICAL;
        let mut follow = DMatrix::zeros(4 + inner, 4);
        follow.fill_with_identity();
        if inner == 0 {
            return Ok(Self { follow });
        }
        let stiffness = sum(system, |element| element.stiffness);
        let damping = sum(system, |element| element.damping);
        // Coordinates of loops first become circulations, on which the stiffness vanishes.
        let loops: Vec<(usize, Vec<f64>)> =
            system.circulations.iter().map(|(free, shape)| (free - MECHANICAL, shape[MECHANICAL..].to_vec())).collect();
        let held: Vec<usize> = (0..inner).filter(|i| !loops.iter().any(|(free, _)| free == i)).collect();
        let block = |matrix: &DMatrix<f64>, rows: &[usize], columns: &[usize]| {
            DMatrix::from_fn(rows.len(), columns.len(), |i, j| matrix[(rows[i], columns[j])])
        };
        let held_rows: Vec<usize> = held.iter().map(|i| i + 4).collect();
        // K_hh X_h = −K_hδ
        if !held.is_empty() {
            let own = block(&stiffness, &held_rows, &held_rows);
            let factor = scaled_cholesky(&own).ok_or_else(|| Error::Singular {
                matrix: "stiffness of the oil volumes".into(),
                motion: "a volume that nothing holds".into(),
            })?;
            let solved = factor.solve(&block(&stiffness, &held_rows, &[0, 1, 2, 3]));
            for (row, &place) in held_rows.iter().enumerate() {
                for j in 0..4 {
                    follow[(place, j)] = -solved[(row, j)];
                }
            }
        }
        if !loops.is_empty() {
            // X + D y with (DᵀCD) y = −DᵀCX; a loop without resistance keeps the tree's volumes.
            let mut shapes = DMatrix::zeros(4 + inner, loops.len());
            for (column, (_, shape)) in loops.iter().enumerate() {
                for (i, &entry) in shape.iter().enumerate() {
                    shapes[(4 + i, column)] = entry;
                }
            }
            let own = shapes.transpose() * &damping * &shapes;
            if let Some(factor) = scaled_cholesky(&own) {
                let step = factor.solve(&(shapes.transpose() * &damping * &follow));
                follow -= &shapes * step;
            }
        }
        Ok(Self { follow })
    }

    /// Σ s (g [I; X])ᵀ(g [I; X]) over the elements that `part` takes.
    pub(crate) fn sum(
        &self,
        system: &LinearSystem,
        scalar: impl Fn(&Element) -> f64,
        part: impl Fn(&Element) -> bool,
    ) -> Matrix4<f64> {
        let mut total = Matrix4::zeros();
        for element in system.elements.iter().filter(between_wheel_and_body).filter(|element| part(element)) {
            let travel = self.row(element);
            for i in 0..4 {
                for j in 0..4 {
                    total[(i, j)] += scalar(element) * travel[i] * travel[j];
                }
            }
        }
        total
    }

    /// Travel of an element per wheel travel.
    pub(crate) fn row(&self, element: &Element) -> [f64; 4] {
        std::array::from_fn(|j| inner_row(element).enumerate().map(|(i, g)| g * self.follow[(i, j)]).sum())
    }
}

// Σ s g gᵀ over wheel travel and inner coordinates of what acts between wheel and body.
fn sum(system: &LinearSystem, scalar: impl Fn(&Element) -> f64) -> DMatrix<f64> {
    let size = system.coordinates.len() - 3;
    let mut total = DMatrix::zeros(size, size);
    for element in system.elements.iter().filter(between_wheel_and_body) {
        add(&mut total, element, scalar(element));
    }
    total
}

fn add(total: &mut DMatrix<f64>, element: &Element, scalar: f64) {
    if scalar == 0.0 {
        return;
    }
    for (i, a) in inner_row(element).enumerate().filter(|(_, a)| *a != 0.0) {
        for (j, b) in inner_row(element).enumerate() {
            total[(i, j)] += scalar * a * b;
        }
    }
}

impl LinearSystem {
    /// Quasi-static coupling of the oil at the wheels (4 × 4) [N/m], K_hyd(0): the limit of
    /// [`dynamic_coupling`](Self::dynamic_coupling) at vanishing frequency.
    pub fn coupling(&self) -> Result<Matrix4<f64>> {
        Ok(self.quasi_static()?.sum(self, |element| element.stiffness, |element| element.kind.is_hydraulic()))
    }

    /// Dynamic coupling of the oil at the wheels, D(j2πf) = K_hyd + j2πf C_hyd (4 × 4 × frequencies)
    /// [N/m], from the Schur complement of the line coordinates; `frequency` in Hz.
    pub fn dynamic_coupling(&self, frequency: &[f64]) -> Result<Array3<Complex64>> {
        let size = self.coordinates.len() - 3;
        let part = |scalar: fn(&Element) -> f64| {
            let mut total = DMatrix::zeros(size, size);
            for element in self.elements.iter().filter(|element| element.kind.is_hydraulic()) {
                add(&mut total, element, scalar(element));
            }
            total
        };
        let stiffness = part(|element| element.stiffness);
        let damping = part(|element| element.damping);
        let mass = part(|element| element.mass);
        // Inner coordinates of mechanical branches have no part in it.
        let volumes: Vec<usize> =
            (4..size).filter(|&i| self.elements.iter().any(|e| e.kind.is_hydraulic() && e.row[i + 3] != 0.0)).collect();
        let scale: Vec<f64> = (0..size)
            .map(|i| {
                let size = stiffness[(i, i)].max(damping[(i, i)]);
                if size > 0.0 { 1.0 / size.sqrt() } else { 1.0 }
            })
            .collect();
        let still = self.coupling()?;
        let mut result = Array3::zeros((4, 4, frequency.len()));
        for (place, &f) in frequency.iter().enumerate() {
            let s = Complex64::new(0.0, 2.0 * std::f64::consts::PI * f);
            let d = if f == 0.0 {
                still.map(Complex64::from)
            } else {
                let entry = |i: usize, j: usize| s * s * mass[(i, j)] + s * damping[(i, j)] + stiffness[(i, j)];
                let direct = Matrix4::from_fn(&entry);
                if volumes.is_empty() {
                    // Everything at the nodes: nothing flows that is not the wheels' own.
                    write(&mut result, place, &direct);
                    continue;
                }
                let inner = DMatrix::from_fn(volumes.len(), volumes.len(), |i, j| {
                    let (i, j) = (volumes[i], volumes[j]);
                    scale[i] * entry(i, j) * scale[j]
                });
                let across = DMatrix::from_fn(volumes.len(), 4, |i, j| scale[volumes[i]] * entry(volumes[i], j));
                let solved = inner.lu().solve(&across).ok_or_else(|| Error::Singular {
                    matrix: format!("dynamic stiffness of the oil at {f} Hz"),
                    motion: "an undamped resonance of the oil with the wheels held".into(),
                })?;
                // D = Z_δδ − Z_δv Z_vv⁻¹ Z_vδ
                direct - Matrix4::from_fn(|i, j| (across.transpose() * &solved)[(i, j)])
            };
            write(&mut result, place, &d);
        }
        Ok(result)
    }
}

fn write(result: &mut Array3<Complex64>, place: usize, matrix: &Matrix4<Complex64>) {
    for i in 0..4 {
        for j in 0..4 {
            result[(i, j, place)] = matrix[(i, j)];
        }
    }
}
