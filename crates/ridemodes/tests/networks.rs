//! Free networks: nodes, lines, loops, valves, cylinder kinds, hoses, slow and shut lines.

use std::f64::consts::PI;

use approx::assert_relative_eq;
use proptest::prelude::*;
use ridemodes::nalgebra::{Matrix4, RowVector4};
use ridemodes::{Complex64, ElementKind, LinearSystem, ModeKind};
use serde_json::{Value, json};

use crate::oil::Oil;
use crate::random::{NETWORK, Wanted, cars};
use crate::support::{
    assert_close, fixed, largest, linear, only_gas, set, singular, square_car, square_oil_car, vehicle, violations,
};

fn coupling_at(lin: &LinearSystem, frequency: f64) -> Matrix4<Complex64> {
    let found = lin.dynamic_coupling(&[frequency]).unwrap();
    Matrix4::from_fn(|i, j| found[(i, j, 0)])
}

fn worst(matrix: &Matrix4<Complex64>) -> f64 {
    matrix.iter().fold(0.0, |most, entry| most.max(entry.norm()))
}

proptest! {
    #![proptest_config(fixed(400))]

    // The library's line volumes, with its eliminations and loops, against nodal impedance from the data.
    #[test]
    fn line_coordinates_give_the_nodal_impedance(car in cars(Wanted { compressible: true, ..NETWORK })) {
        let (lin, oil) = (linear(&car), Oil::new(&car));
        for f in [0.7, 3.0, 12.0, 60.0, 400.0] {
            let expected = oil.impedance(Complex64::new(0.0, 2.0 * PI * f));
            let error = worst(&(coupling_at(&lin, f) - expected)) / worst(&expected);
            // The nodal route loses the digits by which a line admits more than the nodes store.
            let allowed = 1e-10 + 1e-15 * oil.stiffness_ratio(2.0 * PI * f);
            prop_assert!(error <= allowed, "{} Hz: {:e} of {:e}", f, error, allowed);
        }
    }

    #[test]
    fn coupling_is_that_of_regions_at_one_pressure(car in cars(NETWORK)) {
        let lin = linear(&car);
        let (coupling, expected) = (lin.coupling().unwrap(), Oil::new(&car).quasi_static());
        // Areas may cancel to nothing: below a millionth of a newton per metre there is no coupling.
        prop_assert!(largest(&(coupling - expected)) <= 1e-11 * largest(&expected) + 1e-6);
        let limit = coupling_at(&lin, 1e-8).map(|entry| entry.re);
        prop_assert!(largest(&(limit - coupling)) <= 1e-7 * largest(&coupling) + 1e-6);
    }

    // 2·(7 + lines with inertance) + lines without + mounts − closed loops, every node compliant.
    #[test]
    fn states_are_counted(car in cars(Wanted { compressible: true, ..NETWORK })) {
        let lin = linear(&car);
        let space = lin.state_space().unwrap();
        let volumes = lin.coordinate_units().iter().filter(|unit| **unit == "m^3").count();
        let inertial = (0..lin.coordinates().len())
            .filter(|&i| lin.coordinate_units()[i] == "m^3" && lin.mass()[(i, i)] > 0.0)
            .count();
        let mounts = lin.coordinates().len() - 7 - volumes;
        let loops = Oil::new(&car).loops();
        prop_assert_eq!(space.states.len(), 2 * (7 + inertial) + (volumes - inertial) + mounts - loops);
        let poles: usize = lin.modes().unwrap().pole.iter().map(|pole| if pole.im > 0.0 { 2 } else { 1 }).sum();
        prop_assert_eq!(poles, space.states.len());
    }
}

// Left and right hubs of the square car joined to a node between them.
fn ring(lines: &Value) -> Value {
    let mut car = square_oil_car("roll");
    car["nodes"]["between"] = json!({ "circuit": "left", "volume": 20e-6 });
    car["lines"] = lines.clone();
    car
}

// Two lines side by side are one of their impedances in parallel; in the loop nothing circulates.
#[test]
fn lines_side_by_side_are_one() {
    let line = |r: f64| json!({ "from": "left", "to": "between", "throttle": r });
    let onward = json!({ "from": "between", "to": "right", "throttle": 5e8 });
    let two = ring(&json!({ "a": line(3e8), "b": line(6e8), "onward": onward }));
    let one = ring(&json!({ "a": line(2e8), "onward": onward }));
    for f in [0.3, 2.0, 40.0] {
        let (found, expected) = (coupling_at(&linear(&two), f), coupling_at(&linear(&one), f));
        assert!(worst(&(found - expected)) <= 1e-12 * worst(&expected), "{f}");
    }
    let (two, one) = (linear(&two), linear(&one));
    assert_eq!(two.coordinates().len(), one.coordinates().len() + 1);
    assert_eq!(two.state_space().unwrap().states.len(), one.state_space().unwrap().states.len());
    for (a, b) in two.modes().unwrap().pole.iter().zip(&one.modes().unwrap().pole) {
        assert!((a - b).norm() <= 1e-11 * b.norm());
    }
}

// A loop of inertial lines keeps its flow as a state: its pole is −ΣR/ΣI, and it stores nothing.
#[test]
fn an_inertial_loop_dies_away_by_itself() {
    let line = |to: &str, from: &str| json!({ "from": from, "to": to, "resistance": 4e7, "inertance": 2e6 });
    let mut car = ring(
        &json!({ "a": line("left", "between"), "b": line("left", "between"), "onward": line("between", "right") }),
    );
    set(&mut car, "links.none", json!({ "front_left": 1.0 }));
    let modes = linear(&car).modes().unwrap();
    let found = modes.pole.iter().any(|pole| (pole + 20.0).norm() <= 1e-9 && pole.im == 0.0);
    assert!(found, "{:?}", modes.pole);
}

// A wave in a closed-end line: quarter-wave resonance c/4L with c = √(β/ρ); error falls as 1/pieces².
#[test]
fn a_long_line_in_pieces_finds_its_quarter_wave() {
    let (length, density, bulk) = (6.0, 865.0_f64, 1.4e9_f64);
    let first = |pieces: u32| {
        let mut car = square_oil_car("roll");
        // The open end is a soft accumulator's; the closed end stands for itself.
        set(&mut car, "oil.kinematic_viscosity", 6e-7);
        set(&mut car, "oil.kinematic_viscosity_hot", 5e-7);
        set(&mut car, "oil.expansion", 0.0);
        set(&mut car, "oil.density", density);
        set(&mut car, "oil.bulk_modulus", bulk);
        set(&mut car, "layout.accumulators.main.throttle", 0.0);
        set(&mut car, "layout.accumulators.main.volume", 0.1);
        car["nodes"]["end"] = json!({ "circuit": "left" });
        car["lines"]["spur"] = json!({ "from": "left", "to": "end", "length": length, "bore": 0.01, "pieces": pieces });
        let modes = linear(&car).modes().unwrap();
        let row = modes.rows("oil 1")[0];
        modes.pole[row].im / (2.0 * PI)
    };
    let exact = (bulk / density).sqrt() / (4.0 * length);
    let error = |pieces: u32| (first(pieces) / exact - 1.0).abs();
    let [four, eight, sixteen] = [4, 8, 16].map(error);
    assert!(four < 0.01, "{four:e}");
    assert!((3.5..4.5).contains(&(four / eight)), "{four:e} {eight:e}");
    assert!((3.0..5.0).contains(&(eight / sixteen)), "{eight:e} {sixteen:e}");
}

// Data take the place of geometry: the same numbers, given either way.
#[test]
fn a_line_by_data_is_that_by_geometry() {
    let geometry =
        json!({ "from": "left", "to": "between", "length": 2.0, "bore": 0.008, "swell": 3e-13, "pieces": 2 });
    let car = ring(&json!({ "a": geometry, "onward": { "from": "between", "to": "right", "throttle": 5e8 } }));
    let lin = linear(&car);
    let sum = |kind, part: fn(&ridemodes::Element) -> f64| -> f64 {
        lin.elements().iter().filter(|e| e.name.starts_with("lines.a") && e.kind == kind).map(part).sum()
    };
    let area = PI * 0.008_f64.powi(2) / 4.0;
    let data = json!({
        "from": "left", "to": "between", "pieces": 2, "resistance": sum(ElementKind::Line, |e| e.damping),
        "inertance": sum(ElementKind::Line, |e| e.mass), "volume": 2.0 * area, "compliance": 2.0 * 3e-13,
    });
    let mut other = car.clone();
    other["lines"]["a"] = data;
    for f in [0.5, 30.0] {
        let (found, expected) = (coupling_at(&linear(&other), f), coupling_at(&lin, f));
        assert!(worst(&(found - expected)) <= 1e-11 * worst(&expected), "{f}");
    }
}

// The three ways of a cylinder at one frequency well below all throttles: only gas is left, A² /C of the areas.
#[test]
fn cylinders_of_each_kind_press_with_their_area() {
    let (bore, rod): (f64, f64) = (0.03, 0.014);
    let (full, stem) = (PI * bore * bore / 4.0, PI * rod * rod / 4.0);
    // Volume pushed into circuits left and right per bump of the front left wheel.
    for (kind, left, right) in [
        ("double_acting", full, full - stem),
        ("through_rod", full - stem, full - stem),
        ("single_acting", full, 0.0),
        ("piston_valve", stem, 0.0),
    ] {
        let mut car = square_oil_car("roll");
        only_gas(&mut car);
        for axle in ["front", "rear"] {
            set(&mut car, &format!("{axle}.both.cylinder.kind"), kind);
        }
        let lin = linear(&car);
        let found = lin.coupling().unwrap();
        let gas = lin.point().gas_volume[0] / (1.4 * 30e5);
        assert_relative_eq!(found[(0, 0)], (left * left + right * right) / gas, max_relative = 1e-12);
        assert_relative_eq!(found[(0, 1)], -2.0 * left * right / gas, max_relative = 1e-12);
    }
}

// The flow through the piston is that of the rod side, so it damps by R A_r² beside the gas.
#[test]
fn a_piston_valve_damps_by_its_annulus() {
    let mut car = square_oil_car("roll");
    only_gas(&mut car);
    for axle in ["front", "rear"] {
        set(&mut car, &format!("{axle}.both.cylinder.kind"), "piston_valve");
        set(&mut car, &format!("{axle}.both.cylinder.piston_throttle"), 2e9);
    }
    let annulus = PI * (0.03_f64.powi(2) - 0.014_f64.powi(2)) / 4.0;
    let motions = linear(&car).motions().unwrap();
    for i in 0..4 {
        assert_relative_eq!(motions.damping.oil[(i, i)], 2e9 * annulus * annulus, max_relative = 1e-12);
    }
    // A valve in its place is that throttle at its amplitude.
    let valve = json!({ "kind": "split", "forward": 1e9, "backward": 3e9, "amplitude": 1e-4 });
    for axle in ["front", "rear"] {
        set(&mut car, &format!("{axle}.both.cylinder.piston_throttle"), 0.0);
        set(&mut car, &format!("{axle}.both.cylinder.piston_valve"), valve.clone());
    }
    let with_valve = linear(&car).motions().unwrap();
    assert_relative_eq!(with_valve.damping.oil[(2, 2)], motions.damping.oil[(2, 2)], max_relative = 1e-12);
}

// s = gᵀδ adds Lᵀg(·)gᵀL to K, C and M; an inerter couples body and wheels.
#[test]
fn links_add_their_row_to_every_matrix() {
    let weights = [1.0, -0.4, 0.25, 0.8];
    let mut car = square_car();
    let plain = linear(&car);
    car["links"]["any"] = json!({
        "front_left": weights[0], "front_right": weights[1], "rear_left": weights[2], "rear_right": weights[3],
        "rate": 9e3, "damping": 700.0, "inertance": 35.0,
    });
    let lin = linear(&car);
    let l = plain.deflection();
    let row = RowVector4::from(weights) * l;
    let outer = row.transpose() * row;
    assert_close(&(lin.stiffness() - plain.stiffness()), &(&outer * 9e3), 1e-9);
    assert_close(&(lin.damping() - plain.damping()), &(&outer * 700.0), 1e-10);
    assert_close(&(lin.mass() - plain.mass()), &(&outer * 35.0), 1e-10);
    // A third spring over both front wheels holds heave and pitch, and no roll.
    car["links"]["any"] = json!({ "front_left": 0.5, "front_right": 0.5, "rate": 40e3 });
    let (with, without) = (linear(&car).motions().unwrap(), plain.motions().unwrap());
    let gain = |i: usize| with.stiffness.conventional[(i, i)] - without.stiffness.conventional[(i, i)];
    assert_relative_eq!(gain(0), 10e3, max_relative = 1e-10);
    assert_relative_eq!(gain(1), 10e3, max_relative = 1e-10);
    assert!(gain(2).abs() <= 1e-8 && gain(3).abs() <= 1e-8);
}

// √(2/π) F/σ of a damper and a cylinder through their motion ratios, and ±F in statics.
#[test]
fn friction_damps_at_its_amplitude_and_widens_the_rest() {
    let mut car = square_oil_car("roll");
    let plain = linear(&car).motions().unwrap();
    set(&mut car, "front.both.cylinder.motion_ratio", 0.8);
    let ratio = linear(&car).motions().unwrap();
    set(&mut car, "front.both.cylinder.friction", 90.0);
    set(&mut car, "front.both.cylinder.amplitude", 0.12);
    set(
        &mut car,
        "front.both.damper",
        json!({ "coefficient": 0.0, "motion_ratio": 0.7, "friction": 40.0, "amplitude": 0.1 }),
    );
    let lin = linear(&car);
    let expected = (2.0 / PI).sqrt() * (90.0 / 0.12 * 0.64 + 40.0 / 0.1 * 0.49);
    let found = lin.motions().unwrap().damping.conventional - ratio.damping.conventional;
    // Of the front axle alone: half in heave, as much between heave and pitch.
    assert_relative_eq!(found[(0, 0)], expected / 2.0, max_relative = 1e-12);
    assert_relative_eq!(found[(0, 1)], -expected / 2.0, max_relative = 1e-12);
    assert_relative_eq!(lin.point().friction.0[0], 90.0 * 0.8 + 40.0 * 0.7, max_relative = 1e-14);
    assert_eq!(lin.point().friction.0[2], 0.0);
    assert!(plain.damping.conventional[(0, 0)] == 0.0);
}

// A damper table is E[F v]/E[v²]: a straight one its slope, whatever the amplitude.
#[test]
fn a_damper_table_is_its_mean_slope() {
    let mut car = square_car();
    let expected = linear(&car).motions().unwrap().damping.total;
    for axle in ["front", "rear"] {
        set(
            &mut car,
            &format!("{axle}.both.damper"),
            json!({ "velocity": [0.0, 0.3], "force": [0.0, 450.0], "amplitude": 0.2 }),
        );
    }
    assert_relative_eq!(linear(&car).motions().unwrap().damping.total, expected, max_relative = 1e-13);
    for axle in ["front", "rear"] {
        let table = json!({ "velocity": [-1.0, 0.0, 1.0], "force": [-2200.0, 0.0, 800.0], "amplitude": 0.2 });
        set(&mut car, &format!("{axle}.both.damper"), table);
    }
    assert_relative_eq!(linear(&car).motions().unwrap().damping.total, expected, max_relative = 1e-12);
}

fn balanced(throttle: f64, slow: bool) -> Value {
    let mut car = square_oil_car("roll");
    car["lines"]["balance"] = json!({ "from": "left", "to": "right", "throttle": throttle, "slow": slow });
    car
}

// Shut for the coupling, the motions, fast states and undamped modes; open for a standing vehicle; R C/2.
#[test]
fn a_slow_line_is_shut_to_vibration() {
    let (with, without) = (linear(&balanced(5e11, true)), linear(&square_oil_car("roll")));
    assert_eq!(with.coupling().unwrap(), without.coupling().unwrap());
    assert_eq!(with.motions().unwrap().stiffness, without.motions().unwrap().stiffness);
    assert_eq!(with.motions().unwrap().damping, without.motions().unwrap().damping);
    let (a, b) = (with.modes_of(ModeKind::Undamped).unwrap(), without.modes_of(ModeKind::Undamped).unwrap());
    assert_eq!((a.pole, a.label), (b.pole, b.label));
    assert_eq!(coupling_at(&with, 1e-4), coupling_at(&without, 1e-4));
    // One state more: the pressures balance.
    assert_eq!(with.state_space().unwrap().states.len(), without.state_space().unwrap().states.len() + 1);
    let line = &with.point().slow_lines[0];
    assert_eq!((line.name.as_str(), line.resistance), ("lines.balance", 5e11));
    let compliance: f64 = 1.0 / without.coupling().unwrap()[(0, 0)];
    assert!(compliance > 0.0);
    let sides = with.point().gas_volume[0] / (1.4 * 30e5);
    // Oil adds little to the gas on either side.
    assert!((1.0..1.1).contains(&(line.time_constant / (5e11 * sides / 2.0))), "{}", line.time_constant);
    // With the wheels free the pole is near: the slowest relaxation.
    let modes = with.modes().unwrap();
    let slowest = modes.pole.iter().filter(|pole| pole.im == 0.0).map(|pole| -pole.re).fold(f64::INFINITY, f64::min);
    assert!((0.2..1.0).contains(&(slowest * line.time_constant)), "{slowest}");
    for label in ["body roll", "wheel warp"] {
        let frequency = |modes: &ridemodes::Modes| modes.frequency[modes.rows(label)[0]];
        assert_relative_eq!(frequency(&modes), frequency(&without.modes().unwrap()), max_relative = 0.02);
    }
    // The same line, not slow: a crossflow that the coupling knows, one circuit of both.
    let open = linear(&balanced(5e8, false)).coupling().unwrap();
    assert!(open[(0, 0)] < 0.6 * without.coupling().unwrap()[(0, 0)]);
}

// A setting shuts the way to the accumulators: trapped oil holds with β A²/V, at the pressure it was shut at.
#[test]
fn lock_out_leaves_the_trapped_oil() {
    let mut car = square_oil_car("roll");
    set(&mut car, "settings.locked", json!({ "layout.accumulators.main.closed": true }));
    let open = vehicle(&car);
    let locked = open.with_setting("locked").unwrap();
    assert_eq!(locked.value("layout.accumulators.main.closed").unwrap(), 1.0);
    let (open, lin) = (crate::support::of(&open), crate::support::of(&locked));
    let full = PI * 0.03_f64.powi(2) / 4.0;
    let annulus = full - PI * 0.014_f64.powi(2) / 4.0;
    // Two bump and two rebound chambers at half stroke, and the hub.
    let volume = (full + annulus) * 2.0 * 0.08 + 50e-6;
    let side = 1.4e9 / volume;
    let found = lin.coupling().unwrap();
    assert_relative_eq!(found[(0, 0)], (full * full + annulus * annulus) * side, max_relative = 1e-12);
    assert!(largest(&found) > 20.0 * largest(&open.coupling().unwrap()));
    let off = &lin.point().closed_off;
    assert_eq!(off.len(), 4);
    let trapped: Vec<_> = off.iter().filter(|part| part.accumulators.is_empty()).collect();
    assert_eq!(trapped.len(), 2);
    assert_relative_eq!(trapped[0].pressure, 30e5);
    assert_relative_eq!(trapped[0].compliance, volume / 1.4e9, max_relative = 1e-12);
    assert!(trapped[0].nodes.contains(&"circuits.left".to_owned()));
    let alone = lin.point().warnings.iter().filter(|warning| warning.contains("no way to an accumulator")).count();
    assert_eq!(alone, 2);
    assert!(open.point().closed_off.is_empty());
    // Incompressible, there is nothing left to give.
    car["oil"].as_object_mut().unwrap().remove("bulk_modulus");
    assert!(
        singular(crate::support::vehicle(&car).with_setting("locked").unwrap().settle().unwrap().linear())
            .contains("locks the chamber")
    );
}

#[test]
fn what_is_wrong_with_a_network_is_all_said() {
    let mut car = square_oil_car("roll");
    car["nodes"] = json!({ "left": { "circuit": "left" }, "tee": { "circuit": "lefft" } });
    car["lines"] = json!({
        "a": { "from": "left", "to": "te" },
        "b": { "from": "left", "to": "left" },
        "c": { "from": "left", "to": "tee", "length": 1.0 },
        "d": { "to": "right", "slow": true },
        "e": { "from": "left", "to": "right", "slow": 1.0, "pieces": 0, "bore": 0.01, "length": 2.0 },
    });
    car["links"] = json!({ "none": { "rate": 1e3 } });
    set(&mut car, "front.both.damper", json!({ "velocity": [0.0, 0.2], "force": [0.0, 300.0, 500.0] }));
    set(&mut car, "rear.both.damper", json!({ "friction": 20.0 }));
    set(&mut car, "front.both.cylinder.piston_throttle", 1e8);
    set(&mut car, "layout.ports.front_bump.valve", json!({ "kind": "orifice", "forward": 1e8, "amplitude": 1e-4 }));
    let found = violations(ridemodes::Vehicle::from_value(&car));
    for (path, rule) in [
        ("nodes.left", "a circuit has the same name"),
        ("nodes.tee.circuit", "no such circuit"),
        ("lines.a.to", "no such circuit or node"),
        ("lines.b.to", "is where it starts"),
        ("lines.c.bore", "is missing"),
        ("lines.d.from", "is missing"),
        ("lines.d.throttle", "a slow line needs a resistance"),
        ("lines.e.slow", "must be true or false"),
        ("lines.e.pieces", "whole number from 1 to 64"),
        ("links.none.front_left", "a weight that is not zero"),
        ("front.both.damper.force", "as many entries as velocity"),
        ("front.both.damper.amplitude", "is missing"),
        ("rear.both.damper.coefficient", "is missing"),
        ("rear.both.damper.amplitude", "is missing"),
        ("front.both.cylinder.piston_throttle", "belongs to a piston_valve cylinder"),
        ("layout.ports.front_bump.valve.diameter", "is missing"),
        ("layout.ports.front_bump.valve.forward", "does not belong to a valve of kind orifice"),
    ] {
        let there = found.iter().any(|violation| violation.path == path && violation.rule.contains(rule));
        assert!(there, "{path}: {rule}\n{found:#?}");
    }
}

#[test]
fn circuits_that_are_joined_have_one_pressure() {
    let mut car = square_oil_car("roll");
    let circuits = vehicle(&car).with_values([("circuits.left.pressure", 31e5)]).unwrap();
    car = circuits.to_value();
    car["lines"]["balance"] = json!({ "from": "left", "to": "right", "throttle": 1e9 });
    let found = violations(ridemodes::Vehicle::from_value(&car));
    assert!(found.iter().any(|v| v.path == "lines.balance.to" && v.rule.contains("joins circuits")), "{found:#?}");
    car["lines"]["balance"]["closed"] = json!(true);
    assert_eq!(linear(&car).point().closed_off.len(), 2);
}
