//! A file with many faults reports each of them once, all together.

use ridemodes::{Vehicle, Violation};

use crate::support::violations;

const FAULTY: &str = r#"
format = 1
name = 3
[body]
mass = -1200.0
roll_inertia = nan
pitch_inertia = inf
cg_height = true
masss = 1.0
[front]
distance = "1.3 kg"
track = 1.5
[front.both]
unsprung_mass = 40.0
tyre = { rate = 200e3 }
spring = { rate = "22 furlong" }
cylinder = { bore = "25 mm", rod = "30 mm", stroke = "0.17" }
[rear]
distance = 1.3
[rear.both]
unsprung_mass = 40.0
tyre = [1, 2]
[oil]
density = 865.0
kinematic_viscosity = 15e-6
kinematic_viscosity_hot = 3.8e-6
air_fraction = 0.9
[circuits.left]
pressure = "30 bar"
chambers = { front_left_bump = { line = { length = 1.0, bore = 0.01, inertia = "plugg" } }, front_left_rebound = {}, front_centre_bump = {} }
[circuits."no.dots"]
pressure = 30e5
chambers = { front_right_rebound = {}, front_left_rebound = {} }
accumulators = { main = { precharge = "18 bar abs" } }
[seats]
driver = 4
[settings.soft]
"front.both.spring.rat" = 1.0
"#;

// Path, value, unit, part of the rule, part of the hint (empty where none helps).
const EXPECTED: [[&str; 5]; 22] = [
    ["name", "3", "", "must be a text", ""],
    ["body.mass", "-1200.0", "kg", "greater than 0", ""],
    ["body.roll_inertia", "\"NaN\"", "kg*m^2", "finite", ""],
    ["body.pitch_inertia", "\"inf\"", "kg*m^2", "finite", ""],
    ["body.cg_height", "true", "m", "must be a number", ""],
    ["body.masss", "1.0", "", "unknown key", "mass"],
    ["front.distance", "\"1.3 kg\"", "m", "does not measure", "12 mm"],
    ["front.both.spring.rate", "\"22 furlong\"", "N/m", "not a unit", "25 N/mm"],
    ["front.both.cylinder.rod", "0.03", "m", "less than the bore", "exchanged"],
    ["front.both.cylinder.stroke", "\"0.17\"", "m", "needs its unit", "SI"],
    ["rear.track", "", "m", "is missing", "Track width"],
    ["rear.both.tyre", "a list", "", "must be a table", ""],
    ["oil.air_fraction", "0.9", "1", "at most 0.5", ""],
    ["circuits.left.pressure", "\"30 bar\"", "Pa", "abs or gauge", "31.01325 bar absolute"],
    ["circuits.left.chambers.front_left_bump.line.inertia", "\"plugg\"", "", "must be one of", "plug"],
    ["circuits.left.chambers.front_centre_bump", "\"front_centre_bump\"", "", "no such chamber", "front_"],
    ["circuits.no.dots", "\"no.dots\"", "", "letters, digits", "dots"],
    ["circuits.no.dots.chambers.front_left_rebound", "", "", "already in circuit left", ""],
    ["circuits.no.dots.accumulators.main.precharge", "1800000", "Pa", "needs a volume", "gas_volume"],
    ["circuits.*.chambers.front_right_bump", "", "", "connected to no circuit", "layout"],
    ["seats.driver", "4", "", "must be a table", ""],
    ["settings.soft.front.both.spring.rat", "1.0", "", "no such path", "front.both.spring.rate"],
];

fn matches(violation: &Violation, [path, value, unit, rule, hint]: &[&str; 5]) -> bool {
    violation.path == *path
        && violation.value == *value
        && violation.unit == *unit
        && violation.rule.contains(rule)
        && violation.hint.contains(hint)
}

#[test]
fn each_fault_is_named_once() {
    let found = violations(Vehicle::from_toml(FAULTY));
    for expected in &EXPECTED {
        let count = found.iter().filter(|violation| matches(violation, expected)).count();
        assert_eq!(count, 1, "{expected:?} in {found:#?}");
    }
    let extra: Vec<&Violation> = found.iter().filter(|v| !EXPECTED.iter().any(|e| matches(v, e))).collect();
    assert!(extra.is_empty(), "{extra:#?}");
    assert!(found.windows(2).all(|pair| pair[0].path <= pair[1].path), "ordered by path");
}

#[test]
fn the_message_says_it_in_one_line_each() {
    let error = Vehicle::from_toml(FAULTY).unwrap_err();
    let text = error.to_string();
    assert!(text.starts_with(&format!("{} violations in the input:", EXPECTED.len())), "{text}");
    assert_eq!(text.lines().count(), EXPECTED.len() + 1);
    assert!(text.contains("body.mass = -1200.0 [kg]: must be greater than 0"), "{text}");
}

#[test]
fn a_list_where_names_go_says_so() {
    let mut car = crate::support::square_oil_car("roll");
    crate::support::set(&mut car, "layout.accumulators", serde_json::json!([{ "volume": 1e-3 }]));
    let found = violations(Vehicle::from_value(&car));
    assert_eq!(found.len(), 1, "{found:#?}");
    assert_eq!(found[0].path, "layout.accumulators");
    assert!(found[0].rule.contains("keyed by names") && found[0].hint.contains("name"), "{found:?}");
}

#[test]
fn a_number_out_of_range_is_not_called_too_small() {
    // "1e999 kg" is infinite: the rule that it breaks is that of a finite number.
    let mut car = crate::support::square_car();
    crate::support::set(&mut car, "body.mass", "1e999 kg");
    let found = violations(Vehicle::from_value(&car));
    assert_eq!(found.len(), 1);
    assert!(found[0].rule.contains("finite"), "{found:?}");
}
