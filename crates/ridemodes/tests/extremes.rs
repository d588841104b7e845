//! Cars at the edge: overdamped, without damping, with motions that nothing holds, with modes that repeat.

use approx::assert_relative_eq;
use ridemodes::{Complex64, ModeKind, Modes, Vehicle};
use serde_json::{Value, json};

use crate::support::{linear, of, set, singular, square_car, square_oil_car, vehicle};

fn poles(modes: &Modes, label: &str) -> Vec<Complex64> {
    modes.rows(label).into_iter().map(|row| modes.pole[row]).collect()
}

// On stiff tyres the body alone turns real: its critical damping is far below the wheel's.
fn overdamped() -> Value {
    let mut car = square_car();
    for axle in ["front", "rear"] {
        set(&mut car, &format!("{axle}.both.tyre.rate"), 2e6);
        set(&mut car, &format!("{axle}.both.damper.coefficient"), 8e3);
    }
    car
}

#[test]
fn an_overdamped_body_has_two_real_poles_of_one_label() {
    let lin = linear(&overdamped());
    let modes = lin.modes().unwrap();
    for label in ["body heave", "body pitch", "body roll"] {
        let pair = poles(&modes, label);
        assert_eq!(pair.len(), 2, "{label}: {:?}", modes.label);
        assert!(pair.iter().all(|pole| pole.im == 0.0 && pole.re < 0.0));
        // λ₁λ₂ stays near the undamped ω².
        let undamped = lin.modes_of(ModeKind::Undamped).unwrap();
        let omega = undamped.pole[undamped.rows(label)[0]].norm();
        assert_relative_eq!((pair[0].re * pair[1].re).sqrt(), omega, max_relative = 0.15);
    }
    for label in ["wheel heave", "wheel pitch", "wheel roll", "wheel warp"] {
        assert_eq!(poles(&modes, label).len(), 1, "{label}: {:?}", modes.label);
    }
    assert_eq!(modes.len(), 10);
    assert!(!modes.label.iter().any(|label| label.starts_with("relaxation")));
}

// Heave of the square car is a quarter car; its quartic, by the product and the sum of the roots.
#[test]
fn overdamped_heave_has_the_roots_of_its_quartic() {
    let modes = linear(&overdamped()).modes().unwrap();
    let (ms, mu, k, c, kt) = (300.0, 40.0, 22e3, 8e3, 2e6);
    let pair = poles(&modes, "body heave");
    let wheel = poles(&modes, "wheel heave")[0];
    let product = pair[0].re * pair[1].re * wheel.norm_sqr();
    assert_relative_eq!(product, k * kt / (ms * mu), max_relative = 1e-9);
    let sum = pair[0].re + pair[1].re + 2.0 * wheel.re;
    assert_relative_eq!(sum, -c / ms - c / mu, max_relative = 1e-9);
    for pole in pair {
        let s = pole.re;
        let terms =
            [ms * mu * s.powi(4), (ms + mu) * c * s.powi(3), ((ms + mu) * k + ms * kt) * s * s, c * kt * s, k * kt];
        let size: f64 = terms.iter().map(|term| term.abs()).sum();
        assert!(terms.iter().sum::<f64>().abs() <= 1e-10 * size);
    }
}

#[test]
fn without_any_damping_the_damped_modes_are_the_undamped() {
    let mut car = square_car();
    for axle in ["front", "rear"] {
        car[axle]["both"].as_object_mut().unwrap().remove("damper");
    }
    let lin = linear(&car);
    let (damped, undamped) = (lin.modes().unwrap(), lin.modes_of(ModeKind::Undamped).unwrap());
    assert_eq!(damped.len(), undamped.len());
    for (a, b) in damped.frequency.iter().zip(&undamped.frequency) {
        assert_relative_eq!(a, b, max_relative = 1e-10);
    }
    assert!(damped.damping_ratio.iter().all(|zeta| zeta.abs() < 1e-9));
    assert!(damped.dissipation.iter().all(|share| *share == 0.0));
}

#[test]
fn a_free_motion_is_named() {
    let mut car = square_car();
    for axle in ["front", "rear"] {
        car[axle]["both"].as_object_mut().unwrap().remove("spring");
    }
    let free = singular(linear(&car).modes());
    assert!(free.contains("body") && free.contains("free"), "{free}");
    assert!(singular(linear(&car).modes_of(ModeKind::Undamped)).contains("free"));
    assert!(singular(linear(&car).motions()).contains("free"));
    // Oil that holds roll alone leaves heave and pitch.
    let mut car = square_oil_car("roll");
    for axle in ["front", "rear"] {
        car[axle]["both"].as_object_mut().unwrap().remove("spring");
        set(&mut car, &format!("{axle}.both.cylinder"), json!({ "bore": 0.03, "rod": 0.0 }));
    }
    let free = singular(linear(&car).modes());
    assert!(free.contains("body heave") || free.contains("body pitch"), "{free}");
    // Through-rods carry nothing and hold pitch and heave by nothing, but the roll of the body they do.
    for axle in ["front", "rear"] {
        set(&mut car, &format!("{axle}.both.spring"), json!({ "rate": 22e3 }));
    }
    let motions = linear(&car).motions().unwrap();
    assert!(motions.stiffness.oil[(0, 0)].abs() < 1e-9 * motions.stiffness.oil[(2, 2)]);
    linear(&car).modes().unwrap();
}

#[test]
fn modes_that_repeat_do_not_break_it() {
    // Equal frequencies of body heave and pitch (I = m a²) and of all four wheels.
    let mut car = square_car();
    set(&mut car, "body.pitch_inertia", 1200.0 * 1.3 * 1.3);
    set(&mut car, "body.roll_inertia", 1200.0 * 0.75 * 0.75);
    let lin = linear(&car);
    for kind in [ModeKind::Damped, ModeKind::Undamped, ModeKind::Locked] {
        let modes = lin.modes_of(kind).unwrap();
        assert_eq!(modes.len(), 7);
        let mut labels = modes.label.clone();
        labels.sort();
        labels.dedup();
        assert_eq!(labels.len(), 7);
        let body = modes.frequency[0];
        assert!(modes.frequency[..3].iter().all(|f| (f / body - 1.0).abs() < 1e-9), "{:?}", modes.frequency);
        for row in 0..7 {
            assert_relative_eq!(modes.share.row(row).sum(), 1.0, max_relative = 1e-9);
        }
    }
}

#[test]
fn a_critically_damped_wheel_does_not_break_it() {
    // Warp of the square car: the wheel on tyre and suspension with the body at rest; c = 2√(m k) makes its pole double.
    let mut car = square_car();
    let critical = 2.0 * (40.0_f64 * (200e3 + 22e3)).sqrt();
    for factor in [1.0, 1.0 + 1e-15, 1.0 - 1e-15, 1.0 + 1e-9, 1.0 - 1e-9] {
        for axle in ["front", "rear"] {
            set(&mut car, &format!("{axle}.both.damper.coefficient"), critical * factor);
        }
        let modes = linear(&car).modes().unwrap();
        let warp = poles(&modes, "wheel warp");
        let expected = (222e3_f64 / 40.0).sqrt();
        assert!(warp.iter().all(|pole| (pole.norm() / expected - 1.0).abs() < 1e-3), "{warp:?}");
        let count: usize = modes.pole.iter().map(|pole| if pole.im > 0.0 { 2 } else { 1 }).sum();
        assert_eq!(count, 14);
        assert!(modes.share.iter().all(|share| share.is_finite()));
    }
}

#[test]
fn a_mount_is_a_branch_of_its_own() {
    // A Maxwell branch: c s k/(c s + k). Very stiff it is the damper alone, with one fast relaxation each.
    let mut car = square_car();
    let reference = linear(&car).modes().unwrap();
    for axle in ["front", "rear"] {
        set(&mut car, &format!("{axle}.both.damper.mount_rate"), 1e10);
    }
    let lin = linear(&car);
    assert_eq!(
        &lin.coordinates()[7..],
        ["front_left.damper", "front_right.damper", "rear_left.damper", "rear_right.damper"]
    );
    let modes = lin.modes().unwrap();
    assert_eq!(modes.label.iter().filter(|label| label.starts_with("relaxation")).count(), 4);
    for row in 0..reference.len() {
        let pole = poles(&modes, &reference.label[row])[0];
        assert!((pole - reference.pole[row]).norm() < 1e-3 * pole.norm(), "{}", reference.label[row]);
    }
    // Its own dynamic stiffness at one wheel, body and wheel held: k c s/(k + c s) → −λ = k/c.
    for axle in ["front", "rear"] {
        set(&mut car, &format!("{axle}.both.damper.mount_rate"), 3e5);
        set(&mut car, &format!("{axle}.both.unsprung_mass"), 1e9);
    }
    set(&mut car, "body", json!({ "mass": 1e9, "roll_inertia": 1e9, "pitch_inertia": 1e9, "cg_height": 0.5 }));
    let modes = linear(&car).modes().unwrap();
    let relaxation = poles(&modes, "relaxation 1")[0];
    assert_relative_eq!(relaxation.re, -3e5 / 1500.0, max_relative = 1e-4);
}

#[test]
fn a_damper_of_zero_is_no_damper() {
    let mut car = square_car();
    set(&mut car, "front.both.damper", json!({ "coefficient": 0.0, "mount_rate": 1e5 }));
    let lin = linear(&car);
    // The mount follows an idle damper and holds nothing.
    let modes = lin.modes().unwrap();
    assert_eq!(lin.state_space().unwrap().a.nrows(), 14);
    assert_eq!(modes.len(), 7);
    car["front"]["both"].as_object_mut().unwrap().remove("damper");
    let reference = linear(&car).modes().unwrap();
    for (a, b) in modes.pole.iter().zip(&reference.pole) {
        assert!((a - b).norm() <= 1e-9 * b.norm());
    }
}

#[test]
fn the_numbers_stand_far_apart() {
    let mut car = square_oil_car("roll");
    set(&mut car, "layout.accumulators.main.throttle", 1e14);
    let modes = linear(&car).modes().unwrap();
    assert!(modes.pole.iter().all(|pole| pole.re < 0.0 || pole.im > 0.0));
    assert!(vehicle(&car).settle().unwrap().warnings.iter().all(|text| !text.is_empty()));
    set(&mut car, "layout.accumulators.main.throttle", 1e-3);
    assert!(linear(&car).modes().unwrap().frequency.iter().all(|f| f.is_finite()));
}

// Like circuits relax alike: the front ones of this car each have a pole near −4.7e5 rad/s, though left and right
// differ behind. Rounding must not make one oscillation of the two.
const LIKE_CIRCUITS: &str = r#"
temperature = 323.0
[body]
cg_height = 0.5
cg_offset = 0.0601
mass = 1070.0
pitch_inertia = 1160.0
roll_inertia = 281.0
roll_pitch_product = -18.7
[front]
distance = 1.1
track = 1.62
[front.both]
cylinder = { bore = 0.0302, motion_ratio = 0.897, rod = 0.0135, stroke = 0.143 }
damper = { coefficient = 2640.0, motion_ratio = 0.767 }
spring = { motion_ratio = 1.02, rate = 24000.0 }
tyre = { damping = 299.0, rate = 270000.0 }
unsprung_mass = 62.0
[layout]
kind = "axle_roll"
pressure = 11300000.0
volume = 0.0
[layout.accumulators]
second = { exponent = 1.26, gas_volume = 0.00064, precharge = 8200000.0, throttle = 20600000.0 }
[layout.ports]
front_bump = { line = { bore = 0.00998, inertia = "plug", length = 2.99 }, throttle = 394000000.0 }
front_rebound = { line = { bore = 0.00702, inertia = "developed", length = 2.93 } }
rear_bump = { throttle = 19600000.0 }
rear_rebound = { line = { bore = 0.0098, inertia = "plug", length = 1.43 }, throttle = 276000000.0 }
[oil]
air_fraction = 0.0186
bulk_modulus = 1710000000.0
density = 810.0
kinematic_viscosity = 4.94e-05
kinematic_viscosity_hot = 1.09e-05
[rear]
distance = 1.4
track = 1.71
[rear.left]
cylinder = { bore = 0.0393, motion_ratio = 0.753, rod = 0.0209, stroke = 0.158 }
damper = { coefficient = 349.0, motion_ratio = 1.04, mount_rate = 193000.0 }
spring = { motion_ratio = 0.978, rate = 37800.0 }
tyre = { damping = 137.0, rate = 201000.0 }
unsprung_mass = 34.1
[rear.right]
cylinder = { bore = 0.0323, motion_ratio = 0.875, rod = 0.0163, stroke = 0.109 }
damper = { coefficient = 1540.0, motion_ratio = 0.833 }
spring = { motion_ratio = 0.681, rate = 24400.0 }
tyre = { damping = 277.0, rate = 282000.0 }
unsprung_mass = 26.4
"#;

#[test]
fn repeated_real_poles_stay_real() {
    let car = Vehicle::from_toml(LIKE_CIRCUITS).unwrap();
    for step in 0..300 {
        let coefficient = 300.0 + f64::from(step);
        let modes = of(&car.with_values([("rear.left.damper.coefficient", coefficient)]).unwrap()).modes().unwrap();
        for (pole, label) in modes.pole.iter().zip(&modes.label) {
            assert!(pole.im == 0.0 || pole.im > 1e-9 * pole.norm(), "{coefficient}: {label} at {pole}");
        }
        // Six throttles without inertance and the mount.
        assert_eq!(modes.label.iter().filter(|label| label.starts_with("relaxation")).count(), 7);
    }
}
