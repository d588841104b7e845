//! States under loads, ground, temperature and faults: balances, limits of small loads, symmetry, minimum of energy.

use approx::assert_relative_eq;
use proptest::prelude::*;
use ridemodes::nalgebra::{DMatrix, DVector};
use ridemodes::{Condition, Error, Fault, OperatingPoint, Payload, STANDARD_GRAVITY, Vehicle};
use serde_json::{Value, json};

use crate::random::{ANY, NETWORK, cars, mirrored};
use crate::support::{fixed, set, square_car, square_oil_car, vehicle};

fn settle(car: &Vehicle, condition: &Condition) -> OperatingPoint {
    car.settle_under(condition).unwrap_or_else(|error| panic!("{error}"))
}

fn lateral(acceleration: f64) -> Condition {
    Condition { lateral: acceleration, ..Condition::default() }
}

// Every example under a mix of loads.
fn mixed() -> Condition {
    Condition {
        lateral: 2.0,
        longitudinal: -1.5,
        temperature: Some(318.0),
        payload: vec![Payload { mass: 90.0, x: -0.3, y: 0.3, z: 0.1 }],
        heights: [0.01, 0.0, -0.008, 0.0],
        downforce: [150.0, 220.0],
        ..Condition::default()
    }
}

fn total_mass(car: &Vehicle) -> f64 {
    let wheels = ["front.left", "front.right", "rear.left", "rear.right"];
    let unsprung: f64 = wheels.iter().map(|side| car.value(&format!("{side}.unsprung_mass")).unwrap()).sum();
    car.value("body.mass").unwrap() + unsprung
}

// What the tyres carry is the weight, the payload and the downforce, whatever the state.
#[test]
fn tyres_carry_all_that_presses_down() {
    for name in Vehicle::examples() {
        let car = Vehicle::example(name).unwrap();
        let condition = mixed();
        let point = settle(&car, &condition);
        let expected = (total_mass(&car) + 90.0) * STANDARD_GRAVITY + 370.0;
        assert_relative_eq!(point.tyre_load.as_array().iter().sum::<f64>(), expected, max_relative = 1e-10);
    }
}

#[test]
fn without_loads_it_is_the_design_condition() {
    for name in Vehicle::examples() {
        let car = Vehicle::example(name).unwrap();
        let (plain, point) = (car.settle().unwrap(), settle(&car, &Condition::default()));
        assert_eq!((point.attitude, &point.tyre_load, &point.pressure), ([0.0; 3], &plain.tyre_load, &plain.pressure));
        // Solved from the data too: a load that is next to nothing.
        let near = settle(&car, &lateral(1e-9));
        assert!(near.attitude.iter().all(|part| part.abs() <= 1e-9), "{name}: {:?}", near.attitude);
        for (a, b) in near.pressure.iter().zip(&plain.pressure) {
            assert_relative_eq!(a, b, max_relative = 1e-8);
        }
    }
}

// The tangent of the nonlinear forces, by central differences in the height under each wheel, against K⁻¹G of the
// linear system there; the gas exchanges no heat on either side. At rest, in a corner, on a stop.
#[test]
fn linear_at_the_state_is_the_slope_of_the_state() {
    let mut stopped = Vehicle::example("roadster").unwrap().to_value();
    for axle in ["front", "rear"] {
        set(&mut stopped, &format!("{axle}.both.bump_stop"), json!({ "gap": 0.02, "rate": 40e3, "cubic": 3e7 }));
        set(&mut stopped, &format!("{axle}.both.rebound_stop"), json!({ "gap": 0.03, "rate": 60e3 }));
        set(&mut stopped, &format!("{axle}.both.spring.motion_ratio_slope"), 0.8);
        set(&mut stopped, &format!("{axle}.both.spring.cubic"), 5e6);
        set(&mut stopped, &format!("{axle}.both.cylinder.motion_ratio_slope"), -0.6);
    }
    let cars = [Vehicle::example("roadster").unwrap(), Vehicle::example("field_sprayer").unwrap(), vehicle(&stopped)];
    for car in &cars {
        for acceleration in [0.0, 3.0, 6.5] {
            let base = Condition { lateral: acceleration, fast: true, ..Condition::default() };
            let point = settle(car, &base);
            let lin = point.linear_with_gravity().unwrap();
            // Volumes follow statically; slow lines are shut.
            let slow: Vec<&str> = point.slow_lines.iter().map(|line| line.name.as_str()).collect();
            let kept: Vec<usize> =
                (0..lin.coordinates().len()).filter(|&i| !slow.contains(&lin.coordinates()[i].as_str())).collect();
            let k = lin.stiffness().select_rows(&kept).select_columns(&kept);
            let g = lin.road_stiffness().select_rows(&kept);
            let unit = DVector::from_fn(kept.len(), |i, _| 1.0 / k[(i, i)].sqrt());
            let scaled = DMatrix::from_fn(kept.len(), kept.len(), |i, j| k[(i, j)] * unit[i] * unit[j]);
            let solved = scaled.lu().solve(&DMatrix::from_fn(kept.len(), 4, |i, j| g[(i, j)] * unit[i])).unwrap();
            let h = 2e-5;
            for wheel in 0..4 {
                let at = |height: f64| {
                    let mut condition = base.clone();
                    condition.heights[wheel] = height;
                    let point = settle(car, &condition);
                    let [z, pitch, roll] = point.attitude;
                    let wheels = point.wheels;
                    DVector::from_vec(vec![z, pitch, roll, wheels.0[0], wheels.0[1], wheels.0[2], wheels.0[3]])
                };
                let slope = (at(h) - at(-h)) / (2.0 * h);
                for i in 0..7 {
                    let expected = solved[(i, wheel)] * unit[i];
                    let error = (slope[i] - expected).abs();
                    assert!(error <= 2e-6, "{acceleration} {wheel} {i}: {} against {expected}", slope[i]);
                }
            }
        }
    }
}

// ∂state/∂parameter by the implicit function theorem, seen through the sensitivities at a loaded state: against states
// solved anew with the number changed.
#[test]
fn derivatives_pass_through_the_operating_point() {
    let mut roadster = Vehicle::example("roadster").unwrap().to_value();
    set(&mut roadster, "front.both.spring.motion_ratio_slope", 0.9);
    set(&mut roadster, "rear.both.spring.cubic", 4e6);
    set(&mut roadster, "front.both.bump_stop", json!({ "gap": 0.005, "rate": 2e4, "cubic": 1e7 }));
    set(&mut roadster, "rear.both.cylinder.motion_ratio_slope", -0.5);
    set(&mut roadster, "layout.accumulators.main.gas", "nitrogen");
    let car = vehicle(&roadster);
    for fast in [false, true] {
        let condition = Condition { fast, ..mixed() };
        let at = |path: &str, value: f64| {
            let car = car.with_values([(path, value)]).unwrap();
            settle(&car, &condition).linear().unwrap()
        };
        let lin = settle(&car, &condition).linear().unwrap();
        let found = lin.sensitivities().unwrap();
        let mut checked = 0;
        for (place, path) in found.paths.iter().enumerate().filter(|(place, _)| found.values[*place] != 0.0) {
            let value = found.values[place];
            let step = 2e-5 * value.abs();
            let (above, below) = (at(path, value + step), at(path, value - step));
            let (a, b) = (above.motions().unwrap().stiffness.total, below.motions().unwrap().stiffness.total);
            for i in 0..4 {
                for j in 0..4 {
                    let numeric = (a[(i, j)] - b[(i, j)]) / (2.0 * step);
                    let exact = found.stiffness[(i, j, place)];
                    let blur = 2e-6 * a.amax() / value.abs();
                    assert!(
                        (exact - numeric).abs() <= 1e-5 * numeric.abs() + blur,
                        "{path} {i} {j}: {exact} {numeric}"
                    );
                    checked += usize::from(numeric.abs() > 100.0 * blur);
                }
            }
        }
        assert!(checked > 50, "{checked}");
    }
}

// A relaxing gas is isothermal for a slow state, and so is the slope of the state.
#[test]
fn slow_states_have_the_slope_of_relaxed_gas() {
    let mut car = square_oil_car("roll");
    set(&mut car, "layout.accumulators.main.relaxation_time", 4.0);
    let car = vehicle(&car);
    let base = lateral(4.0);
    let lin = settle(&car, &base).linear_with_gravity().unwrap();
    let unit: Vec<f64> = (0..lin.coordinates().len()).map(|i| 1.0 / lin.stiffness()[(i, i)].sqrt()).collect();
    let n = unit.len();
    let scaled = DMatrix::from_fn(n, n, |i, j| lin.stiffness()[(i, j)] * unit[i] * unit[j]);
    let solved = scaled.lu().solve(&DMatrix::from_fn(n, 4, |i, j| lin.road_stiffness()[(i, j)] * unit[i])).unwrap();
    let roll = |height: f64| settle(&car, &Condition { heights: [height, 0.0, 0.0, 0.0], ..base.clone() }).attitude[2];
    let slope = (roll(1e-4) - roll(-1e-4)) / 2e-4;
    assert_relative_eq!(slope, solved[(2, 0)] * unit[2], max_relative = 1e-6);
}

// At its end stop a separator carries on rigidly; with a second accumulator the pressure goes on.
#[test]
fn a_soft_accumulator_bottoms_into_a_hard_one() {
    let mut car = square_oil_car("heave");
    set(
        &mut car,
        "layout.accumulators.main",
        json!({ "volume": 0.3e-3, "precharge": 18e5, "least_gas_volume": 0.14e-3 }),
    );
    set(&mut car, "layout.accumulators.hard", json!({ "volume": 0.2e-3, "precharge": 45e5 }));
    let point = settle(&vehicle(&car), &Condition { vertical: 60.0, ..Condition::default() });
    let by = |name: &str| point.accumulators.iter().find(|state| state.name.ends_with(name)).unwrap();
    assert_eq!(by("bump.accumulators.main").gas_volume, 0.14e-3, "{:?}", point.pressure);
    assert!(by("bump.accumulators.hard").gas_volume < 0.2e-3);
    let name = "circuits.bump.accumulators.main.end_stop";
    assert!(point.limits.iter().any(|limit| limit.name == name && limit.is_passed()));
}

// For small loads the state moves by K⁻¹ f.
#[test]
fn small_loads_move_it_linearly() {
    let car = vehicle(&square_car());
    let point = settle(&car, &lateral(1e-4));
    let lin = car.settle().unwrap().linear_with_gravity().unwrap();
    // h′ = 0.5 m above a roll axis on the ground
    let mut load = DVector::zeros(7);
    load[2] = 1200.0 * 0.5 * 1e-4;
    let (track, unsprung) = (1.5, 2.0 * 40.0 * 0.3 * 1e-4 / 1.5);
    for (i, sign) in [1.0, -1.0, 1.0, -1.0].into_iter().enumerate() {
        load[3 + i] = sign * unsprung;
    }
    let moved = lin.stiffness().clone().lu().solve(&load).unwrap();
    assert!(track > 0.0);
    assert_relative_eq!(point.attitude[2], moved[2], max_relative = 1e-7);
}

#[test]
fn mirrored_loads_give_mirrored_states() {
    for name in ["roadster", "field_sprayer"] {
        let car = Vehicle::example(name).unwrap();
        let sides = |values: [f64; 4]| [values[1], values[0], values[3], values[2]];
        let mut car = car.to_value();
        set(&mut car, "body.roll_pitch_product", 0.0);
        let car = vehicle(&car);
        let (left, right) = (settle(&car, &lateral(3.5)), settle(&car, &lateral(-3.5)));
        assert_relative_eq!(left.attitude[2], -right.attitude[2], max_relative = 1e-9);
        for (a, b) in left.tyre_load.0.iter().zip(sides(right.tyre_load.0)) {
            assert_relative_eq!(*a, b, max_relative = 1e-9);
        }
        assert_relative_eq!(left.pressure[0], right.pressure[1], max_relative = 1e-9);
    }
}

// R. Barton & J. Fieldhouse 2018, p. 174: 1280 kg with its centre 0.365 m above the roll axis on 28 650 N·m/rad leans by
// 0.0194 rad per m/s², 10.9 deg/g, with the −m g d term. Stiff tyres here.
#[test]
fn a_textbook_roll_gradient() {
    let mut car = square_car();
    set(&mut car, "body.mass", 1280.0);
    set(&mut car, "body.cg_height", 0.365);
    for axle in ["front", "rear"] {
        set(&mut car, &format!("{axle}.track"), 1.46);
        set(&mut car, &format!("{axle}.both.unsprung_mass"), 1e-3);
        set(&mut car, &format!("{axle}.both.tyre.rate"), 1e10);
        // k t²/2 of each axle
        set(&mut car, &format!("{axle}.both.spring.rate"), 28_650.0 / 1.46_f64.powi(2));
    }
    let point = settle(&vehicle(&car), &lateral(1.0));
    assert_relative_eq!(point.attitude[2], 0.0194, max_relative = 1e-3);
    assert_relative_eq!(point.attitude[2].to_degrees() * 9.81, 10.9, max_relative = 2e-3);
}

// The same book, p. 174: at 0.6 g the sprung mass's links pass 195 and 760 N at the axles, the unsprung 158 and 218 N.
#[test]
fn a_textbook_load_transfer_through_links() {
    let mut car = square_car();
    set(&mut car, "body.mass", 1280.0);
    // 0.54 of the mass on the front axle; a soft roll spring does not matter: the difference of two cars is the links'.
    set(&mut car, "front.distance", 0.46 * 2.6);
    set(&mut car, "rear.distance", 0.54 * 2.6);
    for (axle, centre, height, mass) in [("front", 0.07, 0.28, 140.0), ("rear", 0.32, 0.30, 180.0)] {
        set(&mut car, &format!("{axle}.track"), 1.46);
        set(&mut car, &format!("{axle}.roll_centre_height"), centre);
        set(&mut car, &format!("{axle}.unsprung_height"), height);
        set(&mut car, &format!("{axle}.both.unsprung_mass"), mass / 2.0);
        // Soft tyres would lean the whole vehicle and share the transfer anew.
        set(&mut car, &format!("{axle}.both.tyre.rate"), 1e10);
    }
    // The centre of gravity on the roll axis: nothing goes through the springs.
    set(&mut car, "body.cg_height", 0.07 * 0.54 + 0.32 * 0.46);
    let point = settle(&vehicle(&car), &lateral(0.6 * 9.81));
    let load = point.tyre_load.0;
    assert_relative_eq!((load[1] - load[0]) / 2.0, 195.0 + 158.0, max_relative = 2e-3);
    assert_relative_eq!((load[3] - load[2]) / 2.0, 760.0 + 218.0, max_relative = 2e-3);
}

// ΔF = m h a/wheelbase of the whole vehicle; full anti-dive holds the front springs.
#[test]
fn braking_moves_load_to_the_front_and_links_may_carry_it() {
    let mut car = square_car();
    let point = settle(&vehicle(&car), &Condition { longitudinal: -5.0, ..Condition::default() });
    let moment = (1200.0 * 0.5 + 160.0 * 0.3) * 5.0;
    let load = point.tyre_load.0;
    assert_relative_eq!((load[0] + load[1] - load[2] - load[3]) / 2.0, moment / 2.6, max_relative = 1e-9);
    assert!(point.attitude[1] > 0.0);
    set(&mut car, "front.anti_braking", 1.0);
    set(&mut car, "rear.anti_braking", 1.0);
    let held = settle(&vehicle(&car), &Condition { longitudinal: -5.0, ..Condition::default() });
    assert!(held.deflection.0.iter().all(|delta| delta.abs() <= 1e-9), "{:?}", held.deflection);
    assert_relative_eq!(held.tyre_load.0[0], load[0], max_relative = 1e-9);
}

// Wheels that lift stay without load; the others carry all.
#[test]
fn a_wheel_lifts_and_does_not_pull() {
    let car = Vehicle::example("roadster").unwrap();
    let point = settle(&car, &Condition { heights: [0.0, 0.0, -0.5, 0.0], ..lateral(6.0) });
    assert_eq!(point.tyre_load.0[2], 0.0, "{:?}", point.tyre_load);
    let weight = total_mass(&car) * STANDARD_GRAVITY;
    assert_relative_eq!(point.tyre_load.0.iter().sum::<f64>(), weight, max_relative = 1e-9);
    assert!(point.limits.iter().any(|limit| limit.name == "rear_left.lift_off" && limit.is_passed()));
    // No rate under a lifted wheel.
    let lin = point.linear().unwrap();
    assert_eq!(lin.road_stiffness()[(5, 2)], 0.0);
    assert!(lin.road_stiffness()[(3, 0)] > 0.0);
}

// Warm gas stands at the pressure that its amount asks for: with the body held by nothing but oil volume it is the
// isochoric pV/T, softened by the rise of the body. Cold, the charge sinks with it.
#[test]
fn temperature_moves_pressure_and_height() {
    let car = vehicle(&square_oil_car("roll"));
    let at = |temperature: f64| settle(&car, &Condition { temperature: Some(temperature), ..Condition::default() });
    let (cold, warm) = (at(243.15), at(353.15));
    assert!(warm.attitude[0] > 0.0 && cold.attitude[0] < 0.0);
    assert!(warm.pressure[0] > 30e5 && cold.pressure[0] < 30e5);
    for (point, temperature) in [(&cold, 243.15), (&warm, 353.15)] {
        let state = &point.accumulators[0];
        // n R is kept: p V/T of the charge.
        let amount = 18e5 * 0.4e-3 / 293.15;
        assert_relative_eq!(state.pressure * state.gas_volume / temperature, amount, max_relative = 1e-12);
        assert_relative_eq!(state.empty_pressure, 18e5 * temperature / 293.15, max_relative = 1e-12);
    }
}

// Oil volume is conserved: what the chambers push in, gas and oil give up.
#[test]
fn trapped_oil_is_conserved() {
    for condition in [lateral(5.0), mixed(), Condition { fast: true, ..mixed() }] {
        let mut car = square_oil_car("roll");
        set(&mut car, "front.both.bump_stop", json!({ "gap": 0.03, "rate": 5e4 }));
        let car = vehicle(&car);
        let point = settle(&car, &condition);
        let (full, stem) = (f64::powi(0.03, 2), f64::powi(0.014, 2));
        let areas = [full, full - stem].map(|square| square * std::f64::consts::FRAC_PI_4);
        for (circuit, signs) in [[1.0, -1.0, 1.0, -1.0], [-1.0, 1.0, -1.0, 1.0]].iter().enumerate() {
            let pushed: f64 =
                (0..4).map(|i| if signs[i] > 0.0 { areas[0] } else { -areas[1] } * point.deflection.0[i]).sum();
            let oil = (areas[0] + areas[1]) * 2.0 * 0.08 + 50e-6;
            let growth = 7e-4 * (point.temperature - 293.15);
            let squeezed = (point.pressure[circuit] - 30e5) / 1.4e9;
            let gas = point.gas_volume[circuit] - 0.4e-3 * 18.0 / 30.0;
            let left = gas + oil * (growth - squeezed) + pushed;
            assert!(left.abs() <= 1e-12 * oil, "{left:e}");
        }
    }
}

// Held springs and added oil lift the body; held height is the vehicle with another pressure.
#[test]
fn pressure_and_fill_say_what_they_hold() {
    let car = vehicle(&square_oil_car("roll"));
    let fill = |volume: f64| Condition {
        oil: [("left".to_owned(), volume), ("right".to_owned(), volume)].into(),
        ..Condition::default()
    };
    let filled = settle(&car, &fill(30e-6));
    assert!(filled.attitude[0] > 0.0 && filled.pressure[0] > 30e5);
    // Brought to that pressure, the same oil is found.
    let pressure = [("left".to_owned(), filled.pressure[0]), ("right".to_owned(), filled.pressure[1])].into();
    let brought = settle(&car, &Condition { pressure, ..Condition::default() });
    assert_relative_eq!(brought.attitude[0], filled.attitude[0], max_relative = 1e-8);
    assert_relative_eq!(brought.oil_added[0], 30e-6, max_relative = 1e-8);
    // Levelled under a load: the design height again, with more oil.
    let payload = vec![Payload { mass: 150.0, ..Payload::default() }];
    let level = settle(&car, &Condition { payload: payload.clone(), levelled: true, ..Condition::default() });
    assert!(level.deflection.0.iter().all(|delta| delta.abs() <= 1e-8), "{:?}", level.deflection);
    assert!(level.oil_added.iter().all(|volume| *volume > 0.0));
    let loaded = settle(&car, &Condition { payload, ..Condition::default() });
    assert!(loaded.attitude[0] < -1e-3);
}

#[test]
fn faults_change_the_data_and_are_named() {
    let car = Vehicle::example("roadster").unwrap();
    let under = |fault: Fault| settle(&car, &Condition { faults: vec![fault], ..Condition::default() });
    let burst = under(Fault::Burst("left".into()));
    assert_relative_eq!(burst.pressure[0], burst.atmosphere);
    // Left bump chambers and right rebound chambers push no more: it leans to the left (left side down).
    assert!(burst.attitude[2] < -0.01);
    assert!(burst.limits.iter().any(|limit| limit.name == "circuits.left.minimum_pressure" && limit.is_passed()));
    assert!(burst.linear().unwrap().modes().unwrap().len() >= 7);
    let lost = under(Fault::LostPrecharge("circuits.left.accumulators.main".into()));
    assert_eq!(lost.accumulators[0].gas_volume, 0.0);
    assert!(lost.pressure[0] < 1e5);
    let closed = under(Fault::Closed("circuits.left.accumulators.main".into()));
    assert!(closed.attitude.iter().all(|part| part.abs() <= 1e-12));
    assert_eq!(closed.closed_off.len(), 2);
    let air = under(Fault::Air(0.05));
    let soft = |point: &OperatingPoint| point.linear().unwrap().coupling().unwrap()[(0, 0)];
    assert!(soft(&air) < soft(&car.settle().unwrap()));
    let mut value = car.to_value();
    set(&mut value, "layout.accumulators.main.yearly_loss", 0.03);
    let aged = settle(&vehicle(&value), &Condition { faults: vec![Fault::Years(5.0)], ..Condition::default() });
    assert!(aged.gas_volume[0] < car.settle().unwrap().gas_volume[0]);
    assert_relative_eq!(aged.accumulators[0].empty_pressure, 19e5 * 0.97_f64.powi(5), max_relative = 1e-12);
    let wrong = car.settle_under(&Condition {
        faults: vec![Fault::Burst("lefft".into())],
        lateral: 1e3,
        ..Condition::default()
    });
    let Err(Error::InvalidInput { violations }) = wrong else { panic!("{wrong:?}") };
    assert_eq!(violations.len(), 2);
    assert!(violations.iter().any(|violation| violation.hint.contains("left")));
}

// A soft accumulator that runs empty leaves the hard one alone; in between both give.
#[test]
fn a_soft_accumulator_beside_a_hard_one() {
    let mut car = square_oil_car("heave");
    set(&mut car, "layout.accumulators.soft", json!({ "volume": 0.2e-3, "precharge": 28e5 }));
    let car = vehicle(&car);
    let point = settle(&car, &Condition { temperature: Some(253.15), vertical: -4.0, ..Condition::default() });
    let states: Vec<_> = point.accumulators.iter().filter(|state| state.name.starts_with("circuits.bump")).collect();
    assert!(states.iter().all(|state| state.pressure == states[0].pressure));
    let by = |name: &str| states.iter().find(|state| state.name.ends_with(name)).unwrap();
    for state in [by("main"), by("soft")] {
        let ideal = state.full_volume * state.empty_pressure / state.pressure;
        assert_relative_eq!(state.gas_volume, ideal.min(state.full_volume), max_relative = 1e-12);
    }
}

// A relaxing gas: isothermal at rest, without heat exchange when fast, τ between.
#[test]
fn gas_relaxes_between_slow_and_fast() {
    let mut car = square_oil_car("roll");
    set(&mut car, "layout.accumulators.main.throttle", 0.0);
    let adiabatic = vehicle(&car).settle().unwrap().linear().unwrap();
    set(&mut car, "layout.accumulators.main.relaxation_time", 3.0);
    let relaxing = vehicle(&car).settle().unwrap().linear().unwrap();
    set(&mut car, "layout.accumulators.main.exponent", 1.0);
    car["layout"]["accumulators"]["main"].as_object_mut().unwrap().remove("relaxation_time");
    let isothermal = vehicle(&car).settle().unwrap().linear().unwrap();
    assert_relative_eq!(relaxing.coupling().unwrap(), isothermal.coupling().unwrap(), max_relative = 1e-12);
    let fast = relaxing.dynamic_coupling(&[1e4]).unwrap().mapv(|entry| entry.re);
    assert_relative_eq!(fast[(0, 0, 0)], adiabatic.coupling().unwrap()[(0, 0)], max_relative = 1e-6);
    // One first-order state per accumulator; the gas damps.
    let states = |lin: &ridemodes::LinearSystem| lin.state_space().unwrap().states.len();
    assert_eq!(states(&relaxing), states(&adiabatic) + 2);
    // K(s) of gas behind oil: 1/(C_o + 1/K_g), K_g = K_iso + ΔK sτ/(1 + sτ)
    let frequency = 0.05;
    let s = ridemodes::Complex64::new(0.0, 2.0 * std::f64::consts::PI * frequency);
    let volume = 0.4e-3 * 18.0 / 30.0;
    let (slow, quick) = (30e5 / volume, 1.4 * 30e5 / volume);
    let gas = (quick - slow) * s * 3.0 / (s * 3.0 + 1.0) + slow;
    let (full, stem) = (f64::powi(0.03, 2), f64::powi(0.014, 2));
    let areas = [full, full - stem].map(|square| square * std::f64::consts::FRAC_PI_4);
    let oil = ((areas[0] + areas[1]) * 0.16 + 50e-6) / 1.4e9;
    let expected = (areas[0] * areas[0] + areas[1] * areas[1]) / (1.0 / gas + oil);
    let found = relaxing.dynamic_coupling(&[frequency]).unwrap()[(0, 0, 0)];
    assert!((found - expected).norm() <= 1e-10 * expected.norm(), "{found} {expected}");
}

// The static solution is a minimum of the total potential: no random change of the state without external work lowers
// the energy. Here by the tangent: positive definite, and zero slope is the balance itself.
#[test]
fn a_state_is_a_minimum_of_energy() {
    for name in Vehicle::examples() {
        let car = Vehicle::example(name).unwrap();
        let lin = settle(&car, &mixed()).linear_with_gravity().unwrap();
        let n = lin.coordinates().len();
        let unit = |i: usize| if lin.stiffness()[(i, i)] > 0.0 { lin.stiffness()[(i, i)].sqrt() } else { 1.0 };
        let scaled = DMatrix::from_fn(n, n, |i, j| lin.stiffness()[(i, j)] / (unit(i) * unit(j)));
        assert!(scaled.symmetric_eigenvalues().min() > -1e-12, "{name}");
    }
}

fn loads() -> impl Strategy<Value = Condition> {
    (
        (-9.0..9.0, -9.0..9.0, -12.0..25.0, 233.15..353.15),
        proptest::array::uniform4(-0.12..0.12),
        (0.0..400.0, -0.8..0.8, -0.5..0.5, -0.2..0.6),
        (-2000.0..4000.0, -2000.0..4000.0),
        any::<bool>(),
    )
        .prop_map(|((lateral, longitudinal, vertical, temperature), heights, (mass, x, y, z), downforce, fast)| {
            Condition {
                lateral,
                longitudinal,
                vertical,
                temperature: Some(temperature),
                heights,
                payload: vec![Payload { mass, x, y, z }],
                downforce: [downforce.0, downforce.1],
                fast,
                ..Condition::default()
            }
        })
}

fn stopped(mut car: Value) -> Value {
    for axle in ["front", "rear"] {
        for side in ["both", "left", "right"] {
            if let Some(corner) = car[axle].get_mut(side) {
                corner["bump_stop"] = json!({ "gap": 0.06, "rate": 6e4, "cubic": 2e7 });
                corner["rebound_stop"] = json!({ "gap": 0.08, "rate": 8e4, "cubic": 2e7 });
            }
        }
    }
    car
}

proptest! {
    #![proptest_config(fixed(std::env::var("FUZZ").ok().and_then(|count| count.parse().ok()).unwrap_or(800)))]

    // Settles in balance, or says in a typed error that it does not; nothing hangs and no NaN comes out.
    #[test]
    fn any_condition_settles_or_says_so(car in prop_oneof![cars(ANY), cars(NETWORK)], condition in loads()) {
        let car = vehicle(&stopped(car));
        match car.settle_under(&condition) {
            Ok(point) => {
                let numbers = point.attitude.iter().chain(point.tyre_load.as_array()).chain(&point.pressure).chain(&point.gas_volume);
                prop_assert!(numbers.clone().all(|number| number.is_finite()));
                let weight = STANDARD_GRAVITY + condition.vertical;
                let expected = (total_mass(&car) + condition.payload[0].mass) * weight + condition.downforce.iter().sum::<f64>();
                let total: f64 = point.tyre_load.as_array().iter().sum();
                prop_assert!((total - expected).abs() <= 1e-7 * total_mass(&car) * STANDARD_GRAVITY, "{} {}", total, expected);
                prop_assert!(point.tyre_load.as_array().iter().all(|load| *load >= 0.0));
            }
            Err(Error::NotConverged { .. }) => {}
            Err(other) => prop_assert!(false, "{}", other),
        }
    }

    #[test]
    fn a_mirrored_car_under_mirrored_loads(car in cars(ANY)) {
        let base = mixed();
        let swap = |v: [f64; 4]| [v[1], v[0], v[3], v[2]];
        let mut other = base.clone();
        other.lateral = -base.lateral;
        other.heights = swap(base.heights);
        other.payload[0].y = -base.payload[0].y;
        let (Ok(here), Ok(there)) = (vehicle(&car).settle_under(&base), vehicle(&mirrored(&car)).settle_under(&other)) else {
            return Ok(());
        };
        let scale = here.tyre_load.0.iter().sum::<f64>();
        for (a, b) in here.tyre_load.0.iter().zip(swap(there.tyre_load.0)) {
            prop_assert!((a - b).abs() <= 1e-7 * scale, "{} {}", a, b);
        }
    }
}
