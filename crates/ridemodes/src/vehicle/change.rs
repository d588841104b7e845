//! Changing numbers by path.

use std::collections::HashMap;

use serde_json::Value;

use super::{Vehicle, is_optional, rules};
use crate::error::{Error, Result, Violation, refuse};
use crate::spec::{Described, Field, Kind, Schema, Spec, Tree, expand, number};

/// `front.both.x` as the paths of its two sides.
pub(super) fn sides(path: &str) -> Option<(String, String)> {
    let (axle, rest) = path.split_once('.')?;
    let rest = rest.strip_prefix("both.")?;
    Some((format!("{axle}.left.{rest}"), format!("{axle}.right.{rest}")))
}

/// Where a path leads in a vehicle.
enum Target {
    /// To a slot as the file gives it.
    Given(usize),
    /// To members of groups, or to a number that the file leaves out.
    Inner(&'static Field),
    /// To both sides of a pair that is given side by side.
    Sides(usize, usize),
}

pub(super) fn apply(vehicle: &Vehicle, changes: &[(String, Value)]) -> Result<Vehicle> {
    let structure = vehicle.structure();
    let atmosphere = atmosphere(vehicle, changes);
    let mut violations = overlaps(vehicle, changes);
    let mut numbers = vehicle.numbers().to_vec();
    // Changes that the structure cannot take as it is.
    let mut regroup = false;
    for (path, value) in changes {
        let Some(target) = target(vehicle, path) else {
            violations.push(structure.unknown_path(path));
            continue;
        };
        let (field, slots) = match target {
            Target::Given(slot) => (structure.parameters[slot].field, vec![slot]),
            Target::Sides(left, right) => (structure.parameters[left].field, vec![left, right]),
            Target::Inner(field) => {
                regroup = true;
                (field, Vec::new())
            }
        };
        let value = number(field, path, value, atmosphere).unwrap_or_else(|violation| {
            violations.push(violation);
            f64::NAN
        });
        for slot in slots {
            numbers[slot] = value;
        }
    }
    if !regroup {
        // What could not be read is NaN and breaks no rule again.
        violations.extend(rules::check(&structure.spec, &structure.parameters, &numbers));
        refuse(violations)?;
        return Ok(vehicle.with_checked_numbers(numbers));
    }
    match Vehicle::without_checked_settings(&regrouped(vehicle, changes)) {
        Ok(vehicle) if violations.is_empty() => Ok(vehicle),
        Ok(_) => Err(Error::InvalidInput { violations }),
        Err(Error::InvalidInput { violations: more }) => {
            let known: Vec<String> = violations.iter().map(|violation| violation.path.clone()).collect();
            violations.extend(more.into_iter().filter(|violation| !known.contains(&violation.path)));
            refuse(violations)?;
            Ok(vehicle.clone())
        }
        Err(other) => Err(other),
    }
}

// Gauge pressures count from the atmosphere that is set beside them.
fn atmosphere(vehicle: &Vehicle, changes: &[(String, Value)]) -> f64 {
    let structure = vehicle.structure();
    let Some(&slot) = structure.readable.get("atmosphere") else { return f64::NAN };
    let now = vehicle.numbers()[slot];
    let set = changes.iter().find(|(path, _)| path == "atmosphere");
    set.and_then(|(path, value)| number(structure.parameters[slot].field, path, value, now).ok()).unwrap_or(now)
}

fn target(vehicle: &Vehicle, path: &str) -> Option<Target> {
    let structure = vehicle.structure();
    let slot = |path: &str| structure.readable.get(path).copied();
    if let Some(slot) = slot(path) {
        let parameter = &structure.parameters[slot];
        return Some(if parameter.path == path { Target::Given(slot) } else { Target::Inner(parameter.field) });
    }
    let given = structure.filled(vehicle.numbers());
    let expanded = expand(&given);
    let optional = |path: &str| {
        field_at(&given, Spec::<f64>::SCHEMA, path)
            .or_else(|| field_at(&expanded, Spec::<f64>::SCHEMA, path))
            .filter(|field| is_optional(&field.kind))
    };
    match sides(path) {
        Some((left, right)) => match (slot(&left), slot(&right)) {
            (Some(left), Some(right)) => Some(Target::Sides(left, right)),
            // A part that one side lacks is not half set.
            _ => optional(&left).and(optional(&right)).map(Target::Inner),
        },
        None => optional(path).map(Target::Inner),
    }
}

// Paths that lead to the same number. A pair is its two sides, a layout its circuits.
fn overlaps(vehicle: &Vehicle, changes: &[(String, Value)]) -> Vec<Violation> {
    let structure = vehicle.structure();
    let mut owner: HashMap<String, &str> = HashMap::new();
    let mut violations = Vec::new();
    for (path, _) in changes {
        let mut leaves = match sides(path) {
            Some((left, right)) => vec![left, right],
            None => vec![path.clone()],
        };
        if path.starts_with("layout.")
            && let Some(slot) = structure.readable.get(path)
        {
            leaves.extend(structure.members(*slot).map(str::to_owned));
        }
        let taken = leaves.iter().find_map(|leaf| owner.get(leaf).copied());
        if let Some(other) = taken {
            violations
                .push(Violation::new(path, "", format!("sets the same number as {other}")).hint("give one of them"));
        }
        for leaf in leaves {
            owner.insert(leaf, path);
        }
    }
    violations
}

fn field_at(tree: &Tree, schema: &'static Schema, path: &str) -> Option<&'static Field> {
    let (head, rest) = path.split_once('.').unwrap_or((path, ""));
    let field = schema.fields.iter().find(|field| field.name == head)?;
    match &field.kind {
        Kind::Number { .. } | Kind::Flag => rest.is_empty().then_some(field),
        Kind::Table { schema, .. } => field_at(tree.get(head)?.as_object()?, schema, rest),
        Kind::Named { schema } => {
            let (name, rest) = rest.split_once('.')?;
            field_at(tree.get(head)?.as_object()?.get(name)?.as_object()?, schema, rest)
        }
        _ => None,
    }
}

// The raw tree with the changes, the groups split that they reach into. What the file gives as it is comes
// first: a group that is split later takes it along.
fn regrouped(vehicle: &Vehicle, changes: &[(String, Value)]) -> Tree {
    let structure = vehicle.structure();
    let mut tree = structure.filled(vehicle.numbers());
    let inner = |path: &str| matches!(target(vehicle, path), Some(Target::Inner(_)));
    let (inner, given): (Vec<_>, Vec<_>) = changes.iter().partition(|(path, _)| inner(path));
    for (path, value) in given.into_iter().chain(inner) {
        set(&mut tree, path, value.clone());
    }
    if structure.given.contains_key("layout") && !tree.contains_key("layout") {
        move_settings(vehicle, &mut tree);
    }
    tree
}

// Settings that speak of a layout speak of its circuits once it is split.
fn move_settings(vehicle: &Vehicle, tree: &mut Tree) {
    let structure = vehicle.structure();
    let Some(Value::Object(settings)) = tree.get_mut("settings") else { return };
    for set in settings.values_mut().filter_map(Value::as_object_mut) {
        let moved: Vec<(String, Value)> =
            set.iter().filter(|(path, _)| path.starts_with("layout.")).map(|(k, v)| (k.clone(), v.clone())).collect();
        for (path, value) in moved {
            set.remove(&path);
            if let Some(&slot) = structure.readable.get(&path) {
                for member in structure.members(slot) {
                    set.insert(member.to_owned(), value.clone());
                }
            }
        }
    }
}

// Sets a number in a raw tree, splitting the group that it is a member of.
fn set(tree: &mut Tree, path: &str, value: Value) {
    let mut keys: Vec<&str> = path.split('.').collect();
    if let ["front" | "rear", side, ..] = keys[..]
        && let Some(Value::Object(axle)) = tree.get_mut(keys[0])
    {
        if matches!(side, "left" | "right")
            && let Some(both) = axle.remove("both")
        {
            axle.insert("left".into(), both.clone());
            axle.insert("right".into(), both);
        }
        if side == "both" && !axle.contains_key("both") {
            for side in ["left", "right"] {
                keys[1] = side;
                insert(axle, &keys[1..], value.clone());
            }
            return;
        }
    }
    if keys[0] == "circuits" && tree.contains_key("layout") {
        let circuits = expand(tree).remove("circuits").unwrap_or_default();
        tree.remove("layout");
        tree.insert("circuits".into(), circuits);
    }
    insert(tree, &keys, value);
}

fn insert(tree: &mut Tree, keys: &[&str], value: Value) {
    match keys {
        [] => {}
        [last] => {
            tree.insert((*last).to_owned(), value);
        }
        [first, rest @ ..] => match (tree.get_mut(*first), rest) {
            (Some(Value::Object(inner)), _) => insert(inner, rest, value),
            (Some(Value::Array(list)), [place]) => {
                if let Some(item) = place.parse().ok().and_then(|place: usize| list.get_mut(place)) {
                    *item = value;
                }
            }
            _ => {}
        },
    }
}
