//! Numbers solved for no coupling.

use approx::assert_relative_eq;
use ridemodes::Vehicle;

fn cross(car: &Vehicle, i: usize, j: usize) -> f64 {
    car.settle().unwrap().linear().unwrap().motions().unwrap().stiffness.cross[(i, j)]
}

#[test]
fn a_solution_decouples() {
    for (name, motions, places) in
        [("roadster", ["heave", "pitch"], (0, 1)), ("delivery_van", ["roll", "warp"], (2, 3))]
    {
        let car = Vehicle::example(name).unwrap();
        let found = car.decoupling(motions[0], motions[1]).unwrap();
        assert_relative_eq!(found.cross, cross(&car, places.0, places.1));
        assert!(found.remedies.iter().filter(|remedy| remedy.solution.is_some()).count() >= 4, "{name}");
        for remedy in &found.remedies {
            let Some(value) = remedy.solution else {
                // The least coupling met is no more than the present one, and it is met there.
                assert!(remedy.cross.abs() <= found.cross.abs() * (1.0 + 1e-12), "{}", remedy.path);
                let there = car.with_values([(remedy.path.as_str(), remedy.at)]).unwrap();
                assert_relative_eq!(
                    cross(&there, places.0, places.1),
                    remedy.cross,
                    max_relative = 1e-9,
                    epsilon = 1e-15
                );
                continue;
            };
            let there = car.with_values([(remedy.path.as_str(), value)]).unwrap();
            assert!(
                cross(&there, places.0, places.1).abs() < 1e-12,
                "{}: {}",
                remedy.path,
                cross(&there, places.0, places.1)
            );
        }
    }
}

// Front and rear springs alone hold heave and pitch: equal wheel rates decouple them.
#[test]
fn springs_decouple_heave_from_pitch_at_equal_wheel_rates() {
    let car = Vehicle::example("roadster_without_oil").unwrap();
    let found = car.decoupling("heave", "pitch").unwrap();
    let front = found.remedies.iter().find(|remedy| remedy.path == "front.both.spring.rate").unwrap();
    let (f, r) = (0.92_f64, 0.95_f64);
    assert_relative_eq!(front.solution.unwrap(), 26e3 * r * r / (f * f), max_relative = 1e-12);
    // A damper does not move stiffness, so it is no remedy.
    assert!(!found.remedies.iter().any(|remedy| remedy.path.contains("damper")));
    // The smallest change stands first.
    let change = |k: usize| found.remedies[k].solution.map(|x| (x / found.remedies[k].value).ln().abs());
    assert!(change(0).unwrap() <= change(1).unwrap());
}

#[test]
fn what_is_no_motion_is_refused() {
    let car = Vehicle::example("roadster").unwrap();
    assert!(car.decoupling("heave", "picth").unwrap_err().to_string().contains("pitch"));
    assert!(car.decoupling("heave", "heave").is_err());
}
