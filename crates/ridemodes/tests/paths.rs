//! Numbers by path: pairs, layouts, settings, and changes that are refused as a whole.

use proptest::prelude::*;
use ridemodes::{Quantity, Vehicle};
use serde_json::json;

use crate::random::{ANY, cars};
use crate::support::{fixed, set, square_car, square_oil_car, vehicle, violations};

fn paths(car: &Vehicle) -> Vec<String> {
    car.parameters().into_iter().map(|parameter| parameter.path).collect()
}

#[test]
fn one_side_of_a_pair_is_read_and_setting_it_splits_the_pair() {
    let car = vehicle(&square_car());
    assert_eq!(car.value("front.left.spring.rate").unwrap(), 22e3);
    assert!(!paths(&car).iter().any(|path| path.contains("left")));
    let split = car.with_values([("front.left.spring.rate", 30e3)]).unwrap();
    assert_eq!(split.value("front.left.spring.rate").unwrap(), 30e3);
    assert_eq!(split.value("front.right.spring.rate").unwrap(), 22e3);
    assert_eq!(split.value("rear.both.spring.rate").unwrap(), 22e3);
    assert!(paths(&split).contains(&"front.right.spring.rate".into()));
    assert!(!paths(&split).iter().any(|path| path.starts_with("front.both")));
    // Alike sides still read as both; others say so.
    assert_eq!(split.value("front.both.tyre.rate").unwrap(), 200e3);
    assert!(violations(split.value("front.both.spring.rate"))[0].rule.contains("differ"));
    // The original is untouched.
    assert_eq!(car.value("front.both.spring.rate").unwrap(), 22e3);
}

#[test]
fn both_on_a_split_axle_sets_two_sides() {
    let split = vehicle(&square_car()).with_values([("rear.right.tyre.rate", 210e3)]).unwrap();
    let set = split.with_values([("rear.both.tyre.rate", 190e3)]).unwrap();
    for path in ["rear.left.tyre.rate", "rear.right.tyre.rate", "rear.both.tyre.rate"] {
        assert_eq!(set.value(path).unwrap(), 190e3);
    }
    // It may stand beside another number's split of the same axle.
    let car = vehicle(&square_car());
    let set = car.with_values([("rear.left.tyre.rate", 1.9e5), ("rear.both.spring.rate", 25e3)]).unwrap();
    assert_eq!(set.value("rear.right.spring.rate").unwrap(), 25e3);
    assert_eq!((set.value("rear.left.tyre.rate").unwrap(), set.value("rear.right.tyre.rate").unwrap()), (1.9e5, 200e3));
}

#[test]
fn both_sides_at_once_split_the_pair() {
    let car = vehicle(&square_car());
    let set = car.with_values([("front.left.spring.rate", 20e3), ("front.right.spring.rate", 24e3)]).unwrap();
    assert_eq!(set.value("front.left.spring.rate").unwrap(), 20e3);
    assert_eq!(set.value("front.right.spring.rate").unwrap(), 24e3);
}

#[test]
fn both_is_not_half_applied_where_one_side_lacks_the_part() {
    let mut car = square_car();
    let both = car["front"].as_object_mut().unwrap().remove("both").unwrap();
    set(&mut car, "front.left", both.clone());
    set(&mut car, "front.right", both);
    car["front"]["right"].as_object_mut().unwrap().remove("damper");
    let car = vehicle(&car);
    assert!(car.value("front.both.damper.coefficient").is_err());
    let found = car.with_values([("front.both.damper.coefficient", 900.0)]);
    assert!(found.is_err(), "left is {:?}", found.unwrap().value("front.left.damper.coefficient"));
}

#[test]
fn a_layouts_circuit_is_read_and_setting_it_splits_the_layout() {
    let car = vehicle(&square_oil_car("roll"));
    assert_eq!(car.circuits(), ["left", "right"]);
    assert_eq!(car.value("circuits.left.pressure").unwrap(), 30e5);
    assert_eq!(car.value("circuits.right.accumulators.main.precharge").unwrap(), 18e5);
    assert_eq!(car.value("circuits.left.chambers.front_left_bump.throttle").unwrap(), 0.0);
    let split = car.with_values([("circuits.left.pressure", "35 bar abs")]).unwrap();
    assert_eq!(split.value("circuits.left.pressure").unwrap(), 35e5);
    assert_eq!(split.value("circuits.right.pressure").unwrap(), 30e5);
    assert!(split.value("layout.pressure").is_err());
    // The same car otherwise: with the pressure put back it has the same modes.
    let back = split.with_values([("circuits.left.pressure", 30e5)]).unwrap();
    let modes = |car: &Vehicle| crate::support::of(car).modes().unwrap();
    assert_eq!(modes(&back).pole, modes(&car).pole);
}

#[test]
fn a_layout_splits_though_settings_speak_of_it() {
    let car = Vehicle::example("roadster").unwrap();
    let split = car.with_values([("circuits.left.accumulators.main.precharge", "18 bar abs")]).unwrap();
    assert_eq!(split.value("circuits.left.accumulators.main.precharge").unwrap(), 18e5);
    assert_eq!(split.value("circuits.right.accumulators.main.precharge").unwrap(), 19e5);
    // Settings of the layout still reach every circuit.
    let soft = split.with_setting("soft").unwrap();
    for circuit in ["left", "right"] {
        assert_eq!(soft.value(&format!("circuits.{circuit}.accumulators.main.throttle")).unwrap(), 3e8);
    }
}

#[test]
fn an_optional_number_may_be_given_later() {
    let car = vehicle(&square_car());
    assert!(car.value("front.both.damper.mount_rate").is_err());
    let mounted = car.with_values([("front.both.damper.mount_rate", "500 N/mm")]).unwrap();
    assert_eq!(mounted.value("front.left.damper.mount_rate").unwrap(), 5e5);
    let one = car.with_values([("rear.left.damper.mount_rate", 4e5)]).unwrap();
    assert_eq!(one.value("rear.left.damper.mount_rate").unwrap(), 4e5);
    assert!(one.value("rear.right.damper.mount_rate").is_err());
    let both = one.with_values([("rear.both.damper.mount_rate", 6e5)]).unwrap();
    assert_eq!(both.value("rear.right.damper.mount_rate").unwrap(), 6e5);
}

#[test]
fn settings_override_by_path() {
    let mut car = square_oil_car("roll");
    car["settings"] = json!({
        "soft": { "front.both.spring.rate": "18 N/mm", "layout.accumulators.main.throttle": 1e8 },
        "nested": { "front": { "left": { "spring": { "rate": 19e3 } } } },
    });
    let car = vehicle(&car);
    assert_eq!(car.settings(), ["nested", "soft"]);
    let soft = car.with_setting("soft").unwrap();
    assert_eq!(soft.value("front.right.spring.rate").unwrap(), 18e3);
    assert_eq!(soft.value("circuits.left.accumulators.main.throttle").unwrap(), 1e8);
    assert_eq!(soft.value("rear.both.spring.rate").unwrap(), 22e3);
    let nested = car.with_setting("nested").unwrap();
    assert_eq!(nested.value("front.left.spring.rate").unwrap(), 19e3);
    assert_eq!(nested.value("front.right.spring.rate").unwrap(), 22e3);
    let unknown = violations(car.with_setting("sofd"));
    assert!(unknown[0].hint.contains("soft"), "{unknown:?}");
    // They are kept.
    assert_eq!(soft.settings(), ["nested", "soft"]);
}

#[test]
fn settings_are_checked_with_the_file() {
    let mut car = square_oil_car("roll");
    car["settings"] = json!({
        "one": { "front.both.spring.rat": 1.0 },
        "two": { "front.both.spring.rate": "1 kg" },
        "three": { "front.both.spring.rate": -5.0 },
        "bad name": {},
        "four": 3,
    });
    let found = violations(Vehicle::from_value(&car));
    for path in [
        "settings.one.front.both.spring.rat",
        "settings.two.front.both.spring.rate",
        "settings.three.front.both.spring.rate",
        "settings.bad name",
        "settings.four",
    ] {
        assert_eq!(found.iter().filter(|violation| violation.path == path).count(), 1, "{path}: {found:#?}");
    }
    assert_eq!(found.len(), 5, "{found:#?}");
    // A rule between numbers, and paths that overlap.
    car["settings"] = json!({ "wide": { "front.both.cylinder.rod": 0.04 } });
    let found = violations(Vehicle::from_value(&car));
    assert_eq!(found[0].path, "settings.wide.front.both.cylinder.rod");
    car["settings"] = json!({ "twice": { "front.both.spring.rate": 2e4, "front.left.spring.rate": 3e4 } });
    let found = violations(Vehicle::from_value(&car));
    assert_eq!(found.len(), 1, "{found:#?}");
}

#[test]
fn the_same_path_twice_is_refused() {
    let car = vehicle(&square_car());
    for pair in [
        ["body.mass", "body.mass"],
        ["front.left.spring.rate", "front.left.spring.rate"],
        ["front.both.spring.rate", "front.right.spring.rate"],
        ["front.both.damper.mount_rate", "front.both.damper.mount_rate"],
        ["front.both.damper.mount_rate", "front.left.damper.mount_rate"],
    ] {
        let forwards = car.with_values(pair.map(|path| (path, 1e4)));
        assert!(!violations(forwards).is_empty(), "{pair:?}");
        let backwards = car.with_values([(pair[1], 1e4), (pair[0], 1e4)]);
        assert!(!violations(backwards).is_empty(), "{pair:?}");
    }
}

#[test]
fn nothing_is_half_applied() {
    let car = vehicle(&square_oil_car("roll"));
    let before = car.clone();
    let changes: [(&str, Quantity); 6] = [
        ("body.mass", 1000.0.into()),
        ("front.left.spring.rate", "25 kg".into()),
        ("rear.both.tyre.rate", f64::NAN.into()),
        ("body.roll_inertia", f64::INFINITY.into()),
        ("layout.pressure", "20 bar".into()),
        ("no.such.path", 1.0.into()),
    ];
    let found = violations(car.with_values(changes));
    let refused: Vec<&str> = found.iter().map(|violation| violation.path.as_str()).collect();
    assert_eq!(
        refused,
        ["body.roll_inertia", "front.left.spring.rate", "layout.pressure", "no.such.path", "rear.both.tyre.rate"]
    );
    assert_eq!(car, before);
}

proptest! {
    #![proptest_config(fixed(48))]

    // Any number, to any value: a vehicle with that number, or a refusal that names the path.
    #[test]
    fn any_number_at_any_path(car in cars(ANY), place in 0..200_usize, value in prop_oneof![-1e3..1e3, proptest::num::f64::ANY]) {
        let car = vehicle(&car);
        let parameters = car.parameters();
        let parameter = &parameters[place % parameters.len()];
        match car.with_values([(&parameter.path, value)]) {
            Ok(changed) => {
                prop_assert_eq!(changed.value(&parameter.path).unwrap(), value);
                prop_assert!(parameter.bounds.holds(value));
            }
            Err(error) => prop_assert!(error.to_string().contains("violation"), "{}", error),
        }
    }

    // One side of every pair, one circuit of every layout.
    #[test]
    fn members_of_groups_split(car in cars(ANY), factor in 0.9..1.1) {
        let car = vehicle(&car);
        for path in ["front.left.spring.rate", "rear.right.tyre.rate"] {
            let value = car.value(path).unwrap() * factor;
            let changed = car.with_values([(path, value)]).unwrap();
            prop_assert_eq!(changed.value(path).unwrap(), value);
            prop_assert_eq!(Vehicle::from_toml(&changed.to_toml()).unwrap(), changed);
        }
        for circuit in car.circuits() {
            let path = format!("circuits.{circuit}.pressure");
            let value = car.value(&path).unwrap() * factor;
            let changed = car.with_values([(path.as_str(), value)]).unwrap();
            for other in car.circuits() {
                let read = changed.value(&format!("circuits.{other}.pressure")).unwrap();
                let expected = if other == circuit { value } else { car.value(&format!("circuits.{other}.pressure")).unwrap() };
                prop_assert_eq!(read, expected);
            }
        }
    }
}
