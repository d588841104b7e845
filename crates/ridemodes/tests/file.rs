//! Reading and writing vehicles: what comes back is what went in.

use proptest::prelude::*;
use ridemodes::spec::Spec;
use ridemodes::{Error, Quantity, Vehicle};
use serde_json::{Value, json};

use crate::random::{ANY, DRY, cars};
use crate::support::{fixed, set, square_car, square_oil_car, vehicle, violations};

fn assert_round_trips(car: &Vehicle) {
    assert_eq!(&Vehicle::from_toml(&car.to_toml()).unwrap(), car);
    assert_eq!(&Vehicle::from_json(&car.to_json()).unwrap(), car);
    assert_eq!(&Vehicle::from_text(&car.to_toml()).unwrap(), car);
    assert_eq!(&Vehicle::from_text(&car.to_json()).unwrap(), car);
    assert_eq!(&Vehicle::from_value(&car.to_value()).unwrap(), car);
    // What is written is written alike: order by name, SI.
    assert_eq!(Vehicle::from_toml(&car.to_toml()).unwrap().to_json(), car.to_json());
}

#[test]
fn examples_are_the_same_in_both_forms() {
    for name in Vehicle::examples() {
        let car = Vehicle::example(name).unwrap();
        assert!(car.name().is_some() && car.description().is_some());
        assert_round_trips(&car);
        for setting in car.settings() {
            assert_round_trips(&car.with_setting(setting).unwrap());
        }
        let changed = car.with_values([("front.left.tyre.rate", 2.2e5)]).unwrap();
        assert_ne!(changed, car);
        assert_round_trips(&changed);
    }
}

#[test]
fn an_unknown_example_names_the_nearest() {
    let found = violations(Vehicle::example("roadstar"));
    assert!(found[0].hint.contains("roadster"), "{found:?}");
}

#[test]
fn text_with_units_and_numbers_in_si_are_the_same() {
    let mut car = square_oil_car("roll");
    let numbers = vehicle(&car);
    for (path, text) in [
        ("body.mass", "1.2 t"),
        ("front.both.spring.rate", "22 N/mm"),
        ("front.both.cylinder.bore", "30 mm"),
        ("rear.track", "150 cm"),
        ("layout.volume", "50 cm^3"),
        ("layout.accumulators.main.volume", "0.4 L"),
        ("oil.kinematic_viscosity", "15 mm^2/s"),
        ("layout.accumulators.main.throttle", "6 bar*s/L"),
    ] {
        set(&mut car, path, text);
    }
    for parameter in vehicle(&car).parameters() {
        let expected = numbers.value(&parameter.path).unwrap();
        approx::assert_relative_eq!(parameter.value, expected, max_relative = 1e-14);
    }
}

#[test]
fn gauge_counts_from_the_atmosphere_of_the_file() {
    let mut car = square_oil_car("roll");
    set(&mut car, "layout.pressure", "30 bar gauge");
    assert_eq!(vehicle(&car).value("layout.pressure").unwrap(), 30e5 + 101_325.0);
    set(&mut car, "atmosphere", 80e3);
    assert_eq!(vehicle(&car).value("layout.pressure").unwrap(), 30e5 + 80e3);
    let changed = vehicle(&car).with_values([("layout.pressure", "20 bar gauge")]).unwrap();
    assert_eq!(changed.value("layout.pressure").unwrap(), 20e5 + 80e3);
    set(&mut car, "layout.pressure", "30 bar abs");
    assert_eq!(vehicle(&car).value("layout.pressure").unwrap(), 30e5);
}

#[test]
fn gauge_counts_from_the_atmosphere_set_beside_it() {
    let car = vehicle(&square_oil_car("roll"));
    let changes = |path: &'static str| [("atmosphere", Quantity::from(80e3)), (path, "20 bar gauge".into())];
    for path in ["layout.pressure", "circuits.left.pressure"] {
        let changed = car.with_values(changes(path)).unwrap();
        assert_eq!(changed.value(path).unwrap(), 20e5 + 80e3, "{path}");
    }
}

#[test]
fn formats_are_told_apart() {
    let mut car = square_car();
    let bare = vehicle(&car);
    set(&mut car, "format", 1);
    assert_eq!(vehicle(&car), bare);
    assert_eq!(bare.to_value()["format"], json!(1));
    set(&mut car, "format", 7);
    let found = violations(Vehicle::from_value(&car));
    assert_eq!(found.len(), 1);
    assert!(found[0].rule.contains('7') && found[0].rule.contains("newer"), "{found:?}");
    for wrong in [json!(0), json!("one"), json!(1.5), json!(-1)] {
        set(&mut car, "format", wrong);
        assert_eq!(violations(Vehicle::from_value(&car))[0].path, "format");
    }
}

#[test]
fn text_that_is_neither_says_where() {
    match Vehicle::from_toml("[body]\nmass = = 3\n") {
        Err(Error::Parse { line: 2, column, message }) => assert!(column > 0 && !message.is_empty()),
        other => panic!("{other:?}"),
    }
    match Vehicle::from_text("{\n  \"body\": nope\n}") {
        Err(Error::Parse { line: 2, .. }) => {}
        other => panic!("{other:?}"),
    }
    assert!(matches!(Vehicle::from_toml("body = 1\nbody = 2"), Err(Error::Parse { .. })));
    assert_eq!(violations(Vehicle::from_value(&json!([1]))).len(), 1);
}

#[test]
fn files_are_saved_and_loaded() {
    let folder = std::env::temp_dir().join(format!("ridemodes-test-{}", std::process::id()));
    std::fs::create_dir_all(&folder).unwrap();
    let car = Vehicle::example("roadster").unwrap();
    for name in ["car.toml", "car.json"] {
        let path = folder.join(name);
        car.save(&path).unwrap();
        assert_eq!(Vehicle::load(&path).unwrap(), car);
    }
    // Nothing but the two files is left behind.
    assert_eq!(std::fs::read_dir(&folder).unwrap().count(), 2);
    let missing = folder.join("none.toml");
    match Vehicle::load(&missing) {
        Err(Error::File { path, code: Some(_), .. }) => assert!(path.ends_with("none.toml")),
        other => panic!("{other:?}"),
    }
    assert!(matches!(car.save(folder.join("no").join("such").join("car.toml")), Err(Error::File { .. })));
    std::fs::remove_dir_all(&folder).unwrap();
}

#[test]
fn a_spec_in_code_is_a_file() {
    let car = Vehicle::example("roadster").unwrap();
    let spec: Spec = serde_json::from_value(car.to_value()).unwrap();
    assert_eq!(Vehicle::from_spec(&spec).unwrap(), car);
    let text = serde_json::to_string(&car).unwrap();
    assert_eq!(serde_json::from_str::<Vehicle>(&text).unwrap(), car);
}

#[test]
fn results_survive_serialisation() {
    let lin = crate::support::of(&Vehicle::example("roadster").unwrap());
    let text = serde_json::to_string(&lin).unwrap();
    let back: ridemodes::LinearSystem = serde_json::from_str(&text).unwrap();
    assert_eq!(back, lin);
    assert_eq!(back.modes().unwrap(), lin.modes().unwrap());
}

#[test]
fn order_in_the_file_does_not_matter() {
    let car = square_oil_car("diagonal");
    fn reversed(value: &Value) -> Value {
        match value {
            Value::Object(table) => Value::Object(table.iter().rev().map(|(k, v)| (k.clone(), reversed(v))).collect()),
            other => other.clone(),
        }
    }
    assert_eq!(vehicle(&reversed(&car)), vehicle(&car));
}

proptest! {
    #![proptest_config(fixed(64))]

    #[test]
    fn any_car_round_trips(car in prop_oneof![cars(ANY), cars(DRY)]) {
        let car = vehicle(&car);
        assert_round_trips(&car);
        let list = car.parameters();
        prop_assert!(list.windows(2).all(|pair| pair[0].path < pair[1].path));
        for parameter in &list {
            prop_assert_eq!(car.value(&parameter.path).unwrap(), parameter.value);
            prop_assert!(parameter.bounds.holds(parameter.value));
            prop_assert!(!parameter.unit.is_empty() && !parameter.meaning.is_empty());
        }
        // Every number set to itself is the same vehicle.
        let same = car.with_values(list.iter().map(|parameter| (&parameter.path, parameter.value))).unwrap();
        prop_assert_eq!(same, car);
    }
}
