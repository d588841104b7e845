//! Hard spectra: shapes to rounding on thousands of random vehicles and networks.

use approx::assert_relative_eq;
use proptest::prelude::*;
use ridemodes::nalgebra::{DMatrix, DVector};
use ridemodes::{Complex64, LinearSystem, ModeKind, SHARE_NAMES};
use serde_json::{Value, json};

use crate::random::{ANY, DRY, NETWORK, cars};
use crate::support::{fixed, linear, set, singular, square_car};

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

// One of the tyres has no rate: the wheel hangs on its spring, the body stands on the other three.
#[test]
fn a_wheel_off_its_tyre() {
    let mut car = square_car();
    let both = car["front"]["both"].clone();
    car["front"] = json!({ "distance": 1.3, "track": 1.5, "left": both, "right": both });
    set(&mut car, "front.left.tyre.rate", 0.0);
    let lin = linear(&car);
    for kind in [ModeKind::Undamped, ModeKind::Damped] {
        let modes = lin.modes_of(kind).unwrap();
        let mut labels = modes.label.clone();
        labels.sort();
        let mut expected: Vec<&str> = SHARE_NAMES[..7].to_vec();
        expected.sort_unstable();
        assert_eq!(labels, expected);
        // Σω² = tr M⁻¹K of the undamped, Σλ = −tr M⁻¹C of the damped, Π|λ|² = det K/det M of both.
        let inverse = lin.mass().clone().try_inverse().unwrap();
        let product: f64 = modes.pole.iter().map(|pole| pole.norm_sqr()).product();
        let determinant = lin.stiffness().determinant() / lin.mass().determinant();
        assert_relative_eq!(product, determinant, max_relative = 1e-9);
        if kind == ModeKind::Undamped {
            let sum: f64 = modes.pole.iter().map(|pole| pole.norm_sqr()).sum();
            assert_relative_eq!(sum, (&inverse * lin.stiffness()).trace(), max_relative = 1e-12);
        } else {
            let sum: f64 = modes.pole.iter().map(|pole| 2.0 * pole.re).sum();
            assert_relative_eq!(sum, -(&inverse * lin.damping()).trace(), max_relative = 1e-12);
        }
    }
    // The road under it does nothing; one wheel more and the body tips over.
    let ground = lin.motions().unwrap().at_ground;
    assert!((0..4).all(|i| ground[(0, i)].abs() <= 1e-9 && ground[(i, 0)].abs() <= 1e-9));
    assert!(lin.point().warnings.iter().any(|warning| warning.contains("front_left: the tyre has no rate")));
    set(&mut car, "front.right.tyre.rate", 0.0);
    let free = singular(linear(&car).modes());
    assert!(free.contains("is free"), "{free}");
}

// Everything overdamped: fourteen real poles, each of the seven labels twice.
#[test]
fn a_purely_real_spectrum() {
    let mut car = square_car();
    for axle in ["front", "rear"] {
        set(&mut car, &format!("{axle}.both.damper.coefficient"), 4e4);
        set(&mut car, &format!("{axle}.both.tyre.damping"), 4e4);
    }
    let modes = linear(&car).modes().unwrap();
    assert_eq!(modes.len(), 14);
    assert!(modes.pole.iter().all(|pole| pole.im == 0.0 && pole.re < 0.0));
    assert!(modes.damping_ratio.iter().all(|&ratio| ratio == 1.0));
    for label in &SHARE_NAMES[..7] {
        assert_eq!(modes.rows(label).len(), 2, "{label}: {:?}", modes.label);
    }
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
