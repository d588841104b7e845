//! Hard spectra: shapes to rounding on thousands of random vehicles and networks.

use proptest::prelude::*;
use ridemodes::nalgebra::{DMatrix, DVector};
use ridemodes::{Complex64, LinearSystem};
use serde_json::Value;

use crate::random::{ANY, DRY, NETWORK, cars};
use crate::support::{fixed, linear};

// ‖(λ²M + λC + K)ψ‖ against the size of its terms, every coordinate in its own unit; and what the rounding of K's
// sum explains of it. Poles are exact for the elements; K as summed has others, by δλ = ε ψᵀ|Z|ψ/ψᵀ(2λM + C)ψ. Where
// two stiff stores hold one flow between them that is more than the last digit.
fn residual(lin: &LinearSystem, pole: Complex64, psi: &DVector<Complex64>) -> (f64, f64) {
    let complex = |matrix: &DMatrix<f64>| matrix.map(Complex64::from);
    let z = complex(lin.mass()) * (pole * pole) + complex(lin.damping()) * pole + complex(lin.stiffness());
    let size = pole.norm();
    let unit = |i: usize| {
        let square = size * size * lin.mass()[(i, i)] + size * lin.damping()[(i, i)] + lin.stiffness()[(i, i)].abs();
        if square > 0.0 { square.sqrt() } else { 1.0 }
    };
    let force = z * psi;
    let force: f64 = (0..psi.len()).map(|i| (force[i] / unit(i)).norm_sqr()).sum::<f64>().sqrt();
    let motion: f64 = (0..psi.len()).map(|i| (psi[i] * unit(i)).norm_sqr()).sum::<f64>().sqrt();
    let turned = (complex(lin.mass()) * (pole * 2.0) + complex(lin.damping())) * psi;
    let slope = psi.dot(&turned).norm();
    let turned: f64 = (0..psi.len()).map(|i| (turned[i] / unit(i)).norm_sqr()).sum::<f64>().sqrt();
    (force / motion, f64::EPSILON * motion * motion / slope * turned / motion)
}

fn check(car: &Value) -> Result<(), TestCaseError> {
    let lin = linear(car);
    let modes = lin.modes().unwrap();
    for row in 0..modes.len() {
        let psi = DVector::from_iterator(modes.coordinates.len(), modes.shape.row(row).iter().copied());
        let (left, rounding) = residual(&lin, modes.pole[row], &psi);
        let allowed = 1e-12 + 64.0 * rounding;
        prop_assert!(left <= allowed, "{} at {}: {:e} of {:e}", modes.label[row], modes.pole[row], left, allowed);
    }
    Ok(())
}

proptest! {
    #![proptest_config(fixed(5000))]

    #[test]
    fn shapes_of_random_vehicles_are_exact(car in prop_oneof![9 => cars(ANY), 1 => cars(DRY)]) {
        check(&car)?;
    }

    #[test]
    fn shapes_of_random_networks_are_exact(car in cars(NETWORK)) {
        check(&car)?;
    }
}
