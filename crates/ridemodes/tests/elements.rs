//! The matrices as sums over the elements, and what conventional parts may and may not do.

use approx::assert_relative_eq;
use proptest::prelude::*;
use ridemodes::nalgebra::{DMatrix, Matrix3, SymmetricEigen};
use ridemodes::{Element, ElementKind, LinearSystem};
use serde_json::json;

use crate::random::{ANY, DRY, cars};
use crate::support::{assert_close, fixed, largest, linear, number, square_car};

fn sum(lin: &LinearSystem, scalar: impl Fn(&Element) -> f64) -> DMatrix<f64> {
    let n = lin.coordinates().len();
    let mut total = DMatrix::zeros(n, n);
    for element in lin.elements() {
        for i in 0..n {
            for j in 0..n {
                total[(i, j)] += scalar(element) * element.row[i] * element.row[j];
            }
        }
    }
    total
}

// Smallest eigenvalue of the matrix scaled to unit diagonal: metres and cubic metres differ by much.
fn least_scaled_eigenvalue(matrix: &DMatrix<f64>) -> f64 {
    let scale = |i: usize| if matrix[(i, i)] > 0.0 { matrix[(i, i)].sqrt() } else { 1.0 };
    let scaled = DMatrix::from_fn(matrix.nrows(), matrix.ncols(), |i, j| matrix[(i, j)] / (scale(i) * scale(j)));
    SymmetricEigen::new(scaled).eigenvalues.min()
}

proptest! {
    #![proptest_config(fixed(64))]

    #[test]
    fn matrices_are_symmetric_and_positive_semidefinite(car in cars(ANY)) {
        let lin = linear(&car);
        for matrix in [lin.mass(), lin.damping(), lin.stiffness()] {
            prop_assert_eq!(matrix, &matrix.transpose());
            prop_assert!(least_scaled_eigenvalue(matrix) > -1e-12);
        }
    }

    #[test]
    fn matrices_are_sums_over_elements(car in cars(ANY)) {
        let lin = linear(&car);
        assert_close(&sum(&lin, |element| element.damping), lin.damping(), 1e-14);
        assert_close(&sum(&lin, |element| element.stiffness), lin.stiffness(), 1e-14);
        // Mass: what is left is the body, [[m, 0, 0], [0, Iyy, −Pxy], [0, −Pxy, Ixx]].
        let rest = lin.mass() - sum(&lin, |element| element.mass);
        let body = &car["body"];
        let product = number(&body["roll_pitch_product"], 0.0);
        let [mass, roll, pitch] =
            ["mass", "roll_inertia", "pitch_inertia"].map(|name| body[name].as_f64().unwrap());
        let mut expected = DMatrix::zeros(rest.nrows(), rest.ncols());
        expected
            .view_mut((0, 0), (3, 3))
            .copy_from(&Matrix3::new(mass, 0.0, 0.0, 0.0, pitch, -product, 0.0, -product, roll));
        let scale = largest(lin.mass());
        prop_assert!(largest(&(rest - expected)) <= 1e-13 * scale);
    }

    // Springs, bars and dampers each act on one axle, and so cannot tell roll from warp or heave from pitch.
    #[test]
    fn one_axle_elements_hold_warp_as_roll(car in cars(DRY)) {
        let motions = linear(&car).motions().unwrap();
        for matrix in [&motions.stiffness.conventional, &motions.damping.conventional] {
            assert_relative_eq!(matrix[(2, 2)], matrix[(3, 3)], max_relative = 1e-13);
            assert_relative_eq!(matrix[(0, 0)], matrix[(1, 1)], max_relative = 1e-13);
        }
        prop_assert_eq!(motions.stiffness.oil, ridemodes::nalgebra::Matrix4::zeros());
        prop_assert_eq!(motions.stiffness.total, motions.stiffness.conventional);
    }
}

#[test]
fn an_element_acts_on_what_it_says() {
    let mut car = square_car();
    car["front"]["anti_roll_bar"] = json!({ "rate": 9000.0 });
    car["front"]["both"]["spring"]["motion_ratio"] = json!(0.8);
    let lin = linear(&car);
    let find = |name: &str| lin.elements().iter().find(|element| &*element.name == name).unwrap();
    // δ = w − (z − xθ + yφ) at x = 1.3, y = 0.75, over the spring MR δ
    let spring = find("front_left.spring");
    assert_eq!(spring.kind, ElementKind::Spring);
    let expected = [-0.8, 0.8 * 1.3, -0.8 * 0.75, 0.8, 0.0, 0.0, 0.0];
    for (g, e) in spring.row.iter().zip(expected) {
        assert_relative_eq!(*g, e, max_relative = 1e-15);
    }
    // The bar turns by (δ_left − δ_right)/track, so a roll of the body turns it by −φ.
    let bar = find("front.anti_roll_bar");
    for (g, e) in bar.row.iter().zip([0.0, 0.0, -1.0, 1.0 / 1.5, -1.0 / 1.5, 0.0, 0.0]) {
        approx::assert_abs_diff_eq!(*g, e, epsilon = 1e-15);
    }
    // 2 (t/2)² k MR² of the springs and the bar's own rate
    let motions = lin.motions().unwrap();
    assert_relative_eq!(motions.roll.front, 2.0 * 0.5625 * 0.64 * 22e3 + 9000.0, max_relative = 1e-14);
    assert_relative_eq!(motions.roll.rear, 2.0 * 0.5625 * 22e3, max_relative = 1e-14);
    let tyre = find("rear_right.tyre");
    assert_eq!((tyre.stiffness, tyre.row[6], tyre.road.unwrap().name()), (200e3, 1.0, "rear_right"));
}
