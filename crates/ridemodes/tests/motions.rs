//! Heave, pitch, roll and warp at the wheels.

use approx::assert_relative_eq;
use proptest::prelude::*;
use ridemodes::nalgebra::{Matrix4, Vector4};
use ridemodes::{CORNERS, MOTIONS};
use serde_json::{Value, json};

use crate::oil::gas_volume;
use crate::random::{ANY, DRY, SYMMETRIC, cars};
use crate::support::{
    assert_close, body_motion, dynamic, fixed, largest, linear, only_gas, patterns, set, square_car, square_oil_car,
    twist, tyres,
};

#[test]
fn patterns_are_orthogonal_and_one_wheel_is_a_quarter_of_each() {
    let t = Matrix4::from_fn(|i, j| MOTIONS[j][i]);
    assert_eq!(t, patterns());
    assert_eq!(t.transpose() * t, Matrix4::identity() * 4.0);
    for corner in CORNERS {
        // e_i = T a with a = Tᵀ e_i/4: each motion holds a²·4 = 1/4 of the input's square.
        let mut input = Vector4::zeros();
        input[corner.index()] = 1.0;
        let amounts = t.transpose() * input / 4.0;
        assert_eq!(t * amounts, input);
        for amount in amounts.iter() {
            assert_eq!(4.0 * amount * amount, 0.25);
        }
    }
    // A lone axle in phase: half heave, half pitch (their sign apart), no roll, no warp.
    let amounts = t.transpose() * Vector4::new(1.0, 1.0, 0.0, 0.0) / 4.0;
    assert_eq!(amounts, Vector4::new(0.5, -0.5, 0.0, 0.0));
}

#[test]
fn one_raised_wheel_sees_the_column_of_all_four_motions() {
    // Springs alone hold each wheel alike: a quarter of the force from each motion.
    let motions = linear(&square_car()).motions().unwrap();
    for motion in 0..4 {
        assert_relative_eq!(motions.stiffness.total[(motion, motion)], 22e3, max_relative = 1e-14);
    }
    assert_eq!(motions.at_wheels, Matrix4::identity() * 22e3);
}

proptest! {
    #![proptest_config(fixed(48))]

    #[test]
    fn parts_add_up(car in cars(ANY)) {
        let lin = linear(&car);
        let motions = lin.motions().unwrap();
        for matrix in [&motions.stiffness, &motions.damping] {
            prop_assert_eq!(matrix.total, matrix.conventional + matrix.oil);
        }
        let t = patterns();
        let stiffness = t.transpose() * motions.at_wheels * t / 4.0;
        assert_close(&dynamic(&stiffness), &dynamic(&motions.stiffness.total), 1e-13);
        let oil = t.transpose() * lin.coupling().unwrap() * t / 4.0;
        prop_assert!(largest(&(oil - motions.stiffness.oil)) <= 1e-13 * largest(&motions.stiffness.total));
        for motion in 0..4 {
            let held: f64 = motions.element_stiffness.iter().map(|element| element[motion]).sum();
            let damped: f64 = motions.element_damping.iter().map(|element| element[motion]).sum();
            assert_relative_eq!(held, motions.stiffness.total[(motion, motion)], max_relative = 1e-11);
            assert_relative_eq!(damped, motions.damping.total[(motion, motion)], max_relative = 1e-11);
        }
        // Moment about the centre of gravity per body roll: yᵀ K_δ y
        let y = body_motion(&car).column(2).into_owned();
        let roll = (y.transpose() * motions.at_wheels * y)[0];
        assert_relative_eq!(motions.roll.total, roll, max_relative = 1e-12);
        assert_relative_eq!(motions.roll.front + motions.roll.rear, roll, max_relative = 1e-12);
    }

    // Heave and pitch have nothing to do with roll and warp where left and right are alike.
    #[test]
    fn like_sides_decouple(car in cars(SYMMETRIC)) {
        let motions = linear(&car).motions().unwrap();
        for matrix in [&motions.stiffness, &motions.damping] {
            let scale = largest(&matrix.total);
            for (i, j) in [(0, 2), (0, 3), (1, 2), (1, 3)] {
                prop_assert!(matrix.total[(i, j)].abs() <= 1e-11 * scale);
                prop_assert!(matrix.cross[(i, j)].abs() <= 1e-10);
            }
        }
    }

    // Only forces along n leave a rigid body alone: with the body free, K = n nᵀ/(nᵀ(K_δ⁻¹ + K_t⁻¹) n) at the ground.
    #[test]
    fn ground_sees_twist_alone(car in prop_oneof![cars(ANY), cars(DRY)]) {
        let motions = linear(&car).motions().unwrap();
        let n = twist(&car);
        prop_assert!(largest(&(n.transpose() * body_motion(&car))) <= 1e-15);
        let inverse = motions.at_wheels.try_inverse().unwrap();
        let wheels = n * n.transpose() / (n.transpose() * inverse * n)[0];
        let series = inverse + tyres(&car).try_inverse().unwrap();
        let ground = n * n.transpose() / (n.transpose() * series * n)[0];
        prop_assert!(largest(&(motions.at_ground - ground)) <= 1e-9 * largest(&motions.at_wheels));
        let warp = patterns().column(3).into_owned();
        let of_warp = |matrix: &Matrix4<f64>| (warp.transpose() * matrix * warp)[0] / 4.0;
        assert_relative_eq!(motions.warp_free_wheels, of_warp(&wheels), max_relative = 1e-8);
        assert_relative_eq!(motions.warp_free_ground, of_warp(&ground), max_relative = 1e-8);
    }
}

// Moment about the roll axis that the oil gives the body rolled by φ, by the gas law p V^κ = const itself.
fn roll_moment(car: &Value, roll: f64) -> f64 {
    let pressure = car["layout"]["pressure"].as_f64().unwrap();
    let accumulator = &car["layout"]["accumulators"]["main"];
    let (kappa, rest) = (accumulator["exponent"].as_f64().unwrap(), gas_volume(accumulator, pressure, 293.15));
    let circuits = crate::oil::circuits(car);
    let mut moment = 0.0;
    for circuit in &circuits {
        let mut swept = 0.0;
        let mut arm = 0.0;
        for key in circuit["chambers"].as_object().unwrap().keys() {
            let axle = &car[if key.starts_with("front") { "front" } else { "rear" }];
            let cylinder = &axle["both"]["cylinder"];
            let side = if key.contains("left") { 1.0 } else { -1.0 };
            let y = side * axle["track"].as_f64().unwrap() / 2.0;
            let [bore, rod, ratio] = ["bore", "rod", "motion_ratio"].map(|name| cylinder[name].as_f64().unwrap());
            let area = if key.ends_with("bump") { bore * bore } else { -(bore * bore - rod * rod) };
            let area = area * std::f64::consts::FRAC_PI_4 * ratio;
            // δ = −y φ pushes area·δ into the circuit; its force on the body is area·p upwards at y.
            swept += area * -y * roll;
            arm += area * y;
        }
        moment += arm * pressure * (rest / (rest - swept)).powf(kappa);
    }
    moment
}

#[test]
fn roll_stiffness_is_the_slope_of_the_gas_law() {
    for kind in ["roll", "diagonal", "axle_roll", "pitch", "heave"] {
        let mut car = square_oil_car(kind);
        only_gas(&mut car);
        set(&mut car, "front.track", 1.48);
        set(&mut car, "rear.track", 1.56);
        set(&mut car, "rear.both.cylinder", json!({ "bore": 0.027, "rod": 0.012, "motion_ratio": 0.85 }));
        set(&mut car, "front.both.cylinder.motion_ratio", 0.93);
        set(&mut car, "layout.accumulators.main.exponent", 1.31);
        let lin = linear(&car);
        let motions = lin.motions().unwrap();
        // Central differences, steps halved: the error of h² goes.
        let slope = |h: f64| -(roll_moment(&car, h) - roll_moment(&car, -h)) / (2.0 * h);
        let h = 1e-3;
        let expected = (4.0 * slope(h / 2.0) - slope(h)) / 3.0;
        assert_relative_eq!(motions.roll_oil.total, expected, max_relative = 1e-9, epsilon = 1e-6);
        // The stiffness matrix says the same of the body's own roll.
        let conventional = motions.roll_conventional.total;
        assert_relative_eq!(lin.stiffness()[(2, 2)] - conventional, expected, max_relative = 1e-9, epsilon = 1e-6);
    }
}

#[test]
fn equal_tracks_turn_pattern_stiffness_into_roll_stiffness() {
    let mut car = square_oil_car("roll");
    only_gas(&mut car);
    let motions = linear(&car).motions().unwrap();
    // δ = −φ t/2 · (1, −1, 1, −1): K_φ = t² K_roll
    assert_relative_eq!(motions.roll_oil.total, 1.5 * 1.5 * motions.stiffness.oil[(2, 2)], max_relative = 1e-13);
    assert_relative_eq!(motions.roll.total, 1.5 * 1.5 * motions.stiffness.total[(2, 2)], max_relative = 1e-13);
}

#[test]
fn ride_frequencies_and_centres_of_an_uncoupled_car() {
    // k_f a = k_r b decouples heave and pitch: the body bounces on the spot and pitches about its centre of gravity.
    let mut car = square_car();
    set(&mut car, "rear.distance", 1.1);
    set(&mut car, "rear.both.spring.rate", 26e3);
    set(&mut car, "rear.both.tyre.rate", 200e3 * 1.3 / 1.1);
    set(&mut car, "front.both.spring.rate", 22e3);
    let motions = linear(&car).motions().unwrap();
    approx::assert_abs_diff_eq!(motions.pitch_centre, 0.0, epsilon = 1e-9);
    assert!(motions.bounce_centre.abs() > 1e9);
    // Front sprung mass m b/(a + b) on two springs, each in series with its tyre.
    let rate: f64 = 2.0 * 22e3 * 200e3 / 222e3;
    let mass = 1200.0 * 1.1 / 2.4;
    let expected = (rate / mass).sqrt() / (2.0 * std::f64::consts::PI);
    assert_relative_eq!(motions.ride_frequency[0], expected, max_relative = 1e-12);
}
