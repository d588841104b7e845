//! How a mode's energy splits over motions and elements.

use num_complex::Complex64;

use crate::axes::{MECHANICAL, MOTIONS};
use crate::system::{Element, LinearSystem};

// Kinetic energy of each coordinate, Re(ū_i (M u)_i): a cross term goes half to each.
fn by_coordinate(system: &LinearSystem, shape: &[Complex64]) -> Vec<f64> {
    let mass = system.mass();
    let momentum = |i: usize| -> Complex64 { shape.iter().enumerate().map(|(j, u)| u * mass[(i, j)]).sum() };
    (0..shape.len()).map(|i| (shape[i].conj() * momentum(i)).re).collect()
}

// Travel of an element, g·u.
fn travel(element: &Element, shape: &[Complex64]) -> Complex64 {
    element.row.iter().zip(shape).map(|(g, u)| u * *g).sum()
}

// Momentum of what is mechanical, over the mechanical coordinates.
fn momentum(system: &LinearSystem, shape: &[Complex64]) -> [Complex64; MECHANICAL] {
    let mut momentum = [Complex64::new(0.0, 0.0); MECHANICAL];
    for i in 0..3 {
        momentum[i] = (0..3).map(|j| shape[j] * system.body[i][j]).sum();
    }
    for element in system.elements().iter().filter(|element| !element.kind.is_hydraulic() && element.mass != 0.0) {
        let velocity = travel(element, shape) * element.mass;
        for (p, g) in momentum.iter_mut().zip(&element.row) {
            *p += velocity * *g;
        }
    }
    momentum
}

/// Scales a shape so that its component of most kinetic energy is 1 (of equal ones, the first).
pub(super) fn scale(system: &LinearSystem, shape: &mut [Complex64]) {
    let kinetic = by_coordinate(system, shape);
    let most = kinetic.iter().copied().fold(0.0, f64::max);
    let nearly = |i: &usize| kinetic[*i] >= most * (1.0 - 1e-9);
    let mut lead = (0..shape.len()).find(nearly).unwrap_or(0);
    if most <= 0.0 || shape[lead].norm() == 0.0 {
        // Nothing with mass moves.
        lead = (0..shape.len()).fold(0, |best, i| if shape[i].norm() > shape[best].norm() { i } else { best });
    }
    let unit = shape[lead];
    if unit.norm() > 0.0 {
        for u in shape.iter_mut() {
            *u /= unit;
        }
        shape[lead] = Complex64::new(1.0, 0.0);
    }
}

/// Shares of kinetic energy in body heave, pitch, roll, wheel heave, pitch, roll, warp and the oil,
/// Re(ā_i (M_a a)_i)/aᴴM_a a with a = Tᵀw/4 for the wheels; all to the oil where nothing with mass moves.
/// The energy of a line is the oil's, also where its flow follows from wheel travel alone.
pub(super) fn kinetic(system: &LinearSystem, shape: &[Complex64]) -> [f64; 8] {
    let momentum = momentum(system, shape);
    let energy = |u: Complex64, p: Complex64| (u.conj() * p).re;
    let mut share = [0.0; 8];
    for i in 0..3 {
        share[i] = energy(shape[i], momentum[i]);
    }
    for (i, pattern) in MOTIONS.iter().enumerate() {
        // w = T a, so the momentum that belongs to a is Tᵀ (M u)_w.
        let dot = |v: &[Complex64]| -> Complex64 { (0..4).map(|j| v[3 + j] * pattern[j]).sum() };
        share[3 + i] = energy(dot(shape) / 4.0, dot(&momentum));
    }
    share[7] = system
        .elements()
        .iter()
        .filter(|element| element.kind.is_hydraulic() && element.mass != 0.0)
        .map(|element| element.mass * travel(element, shape).norm_sqr())
        .sum();
    let total: f64 = share.iter().sum();
    if total > 0.0 && total.is_finite() {
        share.map(|part| part / total)
    } else {
        [0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 1.0]
    }
}

/// The same in heave, pitch, roll, warp and the oil.
pub(super) fn motions(share: &[f64; 8]) -> [f64; 5] {
    [share[0] + share[3], share[1] + share[4], share[2] + share[5], share[6], share[7]]
}

/// Shares of ψᴴ(s g gᵀ)ψ in their sum over all elements; zero where the sum is.
pub(super) fn elements(system: &LinearSystem, shape: &[Complex64], scalar: impl Fn(&Element) -> f64) -> Vec<f64> {
    let part = |element: &Element| {
        let s = scalar(element);
        if s == 0.0 {
            return 0.0;
        }
        s * travel(element, shape).norm_sqr()
    };
    let parts: Vec<f64> = system.elements().iter().map(part).collect();
    let total: f64 = parts.iter().sum();
    parts.into_iter().map(|part| if total > 0.0 { part / total } else { 0.0 }).collect()
}
