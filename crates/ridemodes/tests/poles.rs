//! Poles: against the state space, by their sum, in a mirror, under a change of scale.

use proptest::prelude::*;
use ridemodes::nalgebra::linalg::{Schur, balancing};
use ridemodes::{Complex64, Modes, Vehicle};
use serde_json::{Value, json};

use crate::oil::Oil;
use crate::random::{ANY, COMPRESSIBLE, DRY, cars, mirrored};
use crate::support::{fixed, linear, number};

// Every pole, the conjugates too.
fn all(modes: &Modes) -> Vec<Complex64> {
    modes.pole.iter().flat_map(|pole| if pole.im > 0.0 { vec![*pole, pole.conj()] } else { vec![*pole] }).collect()
}

// Largest distance of a pole to its own partner, each relative to its size and a little of the largest.
fn distance(found: &[Complex64], expected: &[Complex64]) -> f64 {
    assert_eq!(found.len(), expected.len());
    let largest = expected.iter().fold(0.0_f64, |most, pole| most.max(pole.norm()));
    let mut left: Vec<Complex64> = found.to_vec();
    let mut worst = 0.0_f64;
    for pole in expected {
        let (place, gap) = left
            .iter()
            .enumerate()
            .map(|(place, other)| (place, (other - pole).norm()))
            .min_by(|a, b| a.1.total_cmp(&b.1))
            .unwrap();
        left.swap_remove(place);
        worst = worst.max(gap / (pole.norm() + 1e-6 * largest));
    }
    worst
}

proptest! {
    #![proptest_config(fixed(64))]

    #[test]
    fn state_space_has_these_poles_and_no_others(car in prop_oneof![cars(ANY), cars(DRY)]) {
        let lin = linear(&car);
        let modes = lin.modes().unwrap();
        let space = lin.state_space().unwrap();
        let size = space.a.nrows();
        prop_assert_eq!((space.b.shape(), space.a.ncols()), ((size, 8), size));
        prop_assert_eq!((space.c.ncols(), space.d.ncols(), space.states.len()), (size, 8, size));
        prop_assert_eq!((space.c.nrows(), space.d.nrows()), (space.outputs.len(), space.outputs.len()));
        let poles = all(&modes);
        prop_assert_eq!(poles.len(), size);
        // Σλ = trace A
        let sum: Complex64 = poles.iter().sum();
        let scale: f64 = poles.iter().map(|pole| pole.norm()).sum();
        prop_assert!((sum.re - space.a.trace()).abs() <= 1e-10 * scale, "{} {}", sum.re, space.a.trace());
        let mut balanced = space.a.clone();
        balancing::balance_parlett_reinsch(&mut balanced);
        let schur = Schur::try_new(balanced, f64::EPSILON, 20_000).expect("converges");
        let eigenvalues: Vec<Complex64> = schur.complex_eigenvalues().iter().copied().collect();
        let gap = distance(&poles, &eigenvalues);
        prop_assert!(gap <= 1e-6, "{:e}", gap);
        prop_assert!(poles.iter().all(|pole| pole.re < 0.0), "{:?}", poles);
        // A repeated real pole is no oscillation.
        prop_assert!(poles.iter().all(|pole| pole.im == 0.0 || pole.im.abs() > 1e-9 * pole.norm()), "{:?}", poles);
        let ascending = modes.frequency.windows(2).all(|pair| pair[0] <= pair[1]);
        prop_assert!(ascending);
    }

    // Two for each coordinate with mass, one for each line without inertance and each damper on a mount.
    #[test]
    fn states_are_counted(car in cars(COMPRESSIBLE)) {
        let lin = linear(&car);
        let (inertial, others) = Oil::new(&car).line_counts();
        let mounts = (0..4).filter(|&i| crate::support::corner(&car, i)["damper"].get("mount_rate").is_some()).count();
        prop_assert_eq!(lin.coordinates().len(), 7 + inertial + others + mounts);
        prop_assert_eq!(lin.state_space().unwrap().states.len(), 2 * (7 + inertial) + others + mounts);
    }

    #[test]
    fn a_mirror_changes_no_pole(car in cars(ANY)) {
        let (here, there) = (linear(&car).modes().unwrap(), linear(&mirrored(&car)).modes().unwrap());
        let gap = distance(&all(&there), &all(&here));
        prop_assert!(gap <= 1e-6, "{:e}", gap);
    }

    // Masses, rates, dampings and the oil's hold on the wheels times s leave the poles.
    #[test]
    fn scale_changes_no_pole(car in cars(ANY), s in 0.2..5.0) {
        let gap = distance(&all(&linear(&scaled(&car, s)).modes().unwrap()), &all(&linear(&car).modes().unwrap()));
        prop_assert!(gap <= 1e-6, "{:e}", gap);
    }

    // Any numbers of the shipped vehicles a little changed: modes or an error, and all that comes out is finite.
    #[test]
    fn shipped_vehicles_stand_changes(factors in proptest::collection::vec(0.85..1.15, 120)) {
        for name in Vehicle::examples() {
            let car = Vehicle::example(name).unwrap();
            let changes = car.parameters().into_iter().zip(factors.iter().cycle()).map(|(p, f)| (p.path, p.value * f));
            let Ok(changed) = car.with_values(changes.filter(|(path, _)| !path.contains("temperature"))) else { continue };
            let lin = crate::support::of(&changed);
            let modes = lin.modes().unwrap();
            prop_assert!(modes.pole.iter().all(|pole| pole.re < 0.0 && pole.im.is_finite()));
            prop_assert!(modes.share.iter().chain(&modes.strain).chain(&modes.dissipation).all(|x| x.is_finite()));
        }
    }
}

// Areas grow by √s, so that what the oil does at the wheels grows by s; oil in the chambers stays.
fn scaled(car: &Value, s: f64) -> Value {
    let mut car = car.clone();
    let times = |place: &mut Value, power: f64| {
        if !place.is_null() {
            *place = json!(number(place, 0.0) * s.powf(power));
        }
    };
    for name in ["mass", "roll_inertia", "pitch_inertia"] {
        times(&mut car["body"][name], 1.0);
    }
    if let Some(product) = car["body"].get_mut("roll_pitch_product") {
        times(product, 1.0);
    }
    for axle in ["front", "rear"] {
        if let Some(bar) = car[axle].get_mut("anti_roll_bar") {
            times(&mut bar["rate"], 1.0);
        }
        for side in ["both", "left", "right"] {
            let Some(corner) = car[axle].get_mut(side) else { continue };
            for (path, power) in [
                ("/unsprung_mass", 1.0),
                ("/tyre/rate", 1.0),
                ("/tyre/damping", 1.0),
                ("/spring/rate", 1.0),
                ("/damper/coefficient", 1.0),
                ("/damper/mount_rate", 1.0),
                ("/cylinder/bore", 0.25),
                ("/cylinder/rod", 0.25),
                ("/cylinder/stroke", -0.5),
            ] {
                if let Some(place) = corner.pointer_mut(path) {
                    times(place, power);
                }
            }
        }
    }
    car
}
