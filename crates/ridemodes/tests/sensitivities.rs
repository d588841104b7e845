//! Derivatives by every number, against central differences on every example.

use ridemodes::nalgebra::{DVector, Matrix4};
use ridemodes::{Complex64, LinearSystem, Sensitivities, Vehicle};

fn linear(car: &Vehicle) -> LinearSystem {
    car.settle().unwrap().linear().unwrap()
}

struct Stepped {
    poles: Vec<Complex64>,
    stiffness: Matrix4<f64>,
    damping: Matrix4<f64>,
    coupling: Matrix4<f64>,
}

fn stepped(car: &Vehicle, path: &str, value: f64) -> Stepped {
    let lin = linear(&car.with_values([(path, value)]).unwrap());
    let motions = lin.motions().unwrap();
    Stepped {
        poles: lin.modes().unwrap().pole,
        stiffness: motions.stiffness.total,
        damping: motions.damping.total,
        coupling: lin.coupling().unwrap(),
    }
}

// Labels may change hands on the way; the pole nearest to the nominal one is its continuation.
fn nearest(poles: &[Complex64], to: Complex64) -> Complex64 {
    poles.iter().copied().min_by(|a, b| (a - to).norm().total_cmp(&(b - to).norm())).unwrap()
}

fn frequency(pole: Complex64) -> f64 {
    pole.norm() / (2.0 * std::f64::consts::PI)
}

fn ratio(pole: Complex64) -> f64 {
    -pole.re / pole.norm()
}

fn check_path(name: &str, car: &Vehicle, found: &Sensitivities, place: usize, blur: f64) {
    let (path, value) = (&found.paths[place], found.values[place]);
    let step = 1e-5 * value.abs();
    let (above, below) = (stepped(car, path, value + step), stepped(car, path, value - step));
    let modes = &found.modes;
    for (row, &pole) in modes.pole.iter().enumerate() {
        // Poles closer than this change places within the step.
        let gap = modes.pole.iter().filter(|other| **other != pole).map(|other| (other - pole).norm());
        let gap =
            gap.fold((2.0 * pole.im).abs().max(0.0), |least, next| if least == 0.0 { next } else { least.min(next) });
        if found.repeated[row] || gap < 2e-2 * pole.norm() {
            continue;
        }
        let (a, b) = (nearest(&above.poles, pole), nearest(&below.poles, pole));
        let numeric = (frequency(a) - frequency(b)) / (2.0 * step);
        let allowed = 1e-5 * numeric.abs() + 1e-8 * frequency(pole) / value.abs();
        let exact = found.frequency[(row, place)];
        assert!((exact - numeric).abs() <= allowed, "{name} {path} {}: {exact} against {numeric}", modes.label[row]);
        let numeric = (ratio(a) - ratio(b)) / (2.0 * step);
        let allowed = 1e-5 * numeric.abs() + 1e-8 / value.abs();
        let exact = found.damping_ratio[(row, place)];
        assert!((exact - numeric).abs() <= allowed, "{name} {path} ζ {}: {exact} against {numeric}", modes.label[row]);
    }
    for (what, exact, above, below) in [
        ("stiffness", &found.stiffness, above.stiffness, below.stiffness),
        ("damping", &found.damping, above.damping, below.damping),
        ("coupling", &found.coupling, above.coupling, below.coupling),
    ] {
        let size = above.amax();
        for i in 0..4 {
            for j in 0..4 {
                let numeric = (above[(i, j)] - below[(i, j)]) / (2.0 * step);
                let allowed = 1e-6 * numeric.abs() + blur * size / value.abs();
                let exact = exact[(i, j, place)];
                assert!((exact - numeric).abs() <= allowed, "{name} {path} {what} {i} {j}: {exact} against {numeric}");
            }
        }
    }
}

#[test]
fn every_derivative_is_that_of_central_differences() {
    for name in Vehicle::examples() {
        let car = Vehicle::example(name).unwrap();
        let found = linear(&car).sensitivities().unwrap();
        assert_eq!(found.paths.len(), car.parameters().len());
        let mut checked = 0;
        for place in 0..found.paths.len() {
            // At zero a step both ways leaves the bounds or has no scale.
            if found.values[place] != 0.0 {
                check_path(name, &car, &found, place, 1e-9);
                checked += 1;
            }
        }
        assert!(checked > 30, "{name}: {checked}");
    }
}

// Two ways side by side: their flows share as their resistances do, and that moves with each of them.
#[test]
fn derivatives_in_a_closed_loop() {
    let mut car = crate::support::square_oil_car("roll");
    car["nodes"]["between"] = serde_json::json!({ "circuit": "left", "volume": 20e-6 });
    car["lines"] = serde_json::json!({
        "a": { "from": "left", "to": "between", "throttle": 3e8, "length": 1.2, "bore": 0.008, "inertia": "none" },
        "b": { "from": "left", "to": "between", "throttle": 6e8 },
        "onward": { "from": "between", "to": "right", "throttle": 5e8 },
    });
    // The front left strut alone is thicker, so that oil moves from side to side.
    let car = crate::support::vehicle(&car).with_values([("front.left.cylinder.bore", 0.034)]).unwrap();
    let found = linear(&car).sensitivities().unwrap();
    for place in (0..found.paths.len()).filter(|&place| found.values[place] != 0.0) {
        check_path("loop", &car, &found, place, 1e-7);
    }
    let place = found.paths.iter().position(|path| path == "lines.b.throttle").unwrap();
    assert!(found.damping[(0, 0, place)].abs() > 0.0);
}

#[test]
fn zero_throttles_are_excluded_and_said_so() {
    let found = linear(&Vehicle::example("roadster").unwrap()).sensitivities().unwrap();
    assert_eq!(found.excluded.len(), 4);
    for path in &found.excluded {
        let place = found.paths.iter().position(|known| known == path).unwrap();
        assert!(found.frequency.column(place).iter().all(|value| value.is_nan()));
        assert!(path.ends_with("throttle"));
    }
    let text = found.table(0).to_string();
    assert!(text.contains("layout.ports.front_bump.throttle"));
}

// Frequencies go with the root of all rates over all masses: scaling every rate and mass and damping by the same
// factor changes nothing, so the relative derivatives of a car without oil sum to zero over them, and with
// rates ω ~ √k they sum to 1/2 over the rates alone for vanishing damping.
#[test]
fn relative_derivatives_obey_the_scaling_laws() {
    let car = Vehicle::example("roadster_without_oil").unwrap();
    let found = linear(&car).sensitivities().unwrap();
    let relative = found.relative_frequency();
    let ratio = found.relative_damping_ratio();
    let sum = |row: usize, of: &dyn Fn(&str) -> f64, table: &ridemodes::ndarray::Array2<f64>| -> f64 {
        (0..found.paths.len())
            .filter(|&place| found.values[place] != 0.0)
            .map(|place| of(&found.paths[place]) * table[(row, place)])
            .sum()
    };
    let is = |path: &str, endings: &[&str]| f64::from(endings.iter().any(|ending| path.ends_with(ending)));
    let rates = |path: &str| is(path, &["spring.rate", "tyre.rate", "bar.rate"]);
    let masses = |path: &str| is(path, &["mass", "inertia", "product"]);
    let dampings = |path: &str| is(path, &["coefficient", "tyre.damping"]);
    for row in 0..found.modes.len() {
        let all = |path: &str| rates(path) + masses(path) + dampings(path);
        assert!(sum(row, &all, &relative).abs() < 1e-10);
        assert!(sum(row, &all, &ratio).abs() < 1e-10);
        // Time scaled by s: rates by s², dampings by s.
        let time = |path: &str| 2.0 * rates(path) + dampings(path);
        assert!((sum(row, &time, &relative) - 1.0).abs() < 1e-10);
        assert!(sum(row, &time, &ratio).abs() < 1e-10);
    }
}

#[test]
fn equal_poles_have_no_gradient_of_their_own() {
    // Alike front and rear, inertias of a ring over the wheels: heave, pitch and roll are one quarter car.
    let text = r#"
        body = { mass = 1200.0, roll_inertia = 675.0, pitch_inertia = 2028.0, cg_height = 0.5 }
        [front]
        distance = 1.3
        track = 1.5
        both = { unsprung_mass = 40.0, tyre = { rate = 2e5 }, spring = { rate = 2e4 }, damper = { coefficient = 1500.0 } }
        [rear]
        distance = 1.3
        track = 1.5
        both = { unsprung_mass = 40.0, tyre = { rate = 2e5 }, spring = { rate = 2e4 }, damper = { coefficient = 1500.0 } }
    "#;
    let lin = linear(&Vehicle::from_toml(text).unwrap());
    let found = lin.sensitivities().unwrap();
    // The shapes of equal poles are shapes all the same: (λ²M + λC + K)ψ = 0.
    for (row, &pole) in found.modes.pole.iter().enumerate() {
        let shape = DVector::from_iterator(7, found.modes.shape.row(row).iter().copied());
        let [mass, damping, stiffness] = [lin.mass(), lin.damping(), lin.stiffness()].map(|m| m.map(Complex64::from));
        let dynamic = mass * (pole * pole) + damping * pole + &stiffness;
        assert!((dynamic * &shape).norm() <= 1e-13 * (stiffness * shape).norm());
    }
    for (row, label) in found.modes.label.iter().enumerate() {
        let equal = label != "wheel warp";
        assert_eq!(found.repeated[row], equal, "{label}");
        assert_eq!(found.frequency.row(row).iter().all(|value| value.is_nan()), equal, "{label}");
    }
    assert!(found.table(0).to_string().contains("equal to another's"));
}
