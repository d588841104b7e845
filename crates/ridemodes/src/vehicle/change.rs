//! Changing numbers by path.

use serde_json::Value;

use super::structure::kind_is_number;
use super::{Vehicle, is_optional};
use crate::error::{Result, Violation, refuse};
use crate::spec::{Described, Field, Kind, Schema, Spec, Tree, expand, number};

/// `front.both.x` as the paths of its two sides.
pub(super) fn sides(path: &str) -> Option<(String, String)> {
    let (axle, rest) = path.split_once('.')?;
    let rest = rest.strip_prefix("both.")?;
    Some((format!("{axle}.left.{rest}"), format!("{axle}.right.{rest}")))
}

pub(super) fn apply(vehicle: &Vehicle, changes: &[(String, Value)]) -> Result<Vehicle> {
    let structure = vehicle.structure();
    let atmosphere = structure.readable.get("atmosphere").map_or(f64::NAN, |&slot| vehicle.numbers()[slot]);
    let mut violations = Vec::new();
    let mut numbers = vehicle.numbers().to_vec();
    let mut owner: Vec<Option<&str>> = vec![None; numbers.len()];
    // Changes that the structure cannot take as it is: a side of a pair, an optional number.
    let mut regroup = false;
    for (path, value) in changes {
        let pair = sides(path);
        let targets: Vec<usize> = match (structure.readable.get(path), &pair) {
            (Some(&slot), _) => {
                regroup |= structure.parameters[slot].path != *path;
                vec![slot]
            }
            (None, Some((left, right))) => {
                [left, right].into_iter().filter_map(|side| structure.readable.get(side).copied()).collect()
            }
            (None, None) => Vec::new(),
        };
        if targets.is_empty() {
            match optional_field(vehicle, path) {
                Some(field) => {
                    regroup = true;
                    violations.extend(number(field, path, value, atmosphere).err());
                }
                None => violations.push(structure.unknown_path(path)),
            }
            continue;
        }
        for slot in targets {
            match number(structure.parameters[slot].field, path, value, atmosphere) {
                Ok(value) => numbers[slot] = value,
                Err(violation) => {
                    violations.push(violation);
                    break;
                }
            }
            let both_sides_of_one = owner[slot].is_some_and(|other| regroup && is_other_side(other, path));
            match owner[slot] {
                Some(other) if !both_sides_of_one => violations.push(
                    Violation::new(path, "", format!("sets the same number as {other}")).hint("give one of them"),
                ),
                _ => owner[slot] = Some(path),
            }
        }
    }
    refuse(violations)?;
    if !regroup {
        return vehicle.with_numbers(numbers);
    }
    let mut tree = structure.filled(vehicle.numbers());
    for (path, value) in changes {
        // A text is turned to SI where it is read again.
        set(&mut tree, path, value.clone());
    }
    Vehicle::from_tree(&tree)
}

// `front.left.x` and `front.right.x` are one number only until the pair is split, and so are two
// circuits of a layout.
fn is_other_side(a: &str, b: &str) -> bool {
    a != b && !a.contains(".both.") && !b.contains(".both.") && !a.starts_with("layout.") && !b.starts_with("layout.")
}

// A number that the file leaves out but could give: its table is there.
fn optional_field(vehicle: &Vehicle, path: &str) -> Option<&'static Field> {
    let given = vehicle.structure().filled(vehicle.numbers());
    let find = |path: &str, tree: &Tree| field_at(tree, Spec::<f64>::SCHEMA, path);
    find(path, &given)
        .or_else(|| find(path, &expand(&given)))
        .or_else(|| find(&sides(path)?.0, &given))
        .filter(|field| is_optional(&field.kind))
}

fn field_at(tree: &Tree, schema: &'static Schema, path: &str) -> Option<&'static Field> {
    let (head, rest) = path.split_once('.').unwrap_or((path, ""));
    let field = schema.fields.iter().find(|field| field.name == head)?;
    match &field.kind {
        kind if kind_is_number(kind) => rest.is_empty().then_some(field),
        Kind::Table { schema, .. } => field_at(tree.get(head)?.as_object()?, schema, rest),
        Kind::Named { schema } => {
            let (name, rest) = rest.split_once('.')?;
            field_at(tree.get(head)?.as_object()?.get(name)?.as_object()?, schema, rest)
        }
        _ => None,
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
        [first, rest @ ..] => {
            if let Some(Value::Object(inner)) = tree.get_mut(*first) {
                insert(inner, rest, value);
            }
        }
    }
}
