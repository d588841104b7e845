//! Rules between fields. A number that is missing or wrong is NaN here and breaks no rule again.

use serde_json::Value;

use crate::axes::CORNERS;
use crate::error::Violation;
use crate::spec::{Kind, Parameter, Slot, Spec, Tree, chamber};

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
                        .hint(crate::spec::nearest(key, known.iter().map(String::as_str))),
                );
                continue;
            };
            if spec.corner(corner).is_some_and(|corner| corner.cylinder.is_none()) {
                violations.push(Violation::new(path, "", "the corner has no cylinder"));
            } else if let Some(other) = owner[corner.index()][usize::from(bump)].replace(name) {
                violations.push(Violation::new(path, "", format!("the chamber is already in circuit {other}")));
            }
        }
    }
    for corner in CORNERS {
        if spec.corner(corner).is_none_or(|corner| corner.cylinder.is_none()) {
            continue;
        }
        for (bump, side) in [(true, "bump"), (false, "rebound")] {
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
    violations
}

/// Bounds of every number and the rules between numbers.
pub(super) fn check(spec: &Spec<Slot>, parameters: &[Parameter], numbers: &[f64]) -> Vec<Violation> {
    let mut violations = Vec::new();
    for (parameter, &value) in parameters.iter().zip(numbers) {
        if let Kind::Number { unit, bounds, .. } = &parameter.field.kind
            && !value.is_nan()
            && !bounds.holds(value)
        {
            violations.push(Violation::new(&parameter.path, value.to_string(), bounds.rule()).unit(unit));
        }
    }
    let value = |slot: Slot| numbers[slot.0];
    let mut broken = |slot: Slot, rule: String, hint: &str| {
        let parameter = &parameters[slot.0];
        let unit = match parameter.field.kind {
            Kind::Number { unit, .. } => unit,
            _ => "",
        };
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
    for circuit in spec.circuits.0.values() {
        for accumulator in circuit.accumulators.0.values() {
            match (accumulator.volume, accumulator.gas_volume) {
                (Some(volume), Some(_)) => {
                    broken(volume, "stands beside gas_volume".into(), "give one; the other follows");
                }
                (None, None) => {
                    broken(accumulator.precharge, "needs a volume beside it".into(), "give volume or gas_volume");
                }
                _ => {}
            }
        }
    }
    violations
}
