//! Cars as data, and small helpers of the tests.

use proptest::test_runner::{Config, RngSeed};
use ridemodes::nalgebra::{DMatrix, DVector, Matrix4, Matrix4x3, Vector4};
use ridemodes::{Complex64, Error, LinearSystem, Vehicle, Violation};
use serde_json::{Value, json};

/// A car that is alike front and rear, left and right, on springs and dampers alone.
pub(crate) fn square_car() -> Value {
    let axle = json!({
        "distance": 1.3, "track": 1.5,
        "both": {
            "unsprung_mass": 40.0,
            "tyre": { "rate": 200e3 },
            "spring": { "rate": 22e3 },
            "damper": { "coefficient": 1500.0 },
        },
    });
    json!({
        "body": { "mass": 1200.0, "roll_inertia": 430.0, "pitch_inertia": 1500.0, "cg_height": 0.5 },
        "front": axle, "rear": axle,
    })
}

/// The square car with a layout of oil in place of dampers; cylinders alike at every corner.
pub(crate) fn square_oil_car(kind: &str) -> Value {
    let mut car = square_car();
    for axle in ["front", "rear"] {
        let both = car[axle]["both"].as_object_mut().unwrap();
        both.remove("damper");
        both.insert("cylinder".into(), json!({ "bore": 0.03, "rod": 0.014, "stroke": 0.16 }));
    }
    car["oil"] = json!({
        "density": 865.0, "bulk_modulus": 1.4e9, "kinematic_viscosity": 15e-6, "kinematic_viscosity_hot": 3.8e-6,
    });
    car["layout"] = json!({
        "kind": kind, "pressure": 30e5, "volume": 50e-6,
        "accumulators": { "main": { "volume": 0.4e-3, "precharge": 18e5, "throttle": 6e8 } },
    });
    car
}

/// Takes out all that makes oil compressible or slow: only the gas is left.
pub(crate) fn only_gas(car: &mut Value) {
    car["oil"].as_object_mut().unwrap().remove("bulk_modulus");
    car["layout"]["accumulators"]["main"]["throttle"] = json!(0.0);
}

/// Sets a value at a dotted path; the tables on the way are there or made.
pub(crate) fn set(car: &mut Value, path: &str, value: impl Into<Value>) {
    let mut place = car;
    for key in path.split('.') {
        place = &mut place[key];
    }
    *place = value.into();
}

pub(crate) fn vehicle(car: &Value) -> Vehicle {
    Vehicle::from_value(car).unwrap_or_else(|error| panic!("{error}\n{car:#}"))
}

pub(crate) fn linear(car: &Value) -> LinearSystem {
    of(&vehicle(car))
}

pub(crate) fn of(car: &Vehicle) -> LinearSystem {
    car.settle().and_then(|point| point.linear()).unwrap_or_else(|error| panic!("{error}"))
}

/// Every violation of a result that must be an error.
pub(crate) fn violations<T: std::fmt::Debug>(result: Result<T, Error>) -> Vec<Violation> {
    match result {
        Err(Error::InvalidInput { violations }) => violations,
        other => panic!("no InvalidInput: {other:?}"),
    }
}

/// Free motion or locked chamber that a result names.
pub(crate) fn singular<T>(result: Result<T, Error>) -> String {
    match result {
        Err(Error::Singular { matrix, motion }) => format!("{matrix}: {motion}"),
        Err(other) => panic!("{other}"),
        Ok(_) => panic!("not an error"),
    }
}

/// One corner of a car given as data: front left, front right, rear left, rear right.
pub(crate) fn corner(car: &Value, index: usize) -> &Value {
    let axle = &car[if index < 2 { "front" } else { "rear" }];
    let side = if index.is_multiple_of(2) { "left" } else { "right" };
    axle.get("both").unwrap_or_else(|| &axle[side])
}

pub(crate) fn number(value: &Value, default: f64) -> f64 {
    value.as_f64().unwrap_or(default)
}

/// J: rows [1, −x, y] of the wheels from the centre of gravity.
pub(crate) fn body_motion(car: &Value) -> Matrix4x3<f64> {
    let offset = number(&car["body"]["cg_offset"], 0.0);
    Matrix4x3::from_fn(|i, k| {
        let axle = &car[if i < 2 { "front" } else { "rear" }];
        let x = axle["distance"].as_f64().unwrap() * if i < 2 { 1.0 } else { -1.0 };
        let y = axle["track"].as_f64().unwrap() / 2.0 * if i % 2 == 0 { 1.0 } else { -1.0 } - offset;
        [1.0, -x, y][k]
    })
}

/// Twist n, the one force pattern that leaves a rigid body alone: nᵀJ = 0.
pub(crate) fn twist(car: &Value) -> Vector4<f64> {
    let (front, rear) = (car["front"]["track"].as_f64().unwrap(), car["rear"]["track"].as_f64().unwrap());
    Vector4::new(1.0 / front, -1.0 / front, -1.0 / rear, 1.0 / rear)
}

/// Tyre rates on the diagonal.
pub(crate) fn tyres(car: &Value) -> Matrix4<f64> {
    Matrix4::from_diagonal(&Vector4::from_fn(|i, _| corner(car, i)["tyre"]["rate"].as_f64().unwrap()))
}

/// The four motions as columns: heave, pitch (front wheels down), roll (left up), warp.
pub(crate) fn patterns() -> Matrix4<f64> {
    Matrix4::new(1.0, -1.0, 1.0, 1.0, 1.0, -1.0, -1.0, -1.0, 1.0, 1.0, 1.0, -1.0, 1.0, 1.0, -1.0, 1.0)
}

/// Response of every coordinate to road heights under the wheels: (K + sC + s²M) u = (G + s G_c) r.
pub(crate) fn response(lin: &LinearSystem, s: Complex64, road: [f64; 4]) -> DVector<Complex64> {
    let complex = |matrix: &DMatrix<f64>| matrix.map(Complex64::from);
    let dynamic = complex(lin.stiffness()) + complex(lin.damping()) * s + complex(lin.mass()) * (s * s);
    let drive = complex(&lin.road_stiffness()) + complex(&lin.road_damping()) * s;
    let road = DVector::from_iterator(4, road.into_iter().map(Complex64::from));
    dynamic.lu().solve(&(drive * road)).expect("regular off resonance")
}

/// Largest entry by absolute value.
pub(crate) fn largest<'a>(entries: impl IntoIterator<Item = &'a f64>) -> f64 {
    entries.into_iter().fold(0.0, |most, entry| most.max(entry.abs()))
}

/// Property tests draw the same cases in every run and leave no file behind.
pub(crate) fn fixed(cases: u32) -> Config {
    Config { cases, failure_persistence: None, rng_seed: RngSeed::Fixed(20_240_607), ..Config::default() }
}

/// Asserts that two square matrices agree relative to the largest entry of the second.
#[track_caller]
pub(crate) fn assert_close(found: &DMatrix<f64>, expected: &DMatrix<f64>, tolerance: f64) {
    let scale = largest(expected);
    let worst = largest(&(found - expected));
    assert!(worst <= tolerance * scale, "{worst:e} of {scale:e}\nfound {found:e}\nexpected {expected:e}");
}

/// A fixed matrix with dynamic size.
pub(crate) fn dynamic<const R: usize, const C: usize>(
    matrix: &ridemodes::nalgebra::SMatrix<f64, R, C>,
) -> DMatrix<f64> {
    DMatrix::from_fn(R, C, |i, j| matrix[(i, j)])
}
