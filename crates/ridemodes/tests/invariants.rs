//! Invariant points of the quarter car, on the heave of a car that is alike at every corner.
//!
//! J. K. Hedrick and T. Butsuen, Proc. IMechE D 204 (1990) 21-27 (from memory): whatever acts between body and wheel,
//! |zs/zr| = mu/ms at √(kt/mu), and |(zs − zu)/zr| = 1 + mu/ms at √(kt/(ms + mu)).

use approx::assert_relative_eq;
use ridemodes::nalgebra::{DMatrix, DVector};
use ridemodes::{Complex64, StateSpace};
use serde_json::{Value, json};

use crate::support::{linear, response, set, square_car, square_oil_car};

const BODY: f64 = 1200.0 / 4.0;
const WHEEL: f64 = 40.0;
const TYRE: f64 = 200e3;

fn cars() -> Vec<Value> {
    let mut cars = vec![square_car()];
    let mut mounted = square_car();
    for axle in ["front", "rear"] {
        set(&mut mounted, &format!("{axle}.both.damper"), json!({ "coefficient": 2500.0, "mount_rate": 2e5 }));
    }
    cars.push(mounted);
    for kind in ["heave", "roll", "diagonal", "axle_roll"] {
        let mut car = square_oil_car(kind);
        let way = json!({ "throttle": 4e8, "line": { "length": 1.2, "bore": 0.01 } });
        let ports: Value = ["front_bump", "front_rebound", "rear_bump", "rear_rebound"]
            .map(|port| (port.to_owned(), way.clone()))
            .into_iter()
            .collect();
        set(&mut car, "layout.ports", ports);
        cars.push(car);
    }
    cars
}

#[test]
fn body_travel_at_the_wheel_hop_frequency() {
    for car in cars() {
        let u = response(&linear(&car), Complex64::new(0.0, (TYRE / WHEEL).sqrt()), [1.0; 4]);
        assert_relative_eq!(u[0].norm(), WHEEL / BODY, max_relative = 1e-11);
    }
}

#[test]
fn rattle_space_at_the_frequency_of_the_whole_on_its_tyre() {
    for car in cars() {
        let lin = linear(&car);
        let u = response(&lin, Complex64::new(0.0, (TYRE / (BODY + WHEEL)).sqrt()), [1.0; 4]);
        for wheel in 3..7 {
            assert_relative_eq!((u[0] - u[wheel]).norm(), 1.0 + WHEEL / BODY, max_relative = 1e-11);
        }
        // The library's deflections say the same.
        let deflection = lin.deflection().map(Complex64::from) * &u;
        for i in 0..4 {
            assert_relative_eq!(deflection[i].norm(), 1.0 + WHEEL / BODY, max_relative = 1e-11);
        }
    }
}

#[test]
fn tyre_damping_moves_the_points() {
    let mut car = square_car();
    set(&mut car, "front.both.tyre.damping", 300.0);
    let u = response(&linear(&car), Complex64::new(0.0, (TYRE / WHEEL).sqrt()), [1.0; 4]);
    assert!((u[0].norm() / (WHEEL / BODY) - 1.0).abs() > 1e-3);
}

// Pressures of the state space at the hubs are those of the nodes.
#[test]
fn hub_pressures_follow_the_deflections() {
    let mut car = square_oil_car("roll");
    set(&mut car, "layout.ports.front_bump", json!({ "throttle": 4e8, "line": { "length": 1.2, "bore": 0.01 } }));
    let lin = linear(&car);
    let space = lin.state_space().unwrap();
    let road = [0.01, -0.02, 0.015, 0.005];
    for omega in [4.0, 40.0] {
        let s = Complex64::new(0.0, omega);
        let deflection = lin.deflection().map(Complex64::from) * response(&lin, s, road);
        let y = output(&space, s, road);
        // The layout's circuits are left and right, in this order.
        for (circuit, per_travel) in ["left", "right"].iter().zip(crate::oil::Oil::new(&car).hub_pressures(s)) {
            let row = space.outputs.iter().position(|name| *name == format!("pressure.circuits.{circuit}")).unwrap();
            let expected = (per_travel * deflection)[0];
            assert!((y[row] - expected).norm() <= 1e-8 * expected.norm(), "{} {expected}", y[row]);
            assert_eq!(space.output_units[row], "Pa");
        }
    }
}

fn output(space: &StateSpace, s: Complex64, road: [f64; 4]) -> DVector<Complex64> {
    let size = space.a.nrows();
    let heights = road.iter().map(|height| Complex64::from(*height));
    let drive = DVector::from_iterator(8, heights.clone().chain(heights.map(|height| height * s)));
    let resolvent = DMatrix::from_diagonal_element(size, size, s) - space.a.map(Complex64::from);
    let x = resolvent.lu().solve(&(space.b.map(Complex64::from) * &drive)).unwrap();
    space.c.map(Complex64::from) * x + space.d.map(Complex64::from) * drive
}

// Slowly lifted ground lifts the whole car; the state space agrees with the matrices everywhere.
#[test]
fn a_slow_road_lifts_the_car_and_the_state_space_agrees() {
    for car in cars() {
        let lin = linear(&car);
        let space = lin.state_space().unwrap();
        let still = response(&lin, Complex64::new(0.0, 1e-6), [1.0; 4]);
        assert_relative_eq!(still[0].re, 1.0, max_relative = 1e-9);
        for omega in [3.0, 30.0, 200.0] {
            let s = Complex64::new(0.0, omega);
            let road = [0.01, -0.02, 0.015, 0.005];
            let u = response(&lin, s, road);
            let y = output(&space, s, road);
            let deflection = lin.deflection().map(Complex64::from) * &u;
            for (row, name) in space.outputs.iter().enumerate() {
                let expected = match name.as_str() {
                    "body_acceleration.z" => s * s * u[0],
                    "body_acceleration.pitch" => s * s * u[1],
                    "body_acceleration.roll" => s * s * u[2],
                    "deflection.front_left" => deflection[0],
                    "deflection.rear_right" => deflection[3],
                    // k_t (r − w): the square car's tyres have no damping.
                    "tyre_load.front_right" => TYRE * (road[1] - u[4]),
                    "tyre_load.rear_left" => TYRE * (road[2] - u[5]),
                    _ => continue,
                };
                let gap = (y[row] - expected).norm();
                assert!(gap <= 1e-7 * expected.norm().max(1e-9 * TYRE), "{name} at {omega}: {} {expected}", y[row]);
            }
        }
    }
}
