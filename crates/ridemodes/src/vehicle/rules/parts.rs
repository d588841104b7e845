//! Rules within one part: what must stand together, what must not.

use crate::axes::CORNERS;
use crate::error::Violation;
use crate::hydraulics::pressure;
use crate::spec::{CylinderKind, Damper, Line, Parameter, Slot, Spec, Valve, ValveKind};

/// Checks every part.
pub(super) fn check(spec: &Spec<Slot>, parameters: &[Parameter], numbers: &[f64]) -> Vec<Violation> {
    let mut rules = Rules { parameters, numbers, violations: Vec::new() };
    for corner in CORNERS {
        let Some(corner) = spec.corner(corner) else { continue };
        if let Some(damper) = &corner.damper {
            rules.damper(damper);
        }
        if let Some(cylinder) = &corner.cylinder {
            let piston_valve = cylinder.kind == CylinderKind::PistonValve;
            if !piston_valve && rules.value(cylinder.piston_throttle) != 0.0 {
                rules.broken(
                    cylinder.piston_throttle,
                    "belongs to a piston_valve cylinder",
                    "give the kind, or leave it out",
                );
            }
            if let Some(valve) = &cylinder.piston_valve {
                if !piston_valve {
                    rules.broken(
                        valve.amplitude,
                        "belongs to a piston_valve cylinder",
                        "give the kind, or leave it out",
                    );
                }
                rules.valve(valve);
            }
            rules.friction(cylinder.friction, cylinder.amplitude);
        }
    }
    for circuit in spec.circuits.0.values() {
        for port in circuit.chambers.0.values() {
            port.valve.iter().for_each(|valve| rules.valve(valve));
            port.line.iter().for_each(|line| rules.pipe(line));
        }
        for accumulator in circuit.accumulators.0.values() {
            match (accumulator.volume, accumulator.gas_volume) {
                (Some(volume), Some(_)) => {
                    rules.broken(volume, "stands beside gas_volume", "give one; the other follows");
                }
                (None, None) => {
                    rules.broken(accumulator.precharge, "needs a volume beside it", "give volume or gas_volume");
                }
                _ => {}
            }
            accumulator.valve.iter().for_each(|valve| rules.valve(valve));
            accumulator.line.iter().for_each(|line| rules.pipe(line));
        }
    }
    for line in spec.lines.0.values() {
        line.valve.iter().for_each(|valve| rules.valve(valve));
        if line.has_pipe() {
            rules.pipe(&line.line());
        } else if rules.value(line.swell) != 0.0 || rules.value(line.compliance) != 0.0 {
            rules.broken(line.throttle, "a hose needs length and bore, or data", "give length and bore, or volume");
        }
        rules.joined(spec, &line.from, &line.to, line.closed.0);
        let resists = [Some(line.throttle), line.resistance].iter().flatten().any(|&slot| rules.value(slot) != 0.0);
        if rules.value(line.slow.0) == 1.0 && !resists && line.valve.is_none() && line.length.is_none() {
            rules.broken(line.throttle, "a slow line needs a resistance", "give it a throttle");
        }
    }
    for link in spec.links.0.values() {
        let weights = [link.front_left, link.front_right, link.rear_left, link.rear_right];
        if weights.iter().all(|&weight| rules.value(weight) == 0.0) {
            rules.broken(
                link.front_left,
                "a link needs a weight that is not zero",
                "for example front_left = 1, front_right = -1",
            );
        }
    }
    rules.violations
}

struct Rules<'a> {
    parameters: &'a [Parameter],
    numbers: &'a [f64],
    violations: Vec<Violation>,
}

impl Rules<'_> {
    fn value(&self, slot: Slot) -> f64 {
        self.numbers[slot.0]
    }

    // At the number itself.
    fn broken(&mut self, slot: Slot, rule: &str, hint: &str) {
        let parameter = &self.parameters[slot.0];
        let unit = parameter.field.kind.number().map_or("", |(unit, _)| unit);
        let value = match unit {
            "" => (self.value(slot) == 1.0).to_string(),
            _ => self.value(slot).to_string(),
        };
        self.push(Violation::new(&parameter.path, value, rule).unit(unit).hint(hint));
    }

    // At a field beside the number.
    fn beside(&mut self, slot: Slot, field: &str, rule: &str, hint: &str) {
        let path = &self.parameters[slot.0].path;
        let table = path.rsplit_once('.').map_or("", |(table, _)| table);
        self.push(Violation::new(format!("{table}.{field}"), "", rule).hint(hint));
    }

    fn push(&mut self, violation: Violation) {
        if !self.violations.contains(&violation) {
            self.violations.push(violation);
        }
    }

    fn damper(&mut self, damper: &Damper<Slot>) {
        match (damper.coefficient, &damper.velocity, &damper.force) {
            (Some(_), None, None) => {}
            (Some(coefficient), ..) => {
                self.broken(coefficient, "stands beside a force–velocity table", "give one of them");
            }
            (None, Some(velocity), Some(force)) => {
                self.table(damper.friction, velocity, force, ["velocity", "force"]);
                if damper.amplitude.is_none() {
                    self.beside(
                        damper.friction,
                        "amplitude",
                        "is missing",
                        "velocity (r.m.s.) at which the table is taken as linear",
                    );
                }
            }
            (None, None, None) => {
                self.beside(damper.friction, "coefficient", "is missing", "or give velocity and force");
            }
            (None, ..) => {
                let field = if damper.velocity.is_none() { "velocity" } else { "force" };
                self.beside(damper.friction, field, "is missing", "a table has velocity and force");
            }
        }
        self.friction(damper.friction, damper.amplitude);
    }

    fn friction(&mut self, friction: Slot, amplitude: Option<Slot>) {
        if self.value(friction) > 0.0 && amplitude.is_none() {
            self.beside(friction, "amplitude", "is missing", "velocity (r.m.s.) at which friction is taken as linear");
        }
    }

    fn valve(&mut self, valve: &Valve<Slot>) {
        let numbers = [
            ("throttle", valve.throttle),
            ("open_resistance", valve.open_resistance),
            ("cracking_pressure", valve.cracking_pressure),
            ("forward", valve.forward),
            ("backward", valve.backward),
            ("diameter", valve.diameter),
            ("discharge", valve.discharge),
        ];
        let (word, needs, may): (&str, &[&str], &[&str]) = match valve.kind {
            ValveKind::Check => ("check", &["throttle"], &["open_resistance", "cracking_pressure"]),
            ValveKind::Split => ("split", &["forward", "backward"], &[]),
            ValveKind::Table => ("table", &["flow", "pressure_drop"], &[]),
            ValveKind::Orifice => ("orifice", &["diameter"], &["discharge"]),
        };
        let lists = [("flow", valve.flow.is_some()), ("pressure_drop", valve.pressure_drop.is_some())];
        let given = numbers.iter().map(|(name, slot)| (*name, slot.is_some())).chain(lists);
        for (name, given) in given {
            if given && !needs.contains(&name) && !may.contains(&name) {
                let rule = format!("does not belong to a valve of kind {word}");
                self.beside(valve.amplitude, name, &rule, &format!("it has {}", [needs, may].concat().join(", ")));
            }
            if !given && needs.contains(&name) {
                self.beside(valve.amplitude, name, "is missing", &format!("a valve of kind {word} needs it"));
            }
        }
        if let (ValveKind::Table, Some(flow), Some(drop)) = (valve.kind, &valve.flow, &valve.pressure_drop) {
            self.table(valve.amplitude, flow, drop, ["flow", "pressure_drop"]);
        }
    }

    // A table that resists: ascending, through zero, never falling.
    fn table(&mut self, beside: Slot, x: &[Slot], y: &[Slot], [x_name, y_name]: [&str; 2]) {
        if x.len() != y.len() || x.len() < 2 {
            let rule = format!("needs as many entries as {x_name}, two or more");
            self.beside(beside, y_name, &rule, "each pair is a point");
            return;
        }
        let (at, own): (Vec<f64>, Vec<f64>) = x.iter().zip(y).map(|(&x, &y)| (self.value(x), self.value(y))).unzip();
        if at.iter().chain(&own).any(|value| value.is_nan()) {
            return;
        }
        if let Some(k) = (1..at.len()).find(|&k| at[k] <= at[k - 1]) {
            self.broken(x[k], "must be more than the entry before", "list the points in ascending order");
        }
        if let Some(k) = (1..own.len()).find(|&k| own[k] < own[k - 1]) {
            self.broken(y[k], "must not be less than the entry before", "resistance rises with speed");
        }
        if !at.iter().zip(&own).any(|(x, y)| *x == 0.0 && *y == 0.0) {
            self.broken(
                y[0],
                "the table must hold the point 0, 0",
                "no motion, no resistance; dry friction has its own field",
            );
        }
    }

    fn pipe(&mut self, pipe: &Line<Slot>) {
        let data = [pipe.resistance, pipe.inertance, pipe.volume].iter().any(Option::is_some);
        match (pipe.length, pipe.bore) {
            (Some(_), Some(_)) => {}
            (None, None) if data => {}
            (None, None) => self.beside(
                pipe.swell,
                "length",
                "is missing",
                "give length and bore, or resistance, inertance and volume as data",
            ),
            (Some(_), None)
                if data && pipe.volume.is_some() && pipe.resistance.is_some() && pipe.inertance.is_some() => {}
            (Some(length), None) => self.beside(length, "bore", "is missing", "inner diameter of the line"),
            (None, Some(bore)) => self.beside(bore, "length", "is missing", "length of the line"),
        }
        if self.value(pipe.swell) > 0.0 && pipe.length.is_none() {
            self.broken(pipe.swell, "swell per length needs a length", "or give compliance, of the whole hose");
        }
    }

    // Oil flows between circuits that are joined: at rest they have one pressure.
    fn joined(&mut self, spec: &Spec<Slot>, from: &str, to: &str, closed: Slot) {
        let own = |name: &str| {
            let circuit = spec.nodes.0.get(name).map_or(name, |node| &node.circuit);
            pressure(spec, circuit)
        };
        let (Some(a), Some(b)) = (own(from), own(to)) else { return };
        if self.value(closed) != 1.0 && (self.value(a) - self.value(b)).abs() > 1e-9 * self.value(a).abs() {
            let rule = format!("joins circuits at {} and {} Pa", self.value(a), self.value(b));
            self.beside(
                closed,
                "to",
                &rule,
                "at rest oil flows until both have one pressure; close the line or give one pressure",
            );
        }
    }
}
