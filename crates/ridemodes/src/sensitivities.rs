//! What each number of the vehicle does to the modes, the four motions and the coupling.
//!
//! The assembly is run once for each number with its dual seed, which gives dm, dc, dk and dg of every element;
//! everything else is contracted with these. No finite differences.

use nalgebra::{DMatrix, Matrix4, Vector4};
use ndarray::{Array2, Array3};
use num_complex::Complex64;
use serde::{Deserialize, Serialize};

use crate::corner_motions::in_motions;
use crate::error::Result;
use crate::modes::Modes;
use crate::numerics::{Dual, Scalar};
use crate::system::{Assembly, Element, LinearSystem, QuasiStatic, SlowLines, assemble};

/// Derivatives with respect to every number of the vehicle.
///
/// A number whose change would alter which coordinates there are (a throttle of zero, an accumulator at its
/// precharge) has no derivative and is listed in `excluded`; its entries are NaN. So are those of modes that are
/// `repeated`: of equal poles only the sum has a gradient.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct Sensitivities {
    /// Paths of the numbers.
    pub paths: Vec<String>,
    /// Values of the numbers [SI].
    pub values: Vec<f64>,
    /// Units of the numbers.
    pub units: Vec<String>,
    /// Paths without a derivative.
    pub excluded: Vec<String>,
    /// The damped modes that are differentiated.
    pub modes: Modes,
    /// Whether a mode's pole is equal to another's, or defective.
    pub repeated: Vec<bool>,
    /// d frequency (modes × paths) [Hz per unit].
    pub frequency: Array2<f64>,
    /// d damping ratio (modes × paths) [1 per unit].
    pub damping_ratio: Array2<f64>,
    /// Stiffness of the four motions (4 × 4) [N/m].
    pub stiffness_value: Matrix4<f64>,
    /// Damping of the four motions (4 × 4) [N·s/m].
    pub damping_value: Matrix4<f64>,
    /// Coupling of the oil at the wheels (4 × 4) [N/m].
    pub coupling_value: Matrix4<f64>,
    /// d stiffness of the four motions (4 × 4 × paths) [N/m per unit].
    pub stiffness: Array3<f64>,
    /// d damping of the four motions (4 × 4 × paths) [N·s/m per unit].
    pub damping: Array3<f64>,
    /// d coupling (4 × 4 × paths) [N/m per unit].
    pub coupling: Array3<f64>,
}

/// Poles nearer to each other than this share of their size count as equal.
const EQUAL: f64 = 1e-7;

impl LinearSystem {
    /// Derivatives of frequencies, damping ratios, four-motion tables and coupling by every number of the vehicle.
    ///
    /// # Errors
    /// As [`modes`](Self::modes) and [`motions`](Self::motions).
    pub fn sensitivities(&self) -> Result<Sensitivities> {
        // A fault has changed what the numbers are.
        let vehicle = &self.point().car;
        let payload = &self.point().condition.payload;
        let structure = vehicle.structure();
        let numbers = vehicle.numbers();
        let modes = self.modes()?;
        let motions = self.motions()?;
        let shut = self.with_slow_lines_shut()?;
        let still = shut.quasi_static()?;
        let slopes: Vec<Complex64> = (0..modes.len()).map(|row| slope(self, &modes, row)).collect();
        let repeated: Vec<bool> = (0..modes.len()).map(|row| is_repeated(&modes, row, slopes[row])).collect();
        let parameters = vehicle.parameters();
        let count = parameters.len();
        let mut result = Sensitivities {
            paths: parameters.iter().map(|parameter| parameter.path.clone()).collect(),
            values: parameters.iter().map(|parameter| parameter.value).collect(),
            units: parameters.iter().map(|parameter| parameter.unit.to_owned()).collect(),
            excluded: Vec::new(),
            frequency: Array2::from_elem((modes.len(), count), f64::NAN),
            damping_ratio: Array2::from_elem((modes.len(), count), f64::NAN),
            stiffness_value: motions.stiffness.total,
            damping_value: motions.damping.total,
            coupling_value: self.coupling()?,
            stiffness: Array3::from_elem((4, 4, count), f64::NAN),
            damping: Array3::from_elem((4, 4, count), f64::NAN),
            coupling: Array3::from_elem((4, 4, count), f64::NAN),
            repeated,
            modes,
        };
        let mut seeded: Vec<Dual> = numbers.iter().map(|&number| Dual::constant(number)).collect();
        for (place, parameter) in parameters.iter().enumerate() {
            let Some(&slot) = structure.readable.get(&parameter.path) else { continue };
            if structure.decides_structure(slot, numbers) {
                result.excluded.push(parameter.path.clone());
                continue;
            }
            seeded[slot] = Dual::variable(numbers[slot]);
            let at = self.point().at(&seeded);
            let assemble = |slow| assemble(structure, &seeded, &at, payload, slow, self.has_gravity());
            let change = assemble(SlowLines::Flow)?;
            result.differentiate_modes(place, &change, &slopes);
            if std::ptr::eq(shut, self) {
                result.differentiate_motions(place, &change, self, still);
            } else {
                let change = assemble(SlowLines::Shut)?;
                result.differentiate_motions(place, &change, shut, still);
            }
            seeded[slot] = Dual::constant(numbers[slot]);
        }
        Ok(result)
    }
}

// ψᵀ(2λM + C)ψ
fn slope(system: &LinearSystem, modes: &Modes, row: usize) -> Complex64 {
    let pole = modes.pole[row];
    let shape = modes.shape.row(row);
    let form = |matrix: &DMatrix<f64>| -> Complex64 {
        let mut total = Complex64::new(0.0, 0.0);
        for (i, a) in shape.iter().enumerate() {
            for (j, b) in shape.iter().enumerate() {
                total += a * b * matrix[(i, j)];
            }
        }
        total
    };
    pole * 2.0 * form(system.mass()) + form(system.damping())
}

fn is_repeated(modes: &Modes, row: usize, slope: Complex64) -> bool {
    let pole = modes.pole[row];
    let near = |other: Complex64| (pole - other).norm() <= EQUAL * pole.norm();
    // A pole next to its own conjugate is a pair about to turn real.
    slope.norm() == 0.0
        || (pole.im != 0.0 && near(pole.conj()))
        || modes.pole.iter().enumerate().any(|(other, &value)| other != row && near(value))
}

fn travel(element: &Element<Dual>, shape: ndarray::ArrayView1<'_, Complex64>) -> (Complex64, Complex64) {
    let mut sums = (Complex64::new(0.0, 0.0), Complex64::new(0.0, 0.0));
    for (g, u) in element.row.iter().zip(shape) {
        sums.0 += u * g.value;
        sums.1 += u * g.derivative;
    }
    sums
}

impl Sensitivities {
    // dλ = −ψᵀ(λ² dM + λ dC + dK)ψ / ψᵀ(2λM + C)ψ; the matrices are symmetric, so left vectors are right vectors,
    // transposed and not conjugated.
    fn differentiate_modes(&mut self, place: usize, change: &Assembly<Dual>, slopes: &[Complex64]) {
        for row in 0..self.modes.len() {
            if self.repeated[row] {
                continue;
            }
            let pole = self.modes.pole[row];
            let shape = self.modes.shape.row(row);
            let mut value = Complex64::new(0.0, 0.0);
            for i in 0..3 {
                for j in 0..3 {
                    value += pole * pole * change.body[i][j].derivative * shape[i] * shape[j];
                }
            }
            for element in &change.elements {
                let at = |mass: f64, damping: f64, stiffness: f64| pole * (pole * mass + damping) + stiffness;
                let (own, turned) = travel(element, shape);
                let (m, c, k) = (element.mass, element.damping, element.stiffness);
                value += at(m.derivative, c.derivative, k.derivative) * own * own;
                if turned != Complex64::new(0.0, 0.0) {
                    value += at(m.value, c.value, k.value) * own * turned * 2.0;
                }
            }
            let step = -value / slopes[row];
            // d|λ| = Re(λ̄ dλ)/|λ|, dζ = −(Re dλ + ζ d|λ|)/|λ|
            let size = pole.norm();
            let growth = (pole.conj() * step).re / size;
            self.frequency[(row, place)] = growth / (2.0 * std::f64::consts::PI);
            self.damping_ratio[(row, place)] = -(step.re + self.modes.damping_ratio[row] * growth) / size;
        }
    }

    // K = Σ k r rᵀ and C = Σ c r rᵀ with r = g [I; X]. X minimises the energy, so it does not move K to first order;
    // for C its change follows from K_hh dX = −(dK_hδ + dK_hh X).
    fn differentiate_motions(
        &mut self,
        place: usize,
        change: &Assembly<Dual>,
        system: &LinearSystem,
        still: &QuasiStatic,
    ) {
        let turned = still.derivative(system, &change.elements);
        let mut stiffness = Matrix4::zeros();
        let mut damping = Matrix4::zeros();
        let mut coupling = Matrix4::zeros();
        for element in
            change.elements.iter().filter(|element| element.kind.is_hydraulic() || element.kind.is_conventional())
        {
            let value = |g: &Dual| g.value;
            let derivative = |g: &Dual| g.derivative;
            let row = Vector4::from(still.follow(element.row[3..].iter().map(value)));
            let own = Vector4::from(still.follow(element.row[3..].iter().map(derivative)));
            let moved = turned.as_ref().map_or(Vector4::zeros(), |turned| {
                Vector4::from_fn(|j, _| {
                    element.row[7..].iter().enumerate().map(|(i, g)| g.value * turned[(i, j)]).sum()
                })
            });
            let outer = |s: Dual, step: Vector4<f64>| {
                row * row.transpose() * s.derivative + (row * step.transpose() + step * row.transpose()) * s.value
            };
            let part = outer(element.stiffness, own);
            stiffness += part;
            if element.kind.is_hydraulic() {
                coupling += part;
            }
            damping += outer(element.damping, own + moved);
        }
        let (stiffness, damping) = (in_motions(&stiffness), in_motions(&damping));
        for i in 0..4 {
            for j in 0..4 {
                self.stiffness[(i, j, place)] = stiffness[(i, j)];
                self.damping[(i, j, place)] = damping[(i, j)];
                self.coupling[(i, j, place)] = coupling[(i, j)];
            }
        }
    }

    /// Relative derivative of a frequency, per cent per per cent (modes × paths).
    pub fn relative_frequency(&self) -> Array2<f64> {
        self.relative(&self.frequency, &self.modes.frequency)
    }

    /// Relative derivative of a damping ratio, per cent per per cent (modes × paths).
    pub fn relative_damping_ratio(&self) -> Array2<f64> {
        self.relative(&self.damping_ratio, &self.modes.damping_ratio)
    }

    fn relative(&self, derivative: &Array2<f64>, value: &[f64]) -> Array2<f64> {
        Array2::from_shape_fn(derivative.dim(), |(row, path)| {
            if value[row] == 0.0 { f64::NAN } else { derivative[(row, path)] * self.values[path] / value[row] }
        })
    }
}
