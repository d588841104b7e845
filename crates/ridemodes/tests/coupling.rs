//! Oil at the wheels, by two routes: the line coordinates of the library, the nodal impedance of `oil`.

use std::f64::consts::PI;

use proptest::prelude::*;
use ridemodes::nalgebra::{DMatrix, Matrix4, SymmetricEigen};
use ridemodes::ndarray::{Array3, s};
use ridemodes::{Complex64, ElementKind, ModeKind, SHARE_NAMES};
use serde_json::json;

use crate::oil::Oil;
use crate::random::{ANY, COMPRESSIBLE, SYMMETRIC, Wanted, cars};
use crate::support::{assert_close, dynamic, fixed, largest, linear, only_gas, set, singular, square_oil_car, vehicle};

const FREQUENCIES: [f64; 6] = [0.05, 0.7, 3.0, 12.0, 60.0, 400.0];

fn at(coupling: &Array3<Complex64>, place: usize) -> Matrix4<Complex64> {
    let slice = coupling.slice(s![.., .., place]);
    Matrix4::from_fn(|i, j| slice[(i, j)])
}

fn worst(difference: &Matrix4<Complex64>) -> f64 {
    difference.iter().fold(0.0, |most, entry| most.max(entry.norm()))
}

fn assert_routes_agree(car: &serde_json::Value) -> Result<(), TestCaseError> {
    let found = linear(car).dynamic_coupling(&FREQUENCIES).unwrap();
    let oil = Oil::new(car);
    for (place, f) in FREQUENCIES.iter().enumerate() {
        let s = Complex64::new(0.0, 2.0 * PI * f);
        let (expected, nodal) = (oil.impedance_of_stars(s), oil.impedance(s));
        let error = worst(&(at(&found, place) - expected)) / worst(&expected);
        prop_assert!(error <= 1e-10, "{} Hz: {:e}", f, error);
        let error = worst(&(nodal - expected)) / worst(&expected);
        prop_assert!(error <= 1e-8, "{} Hz, nodal: {:e}", f, error);
    }
    Ok(())
}

proptest! {
    #![proptest_config(fixed(96))]

    #[test]
    fn line_coordinates_give_the_nodal_impedance(car in cars(ANY)) {
        assert_routes_agree(&car)?;
    }

    #[test]
    fn so_they_do_without_inertance(car in cars(Wanted { inertance: false, ..ANY })) {
        assert_routes_agree(&car)?;
    }

    #[test]
    fn and_with_oil_that_gives_at_every_node(car in cars(COMPRESSIBLE)) {
        assert_routes_agree(&car)?;
    }

    #[test]
    fn coupling_is_that_of_circuits_at_one_pressure(car in cars(ANY)) {
        let lin = linear(&car);
        let oil = Oil::new(&car);
        let coupling = lin.coupling().unwrap();
        assert_close(&dynamic(&coupling), &dynamic(&oil.quasi_static()), 1e-12);
        prop_assert!(largest(&(coupling - coupling.transpose())) <= 1e-15 * largest(&coupling));
        // No more directions than circuits, none of them negative.
        let values = SymmetricEigen::new(coupling).eigenvalues;
        let scale = largest(&values);
        prop_assert!(values.iter().all(|value| *value >= -1e-13 * scale));
        let rank = values.iter().filter(|value| **value > 1e-11 * scale).count();
        prop_assert!(rank <= oil.circuits());
        prop_assert_eq!(lin.point().circuits.len(), oil.circuits());
    }

    #[test]
    fn dynamic_coupling_is_symmetric_dissipates_and_starts_at_the_coupling(car in cars(ANY)) {
        let lin = linear(&car);
        let frequency = [0.0, 1e-5, 0.3, 5.0, 80.0];
        let found = lin.dynamic_coupling(&frequency).unwrap();
        prop_assert_eq!(found.dim(), (4, 4, frequency.len()));
        for (place, f) in frequency.iter().enumerate() {
            let d = at(&found, place);
            prop_assert!(worst(&(d - d.transpose())) <= 1e-12 * worst(&d));
            if *f > 0.0 {
                let damping = d.map(|entry| entry.im / (2.0 * PI * f));
                let damping = (damping + damping.transpose()) * 0.5;
                let values = SymmetricEigen::new(damping).eigenvalues;
                // The rounding of D, over ω.
                prop_assert!(values.min() >= -1e-12 * (largest(&values) + worst(&d) / (2.0 * PI * f)));
            }
        }
        let coupling = lin.coupling().unwrap();
        let scale = largest(&coupling);
        prop_assert!(worst(&(at(&found, 0) - coupling.map(Complex64::from))) == 0.0);
        prop_assert!(largest(&(at(&found, 1).map(|entry| entry.re) - coupling)) <= 1e-7 * scale);
        // C_hyd(0) is the damping of the oil in the four motions.
        let damping = at(&found, 1).map(|entry| entry.im / (2.0 * PI * 1e-5));
        let t = crate::support::patterns();
        let oil = lin.motions().unwrap().damping.oil;
        let rounding = 1e-12 * scale / (2.0 * PI * 1e-5);
        prop_assert!(largest(&(t.transpose() * damping * t / 4.0 - oil)) <= 1e-6 * largest(&oil) + rounding);
    }

    #[test]
    fn like_sides_stay_apart_at_every_frequency(car in cars(SYMMETRIC)) {
        let found = linear(&car).dynamic_coupling(&[2.0, 20.0]).unwrap();
        let t = crate::support::patterns().map(Complex64::from);
        for place in 0..2 {
            let motions = t.transpose() * at(&found, place) * t;
            for (i, j) in [(0, 2), (0, 3), (1, 2), (1, 3)] {
                prop_assert!(motions[(i, j)].norm() <= 1e-11 * worst(&motions));
            }
        }
    }
}

#[test]
fn frequency_zero_and_the_order_of_frequencies_do_not_matter() {
    let lin = linear(&square_oil_car("roll"));
    let forwards = lin.dynamic_coupling(&[1.0, 0.0, 7.0]).unwrap();
    let backwards = lin.dynamic_coupling(&[7.0, 0.0, 1.0]).unwrap();
    for place in 0..3 {
        assert_eq!(at(&forwards, place), at(&backwards, 2 - place));
    }
    assert_eq!(lin.dynamic_coupling(&[]).unwrap().dim(), (4, 4, 0));
}

#[test]
fn rigid_oil_is_the_limit_of_stiff_oil() {
    for kind in ["roll", "pitch", "diagonal", "heave", "axle_roll"] {
        let mut car = square_oil_car(kind);
        set(
            &mut car,
            "layout.ports",
            json!({
                "front_bump": { "throttle": 3e8, "line": { "length": 1.5, "bore": 0.01 } },
                "rear_rebound": { "line": { "length": 2.5, "bore": 0.009 } },
            }),
        );
        let mut stiff = car.clone();
        set(&mut stiff, "oil.bulk_modulus", 1e12);
        car["oil"].as_object_mut().unwrap().remove("bulk_modulus");
        let (rigid, stiff) = (linear(&car), linear(&stiff));
        // Every node but the gas has lost its compliance: as many volumes fewer.
        assert!(rigid.coordinates().len() < stiff.coordinates().len());
        assert!(!rigid.elements().iter().any(|e| e.kind == ElementKind::Oil && e.stiffness != 0.0));
        let coupling = rigid.coupling().unwrap();
        assert!(largest(&(coupling - stiff.coupling().unwrap())) <= 1e-4 * largest(&coupling), "{kind}");
        let [a, b] = [&rigid, &stiff].map(|lin| lin.dynamic_coupling(&[0.5, 4.0, 25.0]).unwrap());
        for place in 0..3 {
            assert!(worst(&(at(&a, place) - at(&b, place))) <= 1e-4 * worst(&at(&a, place)), "{kind}");
        }
        let [a, b] = [&rigid, &stiff].map(|lin| lin.modes().unwrap());
        for label in ["body heave", "body pitch", "body roll", "wheel heave", "wheel pitch", "wheel roll", "wheel warp"]
        {
            for (i, j) in a.rows(label).into_iter().zip(b.rows(label)) {
                assert!((a.pole[i] - b.pole[j]).norm() <= 1e-4 * a.pole[i].norm(), "{kind} {label}");
            }
        }
    }
}

// The same mode, the same energy: what the oil's inertia holds does not move to the wheels as the oil turns rigid.
#[test]
fn rigid_oil_keeps_its_share_of_kinetic_energy() {
    let mut car = square_oil_car("diagonal");
    set(
        &mut car,
        "layout.ports",
        json!({
            "front_bump": { "line": { "length": 1.5, "bore": 0.01 } },
            "rear_rebound": { "line": { "length": 2.5, "bore": 0.009 } },
        }),
    );
    let mut stiff = car.clone();
    set(&mut stiff, "oil.bulk_modulus", 1e12);
    car["oil"].as_object_mut().unwrap().remove("bulk_modulus");
    let [rigid, stiff] = [&car, &stiff].map(|car| linear(car).modes().unwrap());
    for label in ["body heave", "body pitch", "body roll", "wheel heave"] {
        let (a, b) = (rigid.rows(label)[0], stiff.rows(label)[0]);
        for share in 0..8 {
            let (a, b) = (rigid.share[(a, share)], stiff.share[(b, share)]);
            assert!((a - b).abs() <= 1e-3, "{label}: {a} rigid, {b} stiff in {}", SHARE_NAMES[share]);
        }
    }
}

#[test]
fn rigid_oil_without_gas_locks_its_chambers_and_is_refused() {
    let mut car = square_oil_car("roll");
    only_gas(&mut car);
    car["layout"].as_object_mut().unwrap().remove("accumulators");
    let text = singular(vehicle(&car).settle().and_then(|point| point.linear()));
    assert!(text.contains("left") && text.contains("bump"), "{text}");
    // A chamber of rigid oil behind a throttle has a way out as long as there is gas.
    let mut car = square_oil_car("roll");
    only_gas(&mut car);
    set(&mut car, "layout.ports", json!({ "front_bump": { "throttle": 1e9 } }));
    linear(&car).modes().unwrap();
    // All four wheels in one circuit of rigid oil without gas: locked as well.
    let mut car = square_oil_car("heave");
    only_gas(&mut car);
    car["layout"].as_object_mut().unwrap().remove("accumulators");
    assert!(singular(vehicle(&car).settle().and_then(|point| point.linear())).contains("bump"));
}

// With every line locked, oil that gives nowhere locks the wheels to the body: no mode is left to find.
#[test]
fn rigid_oil_in_locked_lines_is_refused() {
    let mut car = square_oil_car("roll");
    let reference = linear(&car).modes_of(ModeKind::Locked).unwrap();
    set(&mut car, "oil.bulk_modulus", 1e12);
    let stiff = linear(&car).modes_of(ModeKind::Locked).unwrap();
    assert!(stiff.frequency[6] > 10.0 * reference.frequency[6]);
    car["oil"].as_object_mut().unwrap().remove("bulk_modulus");
    let text = singular(linear(&car).modes_of(ModeKind::Locked));
    assert!(text.contains("lock"), "{text}");
}

#[test]
fn an_ideal_pipe_joins_its_nodes() {
    let mut car = square_oil_car("diagonal");
    set(&mut car, "layout.accumulators.main.throttle", 0.0);
    let lin = linear(&car);
    assert_eq!(lin.coordinates().len(), 7);
    let found = lin.dynamic_coupling(&[10.0]).unwrap();
    let coupling = dynamic(&lin.coupling().unwrap());
    let same = DMatrix::from_fn(4, 4, |i, j| found[(i, j, 0)].re);
    assert_close(&same, &coupling, 1e-13);
    assert!(found.iter().all(|entry| entry.im.abs() <= 1e-13 * largest(&coupling)));
}
