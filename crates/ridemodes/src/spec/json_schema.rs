//! JSON Schema of the vehicle file, from the tables of its fields.

use serde_json::{Map, Value, json};

use super::Spec;
use super::read::CURRENT_FORMAT;
use super::schema::{Bounds, Described, Field, Kind, Presence, Schema, TablePresence};

/// The JSON Schema (draft 2020-12) of a vehicle file.
///
/// Numbers may be given as text with a unit; the unit expected stands at `unit`, a keyword of our own. What the
/// schema cannot say (a rod narrower than its bore, chambers that are connected) is checked when a vehicle is read.
pub fn json_schema() -> Value {
    let mut root = table(Spec::<f64>::SCHEMA);
    root.insert("$schema".into(), "https://json-schema.org/draft/2020-12/schema".into());
    root.insert("title".into(), "Vehicle file of ridemodes".into());
    if let Some(Value::Object(properties)) = root.get_mut("properties") {
        properties.insert(
            "format".into(),
            json!({ "description": "Format of the file", "type": "integer", "minimum": 1, "maximum": CURRENT_FORMAT, "default": 1 }),
        );
    }
    Value::Object(root)
}

fn table(schema: &'static Schema) -> Map<String, Value> {
    let required: Vec<Value> =
        schema.fields.iter().filter(|field| is_required(&field.kind)).map(|field| field.name.into()).collect();
    let properties: Map<String, Value> = schema.fields.iter().map(|one| (one.name.into(), field(one))).collect();
    let mut object = Map::new();
    object.insert("description".into(), schema.meaning.trim().into());
    object.insert("type".into(), "object".into());
    object.insert("additionalProperties".into(), false.into());
    object.insert("properties".into(), Value::Object(properties));
    if !required.is_empty() {
        object.insert("required".into(), Value::Array(required));
    }
    object
}

fn is_required(kind: &Kind) -> bool {
    match kind {
        Kind::Number { presence, .. } => *presence == Presence::Required,
        Kind::Choice { required, .. } | Kind::Text { required } => *required,
        Kind::Table { presence, .. } => *presence == TablePresence::Required,
        Kind::Flag | Kind::List { .. } | Kind::Count { .. } | Kind::Named { .. } | Kind::Overrides => false,
    }
}

fn field(field: &'static Field) -> Value {
    let mut value = match &field.kind {
        Kind::Number { unit, bounds, pressure, presence } => number(unit, bounds, *pressure, *presence),
        Kind::Text { .. } => json!({ "type": "string" }),
        Kind::Flag => json!({ "type": "boolean", "default": false }),
        Kind::List { unit, bounds } => {
            json!({ "type": "array", "items": number(unit, bounds, false, Presence::Required) })
        }
        Kind::Count { largest } => json!({ "type": "integer", "minimum": 1, "maximum": largest, "default": 1 }),
        Kind::Choice { words, required: true } => json!({ "enum": words }),
        Kind::Choice { words, required: false } => json!({ "enum": words, "default": words[0] }),
        Kind::Table { schema, .. } => Value::Object(table(schema)),
        Kind::Named { schema } => named(Value::Object(table(schema))),
        Kind::Overrides => named(json!({ "type": "object" })),
    };
    value["description"] = field.meaning.trim().into();
    value
}

fn named(each: Value) -> Value {
    json!({ "type": "object", "propertyNames": { "pattern": "^[A-Za-z0-9_]+$" }, "additionalProperties": each })
}

fn number(unit: &str, bounds: &Bounds, pressure: bool, presence: Presence) -> Value {
    let mut plain = json!({ "type": "number" });
    if bounds.least.is_finite() {
        plain[if bounds.open { "exclusiveMinimum" } else { "minimum" }] = bounds.least.into();
    }
    if bounds.largest.is_finite() {
        plain["maximum"] = bounds.largest.into();
    }
    let text =
        if pressure { json!({ "type": "string", "pattern": "(abs|gauge)\\s*$" }) } else { json!({ "type": "string" }) };
    let mut value = json!({ "anyOf": [plain, text], "unit": unit });
    if let Presence::Default(default) = presence {
        value["default"] = default.into();
    }
    value
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn fields_bring_their_meaning_unit_and_bounds() {
        let schema = json_schema();
        let mass = &schema["properties"]["body"]["properties"]["mass"];
        assert_eq!(mass["unit"], "kg");
        assert_eq!(mass["description"], "Sprung mass.");
        assert_eq!(mass["anyOf"][0]["exclusiveMinimum"], 0.0);
        assert_eq!(schema["required"], json!(["body", "front", "rear"]));
    }
}
