//! Rules between fields. A number that is missing or wrong is NaN here and breaks no rule again.

use serde_json::Value;

use crate::axes::CORNERS;
use crate::error::Violation;
use crate::hydraulics::pressure;
use crate::spec::{Parameter, Slot, Spec, Tree, chamber, nearest};

mod parts;

/// Rules on groups of the raw file: pairs, layouts, cylinders.
pub(super) fn groups(tree: &Tree) -> Vec<Violation> {
    let mut violations = Vec::new();
    for axle in ["front", "rear"].into_iter().filter(|axle| tree.get(*axle).is_some_and(Value::is_object)) {
        let has = |side: &str| tree.get(axle).and_then(|axle| axle.get(side)).is_some();
        match (has("both"), has("left"), has("right")) {
            (true, false, false) | (false, true, true) => {}
            (true, ..) => violations.push(
                Violation::new(format!("{axle}.both"), "a table", "stands beside left or right")
                    .hint("give both, or left and right"),
            ),
            (false, false, false) => violations
                .push(Violation::new(format!("{axle}.both"), "", "is missing").hint("give both, or left and right")),
            (false, left, _) => violations.push(
                Violation::new(format!("{axle}.{}", if left { "right" } else { "left" }), "", "is missing")
                    .hint("give both, or left and right"),
            ),
        }
    }
    let circuits = tree.get("circuits").and_then(Value::as_object).is_some_and(|circuits| !circuits.is_empty());
    if tree.contains_key("layout") && circuits {
        violations.push(
            Violation::new("layout", "a table", "stands beside circuits").hint("give a layout, or circuits one by one"),
        );
    }
    let equipped =
        ["front", "rear"].iter().flat_map(|axle| tree.get(*axle)?.as_object()).flatten().any(|(side, corner)| {
            matches!(side.as_str(), "both" | "left" | "right") && corner.get("cylinder").is_some()
        });
    if tree.contains_key("layout") && !equipped {
        violations.push(
            Violation::new("layout", "a table", "no corner has a cylinder").hint("for example front.both.cylinder"),
        );
    }
    violations
}

/// Rules on what is connected to what.
pub(super) fn connections(spec: &Spec<Slot>) -> Vec<Violation> {
    let mut violations = Vec::new();
    let mut owner: [[Option<&str>; 2]; 4] = Default::default();
    for (name, circuit) in &spec.circuits.0 {
        if circuit.chambers.0.is_empty() {
            violations.push(
                Violation::new(format!("circuits.{name}.chambers"), "", "a circuit needs a chamber")
                    .hint("for example chambers.front_left_bump = {}"),
            );
        }
        for key in circuit.chambers.0.keys() {
            let path = format!("circuits.{name}.chambers.{key}");
            let Some((corner, bump)) = chamber(key) else {
                let known = CORNERS
                    .iter()
                    .flat_map(|corner| ["bump", "rebound"].map(|side| format!("{}_{side}", corner.name())));
                let known: Vec<String> = known.collect();
                violations.push(
                    Violation::new(path, format!("\"{key}\""), "no such chamber")
                        .hint(nearest(key, known.iter().map(String::as_str))),
                );
                continue;
            };
            let cylinder = spec.corner(corner).and_then(|corner| corner.cylinder.as_ref());
            if spec.corner(corner).is_some_and(|corner| corner.cylinder.is_none()) {
                violations.push(Violation::new(path, "", "the corner has no cylinder"));
            } else if !bump && cylinder.is_some_and(|cylinder| !cylinder.kind.has_rebound_port()) {
                violations.push(
                    Violation::new(path, "", "the cylinder has no such port").hint("its one port is the bump chamber"),
                );
            } else if let Some(other) = owner[corner.index()][usize::from(bump)].replace(name) {
                violations.push(Violation::new(path, "", format!("the chamber is already in circuit {other}")));
            }
        }
    }
    for corner in CORNERS {
        let Some(cylinder) = spec.corner(corner).and_then(|corner| corner.cylinder.as_ref()) else { continue };
        for (bump, side) in [(true, "bump"), (false, "rebound")] {
            if !bump && !cylinder.kind.has_rebound_port() {
                continue;
            }
            if owner[corner.index()][usize::from(bump)].is_none() {
                violations.push(
                    Violation::new(
                        format!("circuits.*.chambers.{}_{side}", corner.name()),
                        "",
                        "the chamber is connected to no circuit",
                    )
                    .hint("list it in a circuit, or choose a layout"),
                );
            }
        }
    }
    if !spec.circuits.0.is_empty() && spec.oil.is_none() {
        violations.push(Violation::new("oil", "", "is missing").hint("circuits need oil"));
    }
    for name in spec.circuits.0.keys().filter(|name| pressure(spec, name).is_none()) {
        violations.push(
            Violation::new(format!("circuits.{name}.pressure"), "", "is missing")
                .unit("Pa")
                .hint("system pressure at the design condition, of this circuit or of one that a line joins it to"),
        );
    }
    violations.extend(places(spec));
    violations
}

// Names of circuits and nodes that other parts speak of.
fn places(spec: &Spec<Slot>) -> Vec<Violation> {
    let mut violations = Vec::new();
    let circuits = || spec.circuits.0.keys().map(String::as_str);
    let nodes = || spec.nodes.0.keys().map(String::as_str);
    for (name, node) in &spec.nodes.0 {
        if spec.circuits.0.contains_key(name) {
            violations.push(
                Violation::new(format!("nodes.{name}"), "", "a circuit has the same name")
                    .hint("lines speak of circuits and nodes by name"),
            );
        }
        if !node.circuit.is_empty() && !spec.circuits.0.contains_key(&node.circuit) {
            violations.push(unknown(&format!("nodes.{name}.circuit"), &node.circuit, "no such circuit", circuits()));
        }
    }
    for (name, line) in &spec.lines.0 {
        for (end, place) in [("from", &line.from), ("to", &line.to)] {
            if !place.is_empty() && !spec.circuits.0.contains_key(place) && !spec.nodes.0.contains_key(place) {
                let path = format!("lines.{name}.{end}");
                violations.push(unknown(&path, place, "no such circuit or node", circuits().chain(nodes())));
            }
        }
        if line.from == line.to && !line.from.is_empty() {
            violations.push(Violation::new(
                format!("lines.{name}.to"),
                format!("\"{}\"", line.to),
                "is where it starts",
            ));
        }
    }
    for (name, circuit) in &spec.circuits.0 {
        let ports = circuit.chambers.0.iter().map(|(key, port)| (format!("chambers.{key}"), &port.node));
        let gas = circuit.accumulators.0.iter().map(|(key, own)| (format!("accumulators.{key}"), &own.node));
        for (key, node) in ports.chain(gas) {
            let Some(node) = node else { continue };
            let path = format!("circuits.{name}.{key}.node");
            match spec.nodes.0.get(node) {
                None => violations.push(unknown(&path, node, "no such node", nodes())),
                Some(own) if own.circuit != *name => violations.push(Violation::new(
                    path,
                    format!("\"{node}\""),
                    format!("the node is in circuit {}", own.circuit),
                )),
                Some(_) => {}
            }
        }
    }
    violations
}

fn unknown<'a>(path: &str, name: &str, rule: &str, known: impl Iterator<Item = &'a str>) -> Violation {
    let known: Vec<&str> = known.collect();
    let hint = if known.is_empty() { "there is none".into() } else { nearest(name, known.into_iter()) };
    Violation::new(path, format!("\"{name}\""), rule).hint(hint)
}

/// Bounds of every number and the rules between numbers.
pub(super) fn check(spec: &Spec<Slot>, parameters: &[Parameter], numbers: &[f64]) -> Vec<Violation> {
    let mut violations = Vec::new();
    for (parameter, &value) in parameters.iter().zip(numbers) {
        if let Some((unit, bounds)) = parameter.field.kind.number()
            && !value.is_nan()
            && !bounds.holds(value)
        {
            violations.push(Violation::new(&parameter.path, value.to_string(), bounds.rule()).unit(unit));
        }
    }
    let value = |slot: Slot| numbers[slot.0];
    let mut broken = |slot: Slot, rule: String, hint: &str| {
        let parameter = &parameters[slot.0];
        let unit = parameter.field.kind.number().map_or("", |(unit, _)| unit);
        let violation = Violation::new(&parameter.path, numbers[slot.0].to_string(), rule).unit(unit).hint(hint);
        if !violations.contains(&violation) {
            violations.push(violation);
        }
    };
    let body = &spec.body;
    let product = value(body.roll_pitch_product);
    if product * product >= value(body.roll_inertia) * value(body.pitch_inertia) {
        broken(
            body.roll_pitch_product,
            "its square must be less than roll_inertia · pitch_inertia".into(),
            "no mass distribution has such a product",
        );
    }
    for axle in [&spec.front, &spec.rear] {
        if value(body.cg_offset).abs() >= 0.5 * value(axle.track) {
            broken(
                body.cg_offset,
                format!("must lie between the wheels, within ± {}", 0.5 * value(axle.track)),
                "beyond them the vehicle tips over",
            );
        }
    }
    for corner in CORNERS {
        if let Some(cylinder) = spec.corner(corner).and_then(|corner| corner.cylinder.as_ref())
            && value(cylinder.rod) >= value(cylinder.bore)
        {
            broken(
                cylinder.rod,
                format!("must be less than the bore, {}", value(cylinder.bore)),
                "the rod is wider than its bore: were they exchanged, or is one a radius?",
            );
        }
    }
    if let Some(oil) = &spec.oil
        && value(oil.kinematic_viscosity_hot) >= value(oil.kinematic_viscosity)
    {
        broken(
            oil.kinematic_viscosity_hot,
            format!("must be less than at 40 °C, {}", value(oil.kinematic_viscosity)),
            "oil thins as it warms",
        );
    }
    violations.extend(parts::check(spec, parameters, numbers));
    violations
}
