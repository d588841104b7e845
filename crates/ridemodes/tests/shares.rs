//! Shapes, shares and labels of damped modes.

use proptest::prelude::*;
use ridemodes::nalgebra::{DMatrix, DVector};
use ridemodes::{Complex64, LinearSystem, ModeKind, Modes, SHARE_NAMES, Vehicle};

use crate::random::{ANY, DRY, cars};
use crate::support::{fixed, linear, of};

fn shape(modes: &Modes, row: usize) -> DVector<Complex64> {
    DVector::from_iterator(modes.coordinates.len(), modes.shape.row(row).iter().copied())
}

fn complex(matrix: &DMatrix<f64>) -> DMatrix<Complex64> {
    matrix.map(Complex64::from)
}

// ψᴴ A ψ of a symmetric matrix, which is real.
fn form(psi: &DVector<Complex64>, matrix: &DMatrix<f64>) -> f64 {
    psi.dotc(&(complex(matrix) * psi)).re
}

// ‖(λ²M + λC + K)ψ‖ against the size of its terms, every coordinate in its own unit.
fn residual(lin: &LinearSystem, pole: Complex64, psi: &DVector<Complex64>) -> f64 {
    let z = complex(lin.mass()) * (pole * pole) + complex(lin.damping()) * pole + complex(lin.stiffness());
    let size = pole.norm();
    let unit = DVector::from_fn(psi.len(), |i, _| {
        (size * size * lin.mass()[(i, i)] + size * lin.damping()[(i, i)] + lin.stiffness()[(i, i)]).sqrt()
    });
    let force = z * psi;
    let force: f64 = force.iter().zip(&unit).map(|(f, u)| (f / *u).norm_sqr()).sum::<f64>().sqrt();
    let motion: f64 = psi.iter().zip(&unit).map(|(x, u)| (x * *u).norm_sqr()).sum::<f64>().sqrt();
    force / motion
}

// Rounding of a pole is that of the fastest: a short line between stiff nodes relaxes at 1e9 rad/s. In ψᴴKψ the
// strain of stiff oil is a difference of volumes, small against both: it rounds as the square of its frequency.
fn rounding(modes: &Modes, row: usize) -> f64 {
    let most = |part: fn(&Complex64) -> f64| modes.pole.iter().map(part).fold(0.0, f64::max) / modes.pole[row].norm();
    let (fastest, stiffest) = (most(|pole| pole.norm()), most(|pole| pole.im));
    1e-9 + f64::EPSILON * (1024.0 * fastest + 16.0 * stiffest * stiffest)
}

fn check_shapes(lin: &LinearSystem, modes: &Modes) -> Result<(), TestCaseError> {
    for row in 0..modes.len() {
        let (pole, psi) = (modes.pole[row], shape(modes, row));
        let left = residual(lin, pole, &psi);
        prop_assert!(left <= 1e-11, "{} at {}: {:e}", modes.label[row], pole, left);
        if pole.im == 0.0 {
            continue;
        }
        // |λ|² = ψᴴKψ/ψᴴMψ and 2ζ|λ| = ψᴴCψ/ψᴴMψ
        let [m, c, k] = [lin.mass(), lin.damping(), lin.stiffness()].map(|matrix| form(&psi, matrix));
        let (size, zeta) = (pole.norm(), modes.damping_ratio[row]);
        let allowed = rounding(modes, row);
        prop_assert!(((k / m).sqrt() / size - 1.0).abs() <= allowed, "{} {} {:e}", pole, k / m, allowed);
        prop_assert!((c / m / (2.0 * size) - zeta).abs() <= allowed, "{} {} {:e}", pole, c / m, allowed);
    }
    Ok(())
}

fn check_sums(modes: &Modes) -> Result<(), TestCaseError> {
    for row in 0..modes.len() {
        for (name, share) in [("kinetic", &modes.share), ("motions", &modes.motion_share), ("strain", &modes.strain)] {
            let sum: f64 = share.row(row).sum();
            prop_assert!((sum - 1.0).abs() <= 1e-10, "{} {} {}", modes.label[row], name, sum);
        }
        let dissipation: f64 = modes.dissipation.row(row).sum();
        let expected = if modes.kind == ModeKind::Damped { 1.0 } else { 0.0 };
        prop_assert!((dissipation - expected).abs() <= 1e-10);
        let [z, pitch, roll, heave, wheel_pitch, wheel_roll, warp, oil] =
            std::array::from_fn(|j| modes.share[(row, j)]);
        let motions = [z + heave, pitch + wheel_pitch, roll + wheel_roll, warp, oil];
        prop_assert!(motions.iter().zip(modes.motion_share.row(row)).all(|(a, b)| (a - b).abs() <= 1e-12));
    }
    Ok(())
}

// Each of the seven names once, or twice on two real poles; what is left is oil or relaxation, numbered.
fn check_labels(modes: &Modes) -> Result<(), TestCaseError> {
    let mut named = 0;
    for name in &SHARE_NAMES[..7] {
        let rows = modes.rows(name);
        named += rows.len();
        let real = rows.iter().filter(|&&row| modes.pole[row].im == 0.0).count();
        prop_assert!(matches!((rows.len(), real), (1, 0) | (2, 2)), "{} {:?}", name, modes.label);
    }
    for (family, oscillates) in [("oil", true), ("relaxation", false)] {
        let mut count = 0;
        for row in (0..modes.len()).filter(|&row| modes.label[row].starts_with(family)) {
            count += 1;
            prop_assert_eq!(&modes.label[row], &format!("{family} {count}"));
            prop_assert_eq!(modes.pole[row].im > 0.0, oscillates);
        }
        named += count;
    }
    prop_assert_eq!(named, modes.len());
    Ok(())
}

proptest! {
    #![proptest_config(fixed(96))]

    #[test]
    fn damped_modes_hold_their_equation(car in prop_oneof![cars(ANY), cars(DRY)]) {
        let lin = linear(&car);
        let modes = lin.modes().unwrap();
        check_shapes(&lin, &modes)?;
    }

    #[test]
    fn damped_shares_sum_and_labels_are_one_to_one(car in prop_oneof![cars(ANY), cars(DRY)]) {
        let modes = linear(&car).modes().unwrap();
        check_sums(&modes)?;
        check_labels(&modes)?;
    }

    #[test]
    fn so_they_do_without_damping(car in prop_oneof![cars(ANY), cars(DRY)]) {
        let lin = linear(&car);
        let undamped = lin.modes_of(ModeKind::Undamped).unwrap();
        check_sums(&undamped)?;
        check_labels(&undamped)?;
        // The rounding of the eigenvalues is that of the largest.
        let stiffest = undamped.pole.iter().fold(0.0_f64, |most, pole| most.max(pole.norm_sqr()));
        for row in 0..undamped.len() {
            // K φ = ω² M φ on what has mass; without it K φ = 0.
            let psi = shape(&undamped, row);
            let (k, m) = (form(&psi, lin.stiffness()), form(&psi, lin.mass()));
            let square = undamped.pole[row].norm_sqr();
            prop_assert!((k / m - square).abs() <= 1e-9 * square + 1e-15 * stiffest, "{} {}", k / m, square);
        }
    }

    // ζ itself splits by dissipation: each element's part of ψᴴCψ/(2|λ|ψᴴMψ).
    #[test]
    fn damping_ratios_split_by_dissipation(car in cars(ANY)) {
        let lin = linear(&car);
        let modes = lin.modes().unwrap();
        for row in (0..modes.len()).filter(|&row| modes.pole[row].im > 0.0) {
            let psi = shape(&modes, row);
            let allowed = rounding(&modes, row);
            let whole = 2.0 * modes.pole[row].norm() * form(&psi, lin.mass());
            for (e, element) in lin.elements().iter().enumerate() {
                let travel: Complex64 = element.row.iter().zip(psi.iter()).map(|(g, x)| x * *g).sum();
                let part = element.damping * travel.norm_sqr() / whole;
                prop_assert!((part - modes.damping_ratio[row] * modes.dissipation[(row, e)]).abs() <= allowed);
                let strain = element.stiffness * travel.norm_sqr() / form(&psi, lin.stiffness());
                prop_assert!((strain - modes.strain[(row, e)]).abs() <= allowed);
            }
        }
    }
}

#[test]
fn shipped_vehicles_hold_the_same() {
    for name in Vehicle::examples() {
        let car = Vehicle::example(name).unwrap();
        let settings = car.settings().into_iter().map(|setting| car.with_setting(setting).unwrap());
        for car in std::iter::once(car.clone()).chain(settings) {
            let lin = of(&car);
            let modes = lin.modes().unwrap();
            check_shapes(&lin, &modes).unwrap();
            check_sums(&modes).unwrap();
            check_labels(&modes).unwrap();
        }
    }
}

#[test]
fn a_shape_is_one_where_most_kinetic_energy_is() {
    let modes = of(&Vehicle::example("roadster").unwrap()).modes_of(ModeKind::Undamped).unwrap();
    for (label, lead) in [("body heave", "z"), ("body pitch", "pitch"), ("body roll", "roll")] {
        let row = modes.rows(label)[0];
        let column = modes.coordinates.iter().position(|name| name == lead).unwrap();
        assert_eq!(modes.shape[(row, column)], Complex64::new(1.0, 0.0), "{label}");
        assert_eq!(modes.main_motion(row), label.trim_start_matches("body "));
    }
}
