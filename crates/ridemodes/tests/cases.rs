//! Reference cases: data files with inputs, expected numbers, tolerances and sources, failures beside successes.
//!
//! Any language can read them. A file of `cases/` holds
//!
//! - `[vehicles.NAME]` (optional): vehicles in the vehicle file format, shared by the cases of this file;
//! - `[[case]]` with
//!   - `name`, `source`: what is checked, and where the numbers come from;
//!   - `base`: a name of `[vehicles]` or of a shipped example; or `vehicle`: a table in the vehicle file format;
//!   - `values` (optional): numbers or texts by path, set together on the base;
//!   - `expect`: a list of `{ what, label, of, row, value, rtol, atol }`, where |found − value| ≤ atol + rtol·|value|;
//!   - or `violations`: a list of `{ path, rule, hint }`, exactly those reported, `rule` and `hint` (optional) by a part
//!     of their text; or `singular`: a part of the text of the error that no mode or coupling can be found.
//!
//! `what` is one of
//!
//! | what | means |
//! |---|---|
//! | `damped.X`, `undamped.X`, `locked.X` | of the mode `label` (of several with it, number `row` from 0): X = `frequency` Hz, `omega` = 2π·frequency, `damping_ratio`, or `shape_ratio` = real part of the shape in coordinate `of[0]` over that in `of[1]` |
//! | `states` | number of states |
//! | `coupling` | quasi-static coupling between the wheels `of` [N/m] |
//! | `motions.stiffness.P`, `motions.damping.P` | entry between the motions `of`, P = `conventional`, `oil`, `total` |
//! | `motions.roll`, `motions.roll_oil`, `motions.roll_conventional` | roll stiffness [N·m/rad], `of` = `front`, `rear` or `total` |
//! | `element.mass`, `element.damping`, `element.stiffness` | of the element named `of` |
//! | `settle.X` | X = `oil_load`, `spring_load`, `spring_preload`, `corner_load`, `tyre_load` of the wheel `of`; `pressure`, `gas_volume` of the circuit `of` |
//! | `value` | the number at the path `of` in SI |

use std::collections::BTreeMap;

use ridemodes::{CORNER_NAMES, Error, LinearSystem, MOTION_NAMES, ModeKind, OperatingPoint, Vehicle};
use serde::Deserialize;
use serde_json::{Map, Value};

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct File {
    #[serde(default)]
    vehicles: BTreeMap<String, Value>,
    case: Vec<Case>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct Case {
    name: String,
    source: String,
    base: Option<String>,
    vehicle: Option<Value>,
    #[serde(default)]
    values: Map<String, Value>,
    #[serde(default)]
    expect: Vec<Expectation>,
    violations: Option<Vec<Expected>>,
    singular: Option<String>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct Expectation {
    what: String,
    label: Option<String>,
    #[serde(default)]
    of: Vec<String>,
    #[serde(default)]
    row: usize,
    value: f64,
    #[serde(default)]
    rtol: f64,
    #[serde(default)]
    atol: f64,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct Expected {
    path: String,
    rule: String,
    #[serde(default)]
    hint: String,
}

macro_rules! files {
    ($($name:ident)+) => { $(
        #[test]
        fn $name() {
            run(include_str!(concat!("cases/", stringify!($name), ".toml")));
        }
    )+ };
}

files! { published layouts oil roadster violations }

fn run(text: &str) {
    let file: File = toml::from_str(text).unwrap_or_else(|error| panic!("{error}"));
    let failures: Vec<String> = file
        .case
        .iter()
        .flat_map(|case| {
            assert!(!case.source.is_empty(), "{}: no source", case.name);
            check(&file.vehicles, case).into_iter().map(|failure| format!("{}: {failure}", case.name))
        })
        .collect();
    assert!(failures.is_empty(), "{}", failures.join("\n"));
}

fn check(vehicles: &BTreeMap<String, Value>, case: &Case) -> Vec<String> {
    let car = build(vehicles, case);
    if let Some(expected) = &case.violations {
        return check_violations(car, expected);
    }
    let car = match car {
        Ok(car) => car,
        Err(error) => return vec![error.to_string()],
    };
    if let Some(text) = &case.singular {
        return check_singular(&car, text);
    }
    let point = car.settle().expect("settles");
    let lin = point.linear().expect("linearises");
    case.expect.iter().filter_map(|expectation| compare(&car, &point, &lin, expectation)).collect()
}

fn build(vehicles: &BTreeMap<String, Value>, case: &Case) -> Result<Vehicle, Error> {
    let base = match (&case.vehicle, &case.base) {
        (Some(vehicle), None) => Vehicle::from_value(vehicle)?,
        (None, Some(name)) => match vehicles.get(name) {
            Some(vehicle) => Vehicle::from_value(vehicle)?,
            None => Vehicle::example(name)?,
        },
        _ => panic!("{}: needs a base or a vehicle", case.name),
    };
    if case.values.is_empty() { Ok(base) } else { base.with_changes(case.values.clone()) }
}

fn check_violations(car: Result<Vehicle, Error>, expected: &[Expected]) -> Vec<String> {
    let Err(Error::InvalidInput { violations }) = car else { return vec!["no violation".into()] };
    let mut failures = Vec::new();
    if violations.len() != expected.len() {
        failures.push(format!("{} violations, {} expected: {violations:#?}", violations.len(), expected.len()));
    }
    for one in expected {
        if !violations.iter().any(|v| v.path == one.path && v.rule.contains(&one.rule) && v.hint.contains(&one.hint)) {
            failures.push(format!("{} \"{}\" \"{}\" not among {violations:#?}", one.path, one.rule, one.hint));
        }
    }
    failures
}

fn check_singular(car: &Vehicle, text: &str) -> Vec<String> {
    let result = car.settle().and_then(|point| point.linear()).and_then(|lin| {
        lin.coupling()?;
        lin.modes()
    });
    match result {
        Err(error @ Error::Singular { .. }) if error.to_string().contains(text) => Vec::new(),
        other => vec![format!("{:?} instead of \"{text}\"", other.map(|modes| modes.frequency))],
    }
}

fn compare(car: &Vehicle, point: &OperatingPoint, lin: &LinearSystem, expectation: &Expectation) -> Option<String> {
    let found = find(car, point, lin, expectation);
    let difference = (found - expectation.value).abs();
    let allowed = expectation.atol + expectation.rtol * expectation.value.abs();
    // What is not a number is never near.
    let near = difference <= allowed;
    (!near).then(|| {
        format!(
            "{} {} {:?} is {found}, expected {} (off by {:.1e}, allowed {allowed:.1e})",
            expectation.what,
            expectation.label.as_deref().unwrap_or_default(),
            expectation.of,
            expectation.value,
            difference
        )
    })
}

fn find(car: &Vehicle, point: &OperatingPoint, lin: &LinearSystem, expectation: &Expectation) -> f64 {
    let of = |k: usize| expectation.of[k].as_str();
    let parts: Vec<&str> = expectation.what.split('.').collect();
    match parts[..] {
        ["value"] => car.value(of(0)).unwrap(),
        ["states"] => lin.state_space().unwrap().a.nrows() as f64,
        ["coupling"] => lin.coupling().unwrap()[(place(&CORNER_NAMES, of(0)), place(&CORNER_NAMES, of(1)))],
        ["damped", quantity] => of_mode(lin, ModeKind::Damped, quantity, expectation),
        ["undamped", quantity] => of_mode(lin, ModeKind::Undamped, quantity, expectation),
        ["locked", quantity] => of_mode(lin, ModeKind::Locked, quantity, expectation),
        ["motions", ref rest @ ..] => of_motions(lin, rest, expectation),
        ["element", quantity] => {
            let element = lin.elements().iter().find(|element| &*element.name == of(0)).expect("element");
            match quantity {
                "mass" => element.mass,
                "damping" => element.damping,
                "stiffness" => element.stiffness,
                other => panic!("element.{other}"),
            }
        }
        ["settle", quantity] => of_point(point, quantity, of(0)),
        _ => panic!("{}", expectation.what),
    }
}

fn place(names: &[&str], name: &str) -> usize {
    names.iter().position(|known| *known == name).unwrap_or_else(|| panic!("no {name}"))
}

fn of_mode(lin: &LinearSystem, kind: ModeKind, quantity: &str, expectation: &Expectation) -> f64 {
    let modes = lin.modes_of(kind).unwrap();
    let row = modes.rows(expectation.label.as_deref().expect("label"))[expectation.row];
    match quantity {
        "frequency" => modes.frequency[row],
        "omega" => modes.frequency[row] * 2.0 * std::f64::consts::PI,
        "damping_ratio" => modes.damping_ratio[row],
        "shape_ratio" => {
            let at = |name: &str| modes.shape[(row, modes.coordinates.iter().position(|c| c == name).unwrap())];
            (at(&expectation.of[0]) / at(&expectation.of[1])).re
        }
        other => panic!("mode {other}"),
    }
}

fn of_motions(lin: &LinearSystem, what: &[&str], expectation: &Expectation) -> f64 {
    let motions = lin.motions().unwrap();
    let matrix = match what[0] {
        "stiffness" => &motions.stiffness,
        "damping" => &motions.damping,
        name => {
            let roll = match name {
                "roll" => motions.roll,
                "roll_oil" => motions.roll_oil,
                "roll_conventional" => motions.roll_conventional,
                other => panic!("motions.{other}"),
            };
            return match expectation.of[0].as_str() {
                "front" => roll.front,
                "rear" => roll.rear,
                _ => roll.total,
            };
        }
    };
    let entry = (place(&MOTION_NAMES, &expectation.of[0]), place(&MOTION_NAMES, &expectation.of[1]));
    match what[1] {
        "conventional" => matrix.conventional[entry],
        "oil" => matrix.oil[entry],
        "total" => matrix.total[entry],
        other => panic!("motions.stiffness.{other}"),
    }
}

fn of_point(point: &OperatingPoint, quantity: &str, of: &str) -> f64 {
    let wheel = match quantity {
        "oil_load" => &point.oil_load,
        "spring_load" => &point.spring_load,
        "spring_preload" => &point.spring_preload,
        "corner_load" => &point.corner_load,
        "tyre_load" => &point.tyre_load,
        _ => {
            let circuit = point.circuits.iter().position(|name| name == of).expect("circuit");
            return if quantity == "pressure" { point.pressure[circuit] } else { point.gas_volume[circuit] };
        }
    };
    wheel.as_array()[place(&CORNER_NAMES, of)]
}
