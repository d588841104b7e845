//! The vehicle at rest in its design condition.

use approx::assert_relative_eq;
use proptest::prelude::*;
use ridemodes::STANDARD_GRAVITY;
use ridemodes::nalgebra::{Vector3, Vector4};
use serde_json::json;

use crate::oil::{Oil, circuits, gas_volume};
use crate::random::{ANY, cars};
use crate::support::{body_motion, corner, fixed, number, set, square_car, square_oil_car, vehicle};

proptest! {
    #![proptest_config(fixed(96))]

    // JᵀF = [m g, 0, 0] and the warp preload (F_FL − F_FR − F_RL + F_RR)/4.
    #[test]
    fn loads_balance_the_body(car in cars(ANY), preload in -300.0_f64..300.0) {
        let mut car = car;
        set(&mut car, "body.warp_preload", preload);
        let point = vehicle(&car).settle().unwrap();
        let load = Vector4::from(*point.corner_load.as_array());
        let weight = car["body"]["mass"].as_f64().unwrap() * STANDARD_GRAVITY;
        let left: Vector3<f64> = body_motion(&car).transpose() * load - Vector3::new(weight, 0.0, 0.0);
        prop_assert!(left.norm() <= 1e-11 * weight, "{}", left);
        let warp: f64 = (load[0] - load[1] - load[2] + load[3]) / 4.0;
        prop_assert!((warp - preload).abs() <= 1e-12 * weight);
        for i in 0..4 {
            let wheel = corner(&car, i)["unsprung_mass"].as_f64().unwrap() * STANDARD_GRAVITY;
            assert_relative_eq!(point.tyre_load.as_array()[i], load[i] + wheel, max_relative = 1e-13);
        }
    }

    // F_oil = Bᵀ(p − p_atm); the spring carries the rest, over its motion ratio.
    #[test]
    fn oil_and_springs_share_the_load(car in cars(ANY)) {
        let point = vehicle(&car).settle().unwrap();
        let mut expected = [0.0; 4];
        for circuit in circuits(&car) {
            let gauge = circuit["pressure"].as_f64().unwrap() - 101_325.0;
            for key in circuit["chambers"].as_object().unwrap().keys() {
                let (wheel, area) = crate::oil::signed_area(&car, key);
                expected[wheel] += area * gauge;
            }
        }
        for i in 0..4 {
            let (load, oil) = (point.corner_load.as_array()[i], point.oil_load.as_array()[i]);
            prop_assert!((oil - expected[i]).abs() <= 1e-12 * load.abs());
            let ratio = number(&corner(&car, i)["spring"]["motion_ratio"], 1.0);
            assert_relative_eq!(point.spring_load.as_array()[i], load - oil, max_relative = 1e-12);
            assert_relative_eq!(point.spring_preload.as_array()[i], (load - oil) / ratio, max_relative = 1e-12);
        }
    }

    // V_g = V₀ (p₀/p)(T/T₀) per circuit, in whatever order the circuits come.
    #[test]
    fn gas_fills_what_its_charge_leaves(car in cars(ANY)) {
        let point = vehicle(&car).settle().unwrap();
        let temperature = number(&car["temperature"], 293.15);
        let mut expected: Vec<f64> = circuits(&car)
            .iter()
            .map(|circuit| {
                let pressure = circuit["pressure"].as_f64().unwrap();
                let accumulators = circuit["accumulators"].as_object().unwrap();
                accumulators.values().map(|accumulator| gas_volume(accumulator, pressure, temperature)).sum::<f64>()
            })
            .collect();
        let mut found = point.gas_volume.clone();
        found.sort_by(f64::total_cmp);
        expected.sort_by(f64::total_cmp);
        for (found, expected) in found.iter().zip(&expected) {
            assert_relative_eq!(*found, *expected, max_relative = 1e-13);
        }
        prop_assert_eq!(point.circuits.len(), Oil::new(&car).circuits());
        for accumulator in &point.accumulators {
            prop_assert!(accumulator.gas_volume <= accumulator.full_volume * (1.0 + 1e-14));
            prop_assert!(accumulator.empty_pressure <= accumulator.pressure);
            // p V/T is that of the charge.
            let amount = accumulator.empty_pressure * accumulator.full_volume;
            assert_relative_eq!(amount, accumulator.pressure * accumulator.gas_volume, max_relative = 1e-13);
        }
    }
}

#[test]
fn the_design_condition_is_where_travel_counts_from() {
    let point = vehicle(&square_car()).settle().unwrap();
    assert_eq!(point.attitude, [0.0; 3]);
    assert_eq!(point.deflection.as_array(), &[0.0; 4]);
    assert!(point.warnings.is_empty(), "{:?}", point.warnings);
}

#[test]
fn what_cannot_be_is_warned_of() {
    // An empty accumulator, and springs that would have to pull.
    let mut car = square_oil_car("heave");
    set(&mut car, "layout.pressure", 17e5);
    let warnings = vehicle(&car).settle().unwrap().warnings;
    assert!(warnings.iter().any(|text| text.contains("accumulators.main") && text.contains("empty")), "{warnings:?}");
    let mut car = square_oil_car("heave");
    set(&mut car, "layout.pressure", 300e5);
    let warnings = vehicle(&car).settle().unwrap().warnings;
    assert_eq!(warnings.iter().filter(|text| text.contains("pull")).count(), 4, "{warnings:?}");
    // No spring beside the oil, and the wrong pressure.
    let mut car = square_oil_car("heave");
    car["front"]["both"].as_object_mut().unwrap().remove("spring");
    let warnings = vehicle(&car).settle().unwrap().warnings;
    assert!(warnings.iter().any(|text| text.contains("front_left") && text.contains("too low")), "{warnings:?}");
    // Through such a pressure that the rod area carries the corner there is nothing to warn of.
    let area = std::f64::consts::FRAC_PI_4 * 0.014 * 0.014;
    let pressure = 300.0 * STANDARD_GRAVITY / area + 101_325.0;
    set(&mut car, "layout.pressure", pressure);
    set(&mut car, "layout.accumulators.main", json!({ "gas_volume": 0.4e-3, "precharge": 0.5 * pressure }));
    let point = vehicle(&car).settle().unwrap();
    assert_relative_eq!(point.oil_load.as_array()[0], 300.0 * STANDARD_GRAVITY, max_relative = 1e-9);
    assert!(!point.warnings.iter().any(|text| text.contains("front")), "{:?}", point.warnings);
}
