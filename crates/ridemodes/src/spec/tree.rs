//! The file as a raw tree, before and after its numbers have moved into slots.

use serde_json::{Map, Value};

use super::schema::{Field, Kind, Schema};
use super::{CylinderKind, LayoutKind};
use crate::axes::{CORNERS, Corner};
use crate::error::{Error, Result};

/// A table of the raw file. Keys are ordered by name, in TOML and JSON alike.
pub(crate) type Tree = Map<String, Value>;

/// Reads TOML. Numbers that are not finite become text, so that the reader can name them.
pub(crate) fn parse_toml(text: &str) -> Result<Tree> {
    let table: toml::Table = toml::from_str(text).map_err(|error| {
        let (line, column) = position(text, error.span().map_or(0, |span| span.start));
        Error::Parse { line, column, message: error.message().to_owned() }
    })?;
    Ok(table.into_iter().map(|(key, value)| (key, from_toml(value))).collect())
}

fn from_toml(value: toml::Value) -> Value {
    match value {
        toml::Value::String(text) => text.into(),
        toml::Value::Integer(number) => number.into(),
        toml::Value::Float(number) => {
            serde_json::Number::from_f64(number).map_or_else(|| number.to_string().into(), Value::Number)
        }
        toml::Value::Boolean(truth) => truth.into(),
        toml::Value::Datetime(moment) => moment.to_string().into(),
        toml::Value::Array(items) => items.into_iter().map(from_toml).collect(),
        toml::Value::Table(table) => {
            Value::Object(table.into_iter().map(|(key, value)| (key, from_toml(value))).collect())
        }
    }
}

/// Reads JSON.
pub(crate) fn parse_json(text: &str) -> Result<Tree> {
    serde_json::from_str(text).map_err(|error| Error::Parse {
        line: error.line(),
        column: error.column(),
        message: error.to_string(),
    })
}

fn position(text: &str, offset: usize) -> (usize, usize) {
    let before = text.get(..offset).unwrap_or(text);
    let line_start = before.rfind('\n').map_or(0, |at| at + 1);
    (before.matches('\n').count() + 1, before[line_start..].chars().count() + 1)
}

/// Calls `visit(path, field, value)` for every number of a tree that has been read.
pub(crate) fn walk(
    tree: &Tree,
    schema: &'static Schema,
    path: &str,
    visit: &mut impl FnMut(String, &'static Field, &Value),
) {
    for field in schema.fields {
        let Some(value) = tree.get(field.name) else { continue };
        let path = join(path, field.name);
        match &field.kind {
            Kind::Number { .. } | Kind::Flag => visit(path, field, value),
            Kind::List { .. } => {
                for (place, item) in value.as_array().into_iter().flatten().enumerate() {
                    visit(join(&path, &place.to_string()), field, item);
                }
            }
            Kind::Table { schema, .. } => {
                if let Value::Object(table) = value {
                    walk(table, schema, &path, visit);
                }
            }
            Kind::Named { schema } => {
                for (name, table) in value.as_object().into_iter().flatten() {
                    if let Value::Object(table) = table {
                        walk(table, schema, &join(&path, name), visit);
                    }
                }
            }
            Kind::Text { .. } | Kind::Choice { .. } | Kind::Count { .. } | Kind::Overrides => {}
        }
    }
}

/// The tree with each number put through `value`.
pub(crate) fn fill(tree: &Tree, schema: &'static Schema, value: &impl Fn(&Value) -> Value) -> Tree {
    let mut filled = tree.clone();
    for field in schema.fields {
        let Some(place) = filled.get_mut(field.name) else { continue };
        match &field.kind {
            Kind::Number { .. } => *place = value(place),
            Kind::Flag => *place = (value(place).as_f64() == Some(1.0)).into(),
            Kind::List { .. } => {
                for item in place.as_array_mut().into_iter().flatten() {
                    *item = value(item);
                }
            }
            Kind::Table { schema, .. } => {
                if let Value::Object(table) = place {
                    *table = fill(table, schema, value);
                }
            }
            Kind::Named { schema } => {
                for table in place.as_object_mut().into_iter().flat_map(Map::values_mut) {
                    if let Value::Object(inner) = table {
                        *inner = fill(inner, schema, value);
                    }
                }
            }
            Kind::Text { .. } | Kind::Choice { .. } | Kind::Count { .. } | Kind::Overrides => {}
        }
    }
    filled
}

pub(crate) fn join(path: &str, name: &str) -> String {
    if path.is_empty() { name.to_owned() } else { format!("{path}.{name}") }
}

/// The tree with its groups written out: `both` as `left` and `right`, a layout as circuits. The
/// members of a group share its slots.
pub(crate) fn expand(given: &Tree) -> Tree {
    let mut tree = given.clone();
    let chambers: Vec<(Corner, bool)> = CORNERS.into_iter().flat_map(|corner| chambers(given, corner)).collect();
    for axle in ["front", "rear"] {
        if let Some(Value::Object(axle)) = tree.get_mut(axle)
            && let Some(both) = axle.remove("both")
        {
            axle.insert("left".into(), both.clone());
            axle.insert("right".into(), both);
        }
    }
    if let Some(Value::Object(layout)) = tree.remove("layout") {
        tree.insert("circuits".into(), Value::Object(circuits(&layout, &chambers)));
    }
    tree
}

// The chambers of a corner that a circuit serves.
fn chambers(tree: &Tree, corner: Corner) -> Vec<(Corner, bool)> {
    let axle = tree.get(if corner.is_front() { "front" } else { "rear" });
    let cylinder = ["both", if corner.is_left() { "left" } else { "right" }]
        .iter()
        .find_map(|side| axle.and_then(|axle| axle.get(side)?.get("cylinder")));
    let Some(cylinder) = cylinder else { return Vec::new() };
    let kind = cylinder.get("kind").and_then(|kind| serde_json::from_value::<CylinderKind>(kind.clone()).ok());
    let rebound = kind.is_none_or(CylinderKind::has_rebound_port);
    [true, false].into_iter().filter(|&bump| bump || rebound).map(|bump| (corner, bump)).collect()
}

/// Name of the circuit that a layout gives a chamber to; `bump` says which side of the piston.
pub(crate) fn circuit_of(kind: LayoutKind, corner: Corner, bump: bool) -> &'static str {
    let left = |yes: bool| if yes { "left" } else { "right" };
    let front = |yes: bool| if yes { "front" } else { "rear" };
    match kind {
        LayoutKind::Roll => left(corner.is_left() == bump),
        LayoutKind::Pitch => front(corner.is_front() == bump),
        LayoutKind::Heave => {
            if bump {
                "bump"
            } else {
                "rebound"
            }
        }
        LayoutKind::AxleRoll => {
            CORNERS[2 * usize::from(!corner.is_front()) + usize::from(corner.is_left() != bump)].name()
        }
        LayoutKind::Diagonal => CORNERS[if bump { corner.index() } else { 3 - corner.index() }].name(),
    }
}

fn circuits(layout: &Tree, chambers: &[(Corner, bool)]) -> Tree {
    let kind = layout.get("kind").and_then(|kind| serde_json::from_value(kind.clone()).ok());
    let Some(kind) = kind else { return Tree::new() };
    let ports = layout.get("ports");
    let mut circuits = Tree::new();
    for &(corner, bump) in chambers {
        let side = if bump { "bump" } else { "rebound" };
        let port = format!("{}_{side}", if corner.is_front() { "front" } else { "rear" });
        let port = ports.and_then(|ports| ports.get(port)).cloned();
        let circuit = circuits.entry(circuit_of(kind, corner, bump)).or_insert_with(|| {
            let mut circuit = Tree::new();
            for shared in ["pressure", "volume", "compliance", "accumulators"] {
                if let Some(value) = layout.get(shared) {
                    circuit.insert(shared.into(), value.clone());
                }
            }
            circuit.insert("chambers".into(), Value::Object(Tree::new()));
            Value::Object(circuit)
        });
        if let Some(Value::Object(chambers)) = circuit.get_mut("chambers") {
            chambers.insert(format!("{}_{side}", corner.name()), port.unwrap_or_default());
        }
    }
    circuits
}
