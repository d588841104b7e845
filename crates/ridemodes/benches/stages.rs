//! What each stage costs on the roadster (18 states: seven masses, two circuits with an inertial line each).
//!
//! The roadster is the size a designer's loop works at; the truck (38 states) shows the growth.

use divan::{Bencher, black_box};
use ridemodes::{Condition, ModeKind, Vehicle};

fn main() {
    divan::main();
}

const VEHICLES: [&str; 2] = ["roadster", "forest_truck"];

fn vehicle(name: &str) -> Vehicle {
    Vehicle::example(name).unwrap()
}

/// Reading text, checking and laying out the structure.
#[divan::bench(args = VEHICLES)]
fn load(bencher: Bencher<'_, '_>, name: &str) {
    let text = vehicle(name).to_toml();
    bencher.bench(|| Vehicle::from_toml(black_box(&text)).unwrap());
}

/// A number changed by path: no parsing, the structure is shared.
#[divan::bench(args = VEHICLES)]
fn with_values(bencher: Bencher<'_, '_>, name: &str) {
    let car = vehicle(name);
    bencher.bench(|| car.with_values([("front.both.spring.rate", black_box(24e3))]).unwrap());
}

/// The list of elements and the three matrices.
#[divan::bench(args = VEHICLES)]
fn assembly(bencher: Bencher<'_, '_>, name: &str) {
    let state = vehicle(name).settle().unwrap();
    bencher.bench(|| black_box(&state).linear().unwrap());
}

/// Symmetric eigenproblem, labels and shares.
#[divan::bench(args = VEHICLES)]
fn undamped_modes(bencher: Bencher<'_, '_>, name: &str) {
    let lin = vehicle(name).settle().unwrap().linear().unwrap();
    bencher.bench(|| black_box(&lin).modes_of(ModeKind::Undamped).unwrap());
}

/// Every pole with vectors, labels and shares.
#[divan::bench(args = VEHICLES)]
fn damped_modes(bencher: Bencher<'_, '_>, name: &str) {
    let state = vehicle(name).settle().unwrap();
    bencher.with_inputs(|| state.linear().unwrap()).bench_refs(|lin| lin.modes().unwrap());
}

/// Quasi-static reduction and the four motions.
#[divan::bench(args = VEHICLES)]
fn motions(bencher: Bencher<'_, '_>, name: &str) {
    let state = vehicle(name).settle().unwrap();
    bencher.with_inputs(|| state.linear().unwrap()).bench_refs(|lin| lin.motions().unwrap());
}

/// One state in a corner, cold start: parts, Newton's method with seven dual directions, results read off.
#[divan::bench(args = VEHICLES)]
fn settle(bencher: Bencher<'_, '_>, name: &str) {
    let car = vehicle(name);
    let condition = Condition { lateral: 4.0, ..Condition::default() };
    bencher.bench(|| car.settle_under(black_box(&condition)).unwrap());
}

/// A thousand lateral accelerations, each from the one before.
#[divan::bench(args = VEHICLES, sample_count = 10)]
fn sweep_of_states(bencher: Bencher<'_, '_>, name: &str) {
    let car = vehicle(name);
    let values: Vec<f64> = (0..1000).map(|k| 0.005 * f64::from(k)).collect();
    bencher.bench(|| car.states("lateral", black_box(&values), &Condition::default()).unwrap());
}
