//! Modes followed by shape.

use approx::assert_relative_eq;
use ridemodes::{Error, Sweep, Vehicle};

fn branch(sweep: &Sweep, label: &str) -> usize {
    sweep.label.iter().position(|known| known == label).unwrap()
}

#[test]
fn a_sweep_is_the_modes_of_each_value() {
    let car = Vehicle::example("roadster").unwrap();
    let values = [1.2e6, 1.5e6, 1.9e6, 2.4e6];
    let sweep = car.sweep("layout.accumulators.main.precharge", &values).unwrap();
    assert_eq!(sweep.unit, "Pa");
    assert_eq!(sweep.label.len(), 9);
    for (place, &value) in values.iter().enumerate() {
        let alone = car.with_values([("layout.accumulators.main.precharge", value)]).unwrap();
        let alone = alone.settle().unwrap().linear().unwrap().modes().unwrap();
        let mut rows: Vec<i64> = sweep.row.column(place).to_vec();
        rows.sort_unstable();
        assert_eq!(rows, (0..9).collect::<Vec<i64>>());
        for branch in 0..9 {
            let row = sweep.row[(branch, place)] as usize;
            assert_eq!(sweep.frequency[(branch, place)], alone.frequency[row]);
            assert_eq!(sweep.pole[(branch, place)], alone.pole[row]);
        }
    }
    let roll = sweep.frequency.row(branch(&sweep, "body roll")).to_vec();
    assert!(roll.windows(2).all(|pair| pair[1] < pair[0]), "less gas at rest, stiffer roll: {roll:?}");
}

// Two modes that do not couple cross: by frequency they change places, by shape they go through.
#[test]
fn modes_are_followed_through_a_crossing() {
    let car = Vehicle::example("roadster").unwrap();
    let values: Vec<f64> = (0..12).map(|k| 250.0 + 100.0 * f64::from(k)).collect();
    let sweep = car.sweep("body.roll_inertia", &values).unwrap();
    let (roll, heave) = (branch(&sweep, "body roll"), branch(&sweep, "body heave"));
    let last = values.len() - 1;
    // Roll falls through the frequencies of heave and pitch; heave and pitch do not know of the roll inertia
    // but for the small product of inertia.
    assert!(sweep.frequency[(roll, 0)] > sweep.frequency[(heave, 0)]);
    assert!(sweep.frequency[(roll, last)] < sweep.frequency[(heave, last)]);
    for place in 0..=last {
        let share = &sweep.modes[place].share;
        assert!(share[(sweep.row[(roll, place)] as usize, 2)] > 0.5, "{place}");
        assert_relative_eq!(sweep.frequency[(heave, place)], sweep.frequency[(heave, 0)], max_relative = 0.02);
    }
}

// One coarse step must end on the branches that many small ones end on.
#[test]
fn coarse_and_fine_sweeps_agree() {
    for (name, path, ends) in [
        ("roadster", "body.roll_inertia", [250.0, 1400.0]),
        ("roadster", "rear.both.unsprung_mass", [25.0, 70.0]),
        ("delivery_van", "circuits.left.accumulators.main.throttle", [1e8, 3e9]),
        ("roadster_without_oil", "front.both.spring.rate", [12e3, 60e3]),
    ] {
        let car = Vehicle::example(name).unwrap();
        let coarse = car.sweep(path, &ends).unwrap();
        let fine: Vec<f64> = (0..=64).map(|k| ends[0] + (ends[1] - ends[0]) * f64::from(k) / 64.0).collect();
        let fine = car.sweep(path, &fine).unwrap();
        for (branch, label) in coarse.label.iter().enumerate().filter(|(_, label)| label.starts_with("body")) {
            let other = fine.label.iter().position(|known| known == label).unwrap();
            assert_relative_eq!(coarse.frequency[(branch, 1)], fine.frequency[(other, 64)], max_relative = 1e-9);
        }
    }
}

// A damper strong enough turns a pair into two real poles: one goes on, the other begins.
#[test]
fn a_pair_gone_real_begins_a_branch() {
    let car = Vehicle::example("roadster_without_oil").unwrap();
    let values: Vec<f64> = (0..30).map(|k| 1e3 * 1.2_f64.powi(k)).collect();
    let sweep = car.sweep("front.both.damper.coefficient", &values).unwrap();
    assert!(sweep.label.iter().any(|label| label.contains(" from ")), "{:?}", sweep.label);
    for (branch, label) in sweep.label.iter().enumerate() {
        let there = sweep.frequency.row(branch).iter().filter(|value| value.is_finite()).count();
        assert!(there > 0, "{label}");
    }
    for (place, modes) in sweep.modes.iter().enumerate() {
        assert_eq!(sweep.row.column(place).iter().filter(|row| **row >= 0).count(), modes.len());
    }
}

#[test]
fn every_wrong_value_is_refused_before_anything_is_computed() {
    let car = Vehicle::example("roadster").unwrap();
    let Err(Error::InvalidInput { violations }) = car.sweep("body.mass", &[-1.0, 1000.0, f64::NAN]) else {
        panic!("accepted")
    };
    assert_eq!(violations.len(), 2);
    assert!(car.sweep("body.mas", &[1.0]).unwrap_err().to_string().contains("body.mass"));
    assert!(car.sweep("body.mass", &[]).unwrap().label.is_empty());
}
