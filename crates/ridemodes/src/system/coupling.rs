//! What wheel travel alone feels: the quasi-static limit and the dynamic coupling of the oil.

use nalgebra::{DMatrix, DVector, Matrix4};
use ndarray::Array3;
use num_complex::Complex64;

use super::canonical::scaled_cholesky;
use super::{Element, LinearSystem};
use crate::axes::MECHANICAL;
use crate::error::{Error, Result};
use crate::numerics::Dual;

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
        // (N14) K_hh X_h = −K_hδ
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
        self.follow(inner_row(element))
    }

    /// A row over wheel travel and inner coordinates, per wheel travel.
    pub(crate) fn follow(&self, row: impl Iterator<Item = f64>) -> [f64; 4] {
        let mut total = [0.0; 4];
        for (i, g) in row.enumerate().filter(|(_, g)| *g != 0.0) {
            for (j, sum) in total.iter_mut().enumerate() {
                *sum += g * self.follow[(i, j)];
            }
        }
        total
    }

    /// dX of the inner coordinates (inner × 4); `None` where there are none.
    ///
    /// K_vv dX = −(dK_vδ + dK_vv X), and along each circulation d, where K_vv vanishes, the least dissipation
    /// dᵀC_vv dX = −dᵀ(dC_vδ + dC_vv X). Both at once: (K_vv + Σ α w wᵀ) dX with w = C_vv d has the same solution for
    /// any α, since dᵀK_vv = 0.
    pub(crate) fn derivative(&self, system: &LinearSystem, elements: &[Element<Dual>]) -> Option<DMatrix<f64>> {
        let inner = system.coordinates.len() - MECHANICAL;
        if inner == 0 {
            return None;
        }
        let block = |scalar: fn(&Element) -> f64| sum(system, scalar).view((4, 4), (inner, inner)).into_owned();
        let mut own = block(|element| element.stiffness);
        let damping = block(|element| element.damping);
        // d(Σ s g (g·[I; X])) at fixed X
        let change = |scalar: fn(&Element<Dual>) -> Dual| {
            let mut right = DMatrix::zeros(inner, 4);
            for element in elements.iter().filter(|e| e.kind.is_hydraulic() || e.kind.is_conventional()) {
                let travel = self.follow(element.row[3..].iter().map(|g| g.value));
                let turned = self.follow(element.row[3..].iter().map(|g| g.derivative));
                let s = scalar(element);
                for (i, g) in element.row[MECHANICAL..].iter().enumerate() {
                    for j in 0..4 {
                        right[(i, j)] += (s.derivative * g.value + s.value * g.derivative) * travel[j]
                            + s.value * g.value * turned[j];
                    }
                }
            }
            right
        };
        let mut right = change(|element| element.stiffness);
        if !system.circulations.is_empty() {
            let resisting = change(|element| element.damping);
            let largest = own.diagonal().amax();
            for (free, shape) in &system.circulations {
                let circulation = DVector::from_column_slice(&shape[MECHANICAL..]);
                let mut held = &damping * &circulation;
                let mut moved = circulation.transpose() * &resisting;
                if held.dot(&circulation) == 0.0 {
                    // Without resistance the tree's volumes are kept.
                    held = DVector::zeros(inner);
                    held[free - MECHANICAL] = 1.0;
                    moved.fill(0.0);
                }
                let weight = largest / held.amax().powi(2);
                own += &held * held.transpose() * weight;
                right += &held * moved * weight;
            }
        }
        scaled_cholesky(&own).map(|factor| -factor.solve(&right))
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
    /// Quasi-static coupling of the oil at the wheels (4 × 4) [N/m], K_hyd(0) of (N13): the limit of
    /// [`dynamic_coupling`](Self::dynamic_coupling) at vanishing frequency.
    ///
    /// Slow lines are shut.
    pub fn coupling(&self) -> Result<Matrix4<f64>> {
        let system = self.with_slow_lines_shut()?;
        Ok(system.quasi_static()?.sum(system, |element| element.stiffness, |element| element.kind.is_hydraulic()))
    }

    /// Dynamic coupling of the oil at the wheels, D(j2πf) = K_hyd + j2πf C_hyd (4 × 4 × frequencies)
    /// [N/m], from the Schur complement of the line coordinates; `frequency` in Hz. Slow lines are shut.
    ///
    /// # Errors
    /// [`Error::Singular`] at an undamped resonance of the oil.
    pub fn dynamic_coupling(&self, frequency: &[f64]) -> Result<Array3<Complex64>> {
        let oil = OilForm::new(self.with_slow_lines_shut()?)?;
        let mut result = Array3::zeros((4, 4, frequency.len()));
        for (place, &f) in frequency.iter().enumerate() {
            let d = oil.at(f)?;
            for i in 0..4 {
                for j in 0..4 {
                    result[(i, j, place)] = d[(i, j)];
                }
            }
        }
        Ok(result)
    }
}

/// The oil's M, C and K over wheel travel and volumes.
///
/// (N12) D = A_δδ − A_δv A_vv⁻¹ A_vδ with A = s²M + sC + K holds for volumes counted from any multiple of the
/// travel, v = X δ + w. From X = 0 the oil is held, from the quasi-static X it follows: the first loses
/// digits at low frequency, the second at high, so at each frequency the smaller A_δδ is taken.
struct OilForm {
    volumes: Vec<usize>,
    scale: Vec<f64>,
    /// M, C, K over [δ, v].
    full: [DMatrix<f64>; 3],
    held: Shifted,
    following: Shifted,
}

/// A_δδ and A_vδ as their parts in s², s and 1.
struct Shifted {
    travel: [Matrix4<f64>; 3],
    across: [DMatrix<f64>; 3],
}

impl Shifted {
    fn new(full: &[DMatrix<f64>; 3], volumes: &[usize], follow: &DMatrix<f64>) -> Self {
        let part = |matrix: &DMatrix<f64>| follow.transpose() * matrix * follow;
        Self {
            travel: [0, 1, 2].map(|power| Matrix4::from_fn(|i, j| part(&full[power])[(i, j)])),
            across: [0, 1, 2].map(|power| (&full[power] * follow).select_rows(volumes)),
        }
    }

    fn travel(&self, s: Complex64) -> Matrix4<Complex64> {
        Matrix4::from_fn(|i, j| polynomial(s, [0, 1, 2].map(|power| self.travel[power][(i, j)])))
    }
}

fn polynomial(s: Complex64, [square, linear, constant]: [f64; 3]) -> Complex64 {
    // A part that is not there stays out even where s² is beyond the range of numbers.
    let term = |power: Complex64, factor: f64| if factor == 0.0 { Complex64::from(0.0) } else { power * factor };
    term(s * s, square) + term(s, linear) + constant
}

impl OilForm {
    fn new(system: &LinearSystem) -> Result<Self> {
        let size = system.coordinates.len() - 3;
        let mut full = [(); 3].map(|()| DMatrix::zeros(size, size));
        for element in system.elements.iter().filter(|element| element.kind.is_hydraulic()) {
            for (total, scalar) in full.iter_mut().zip([element.mass, element.damping, element.stiffness]) {
                add(total, element, scalar);
            }
        }
        // Inner coordinates of mechanical branches have no part in it.
        let volumes: Vec<usize> = (4..size).filter(|&i| full.iter().any(|total| total[(i, i)] > 0.0)).collect();
        let scale = volumes
            .iter()
            .map(|&i| {
                let size = full[2][(i, i)].max(full[1][(i, i)]);
                if size > 0.0 { 1.0 / size.sqrt() } else { 1.0 }
            })
            .collect();
        let mut held = DMatrix::zeros(size, 4);
        held.fill_with_identity();
        let still = system.quasi_static()?;
        let mut following = Shifted::new(&full, &volumes, &still.follow);
        // K_vδ + K_vv X = 0 by the choice of X, and the rest from the elements, both without rounding.
        following.across[2].fill(0.0);
        let of = |scalar: fn(&Element) -> f64| still.sum(system, scalar, |element| element.kind.is_hydraulic());
        following.travel = [of(|e| e.mass), of(|e| e.damping), of(|e| e.stiffness)];
        let held = Shifted::new(&full, &volumes, &held);
        Ok(Self { volumes, scale, full, held, following })
    }

    fn at(&self, f: f64) -> Result<Matrix4<Complex64>> {
        let s = Complex64::new(0.0, 2.0 * std::f64::consts::PI * f);
        if f == 0.0 || self.volumes.is_empty() {
            return Ok(self.following.travel(s));
        }
        let largest = |matrix: &Matrix4<Complex64>| matrix.iter().fold(0.0_f64, |most, entry| most.max(entry.norm()));
        let (held, following) = (self.held.travel(s), self.following.travel(s));
        let (travel, shifted) =
            if largest(&following) < largest(&held) { (following, &self.following) } else { (held, &self.held) };
        let count = self.volumes.len();
        let inner = DMatrix::from_fn(count, count, |i, j| {
            let (row, column) = (self.volumes[i], self.volumes[j]);
            polynomial(s, [0, 1, 2].map(|power| self.full[power][(row, column)])) * self.scale[i] * self.scale[j]
        });
        let across = DMatrix::from_fn(count, 4, |i, j| {
            polynomial(s, [0, 1, 2].map(|power| shifted.across[power][(i, j)])) * self.scale[i]
        });
        let solved = inner.lu().solve(&across).ok_or_else(|| Error::Singular {
            matrix: format!("dynamic stiffness of the oil at {f} Hz"),
            motion: "an undamped resonance of the oil with the wheels held".into(),
        })?;
        let taken = across.transpose() * solved;
        let d = Matrix4::from_fn(|i, j| travel[(i, j)] - taken[(i, j)]);
        if !d.iter().all(|entry| entry.is_finite()) {
            return Err(Error::Singular {
                matrix: format!("dynamic stiffness of the oil at {f:e} Hz"),
                motion: "the frequency is beyond the range of numbers".into(),
            });
        }
        // D is symmetric; rounding is not.
        Ok((d + d.transpose()) * Complex64::from(0.5))
    }
}
