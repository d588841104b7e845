//! Modes of the undamped and the locked system against matrices condensed here.

use proptest::prelude::*;
use ridemodes::nalgebra::{Cholesky, DMatrix, SymmetricEigen};
use ridemodes::{ElementKind, LinearSystem, ModeKind, Modes};

use crate::random::{ANY, COMPRESSIBLE, SYMMETRIC, Wanted, cars};
use crate::support::{body_motion, fixed, largest, linear, tyres};

const STILL: Wanted = Wanted { inertance: false, ..ANY };

// ω in ascending order of K φ = ω² M φ.
fn frequencies(stiffness: &DMatrix<f64>, mass: &DMatrix<f64>) -> Vec<f64> {
    let factor = Cholesky::new(mass.clone()).expect("every coordinate has mass").l();
    let left = factor.solve_lower_triangular(stiffness).unwrap();
    let both = factor.solve_lower_triangular(&left.transpose()).unwrap();
    let mut values: Vec<f64> =
        SymmetricEigen::new((&both + both.transpose()) * 0.5).eigenvalues.iter().map(|value| value.sqrt()).collect();
    values.sort_by(f64::total_cmp);
    values
}

fn assert_frequencies(modes: &Modes, expected: &[f64]) -> Result<(), TestCaseError> {
    prop_assert_eq!(modes.len(), expected.len());
    // The rounding of ω² is that of the largest.
    let stiffest = expected.iter().fold(0.0_f64, |most, omega| most.max(omega * omega));
    for (pole, expected) in modes.pole.iter().zip(expected) {
        let (found, expected) = (pole.norm_sqr(), expected * expected);
        prop_assert!((found - expected).abs() <= 1e-9 * expected + 1e-14 * stiffest, "{} {}", found, expected);
    }
    prop_assert!(modes.damping_ratio.iter().all(|zeta| *zeta == 0.0));
    Ok(())
}

// LᵀK_δL + K_t over body and wheels, L = [−J | I].
fn seven_by_seven(car: &serde_json::Value, lin: &LinearSystem) -> DMatrix<f64> {
    let mut l = DMatrix::zeros(4, 7);
    l.view_mut((0, 0), (4, 3)).copy_from(&-body_motion(car));
    l.view_mut((0, 3), (4, 4)).fill_with_identity();
    let at_wheels = lin.motions().unwrap().at_wheels;
    let mut stiffness = l.transpose() * at_wheels * l;
    let mut wheels = stiffness.view_mut((3, 3), (4, 4));
    wheels += tyres(car);
    stiffness
}

proptest! {
    #![proptest_config(fixed(64))]

    // Without inertance the oil acts by its quasi-static coupling alone.
    #[test]
    fn undamped_modes_are_those_of_the_coupling(car in cars(STILL)) {
        let lin = linear(&car);
        let mass = lin.mass().view((0, 0), (7, 7)).into_owned();
        let modes = lin.modes_of(ModeKind::Undamped).unwrap();
        assert_frequencies(&modes, &frequencies(&seven_by_seven(&car, &lin), &mass))?;
    }

    // With inertance: what has mass, the rest condensed statically.
    #[test]
    fn undamped_modes_condense_what_has_no_mass(car in cars(COMPRESSIBLE)) {
        let lin = linear(&car);
        let (with, without): (Vec<usize>, Vec<usize>) =
            (0..lin.coordinates().len()).partition(|&i| lin.mass()[(i, i)] > 0.0);
        let block = |matrix: &DMatrix<f64>, rows: &[usize], columns: &[usize]| {
            DMatrix::from_fn(rows.len(), columns.len(), |i, j| matrix[(rows[i], columns[j])])
        };
        let mut stiffness = block(lin.stiffness(), &with, &with);
        if !without.is_empty() {
            let own = block(lin.stiffness(), &without, &without).cholesky().unwrap();
            let across = block(lin.stiffness(), &without, &with);
            stiffness -= across.transpose() * own.solve(&across);
        }
        let expected = frequencies(&stiffness, &block(lin.mass(), &with, &with));
        assert_frequencies(&lin.modes_of(ModeKind::Undamped).unwrap(), &expected)?;
    }

    // Lines locked: volumes stay, oil acts by what is trapped; a mount follows its idle damper.
    #[test]
    fn locked_modes_hold_every_volume(car in cars(COMPRESSIBLE)) {
        let lin = linear(&car);
        let mut stiffness = lin.stiffness().view((0, 0), (7, 7)).into_owned();
        for mount in lin.elements().iter().filter(|element| element.kind == ElementKind::Mount) {
            for i in 0..7 {
                for j in 0..7 {
                    stiffness[(i, j)] -= mount.stiffness * mount.row[i] * mount.row[j];
                }
            }
        }
        let mass = lin.mass().view((0, 0), (7, 7)).into_owned();
        let locked = lin.modes_of(ModeKind::Locked).unwrap();
        assert_frequencies(&locked, &frequencies(&stiffness, &mass))?;
        // Holding volumes can only stiffen.
        let free = frequencies(&seven_by_seven(&car, &lin), &mass);
        for (locked, free) in locked.frequency.iter().zip(free) {
            prop_assert!(locked * 2.0 * std::f64::consts::PI >= free * (1.0 - 1e-12));
        }
    }

    // Heave and pitch apart from roll and warp, in the matrices and in every mode.
    #[test]
    fn like_sides_split_the_vehicle(car in cars(SYMMETRIC)) {
        let lin = linear(&car);
        let modes = lin.modes_of(ModeKind::Undamped).unwrap();
        let fourth = std::f64::consts::FRAC_1_SQRT_2;
        let mut turn = DMatrix::identity(7, 7);
        for (left, right) in [(3, 4), (5, 6)] {
            turn[(left, left)] = fourth;
            turn[(left, right)] = fourth;
            turn[(right, left)] = fourth;
            turn[(right, right)] = -fourth;
        }
        let stiffness = turn.transpose() * seven_by_seven(&car, &lin) * &turn;
        for i in [0, 1, 3, 5] {
            for j in [2, 4, 6] {
                prop_assert!(stiffness[(i, j)].abs() <= 1e-13 * largest(&stiffness));
            }
        }
        for row in 0..modes.len() {
            let even: f64 = [0, 1, 3, 4].iter().map(|&j| modes.share[(row, j)]).sum();
            let odd: f64 = [2, 5, 6].iter().map(|&j| modes.share[(row, j)]).sum();
            prop_assert!(even.abs().min(odd.abs()) <= 1e-9, "{} {}", even, odd);
        }
    }
}
