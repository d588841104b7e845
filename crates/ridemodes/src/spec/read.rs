//! From the raw tree to slots and numbers, with every violation on the way.

use serde_json::{Map, Value};

use super::Spec;
use super::schema::{Bounds, Described, Field, Kind, Presence, Schema, TablePresence};
use super::tree::{Tree, join};
use crate::error::Violation;
use crate::units::{self, Reference, STANDARD_ATMOSPHERE};

/// The newest file format this library reads.
pub(crate) const CURRENT_FORMAT: u64 = 1;

/// A number of a vehicle.
#[derive(Clone, Debug)]
pub(crate) struct Parameter {
    pub path: String,
    pub field: &'static Field,
}

/// A tree whose numbers have moved into slots. What was wrong is in `violations`; a number that is
/// missing or wrong is NaN, so that the rules between fields can still be checked.
pub(crate) struct Reading {
    pub tree: Tree,
    pub parameters: Vec<Parameter>,
    pub numbers: Vec<f64>,
    pub violations: Vec<Violation>,
    atmosphere: f64,
}

/// Reads a whole file.
pub(crate) fn read_tree(raw: &Tree) -> Reading {
    let mut raw = raw.clone();
    let format = raw.remove("format");
    let mut reading = Reading {
        tree: Tree::new(),
        parameters: Vec::new(),
        numbers: Vec::new(),
        violations: Vec::new(),
        atmosphere: STANDARD_ATMOSPHERE,
    };
    if let Some(format) = format {
        match format.as_u64() {
            Some(1..=CURRENT_FORMAT) => {}
            Some(newer) if newer > CURRENT_FORMAT => reading.violations.push(
                Violation::new(
                    "format",
                    newer.to_string(),
                    format!("file format {newer} is newer than this library reads ({CURRENT_FORMAT})"),
                )
                .hint("use a newer version of ridemodes"),
            ),
            _ => reading.violations.push(Violation::new(
                "format",
                describe(&format),
                format!("must be a whole number from 1 to {CURRENT_FORMAT}"),
            )),
        }
    }
    let atmosphere = Spec::<f64>::SCHEMA.fields.iter().find(|field| field.name == "atmosphere");
    if let (Some(field), Some(value)) = (atmosphere, raw.get("atmosphere"))
        && let Ok(value) = number(field, "atmosphere", value, STANDARD_ATMOSPHERE)
    {
        reading.atmosphere = value;
    }
    reading.tree = reading.table(Some(&raw), Spec::<f64>::SCHEMA, "", false);
    reading
}

impl Reading {
    // `given` is None under a table that is missing itself; `quiet` then keeps its fields from
    // being reported one by one.
    fn table(&mut self, given: Option<&Tree>, schema: &'static Schema, path: &str, quiet: bool) -> Tree {
        for (key, value) in given.into_iter().flatten() {
            if !schema.fields.iter().any(|field| field.name == key) {
                let names = schema.fields.iter().map(|field| field.name);
                self.violations
                    .push(Violation::new(join(path, key), describe(value), "unknown key").hint(nearest(key, names)));
            }
        }
        let mut tree = Tree::new();
        for field in schema.fields {
            let value = given.and_then(|table| table.get(field.name));
            if let Some(read) = self.field(value, field, join(path, field.name), quiet) {
                tree.insert(field.name.into(), read);
            }
        }
        tree
    }

    fn field(&mut self, value: Option<&Value>, field: &'static Field, path: String, quiet: bool) -> Option<Value> {
        match &field.kind {
            Kind::Number { unit, presence, .. } => {
                let number = match (value, presence) {
                    (Some(value), _) => number(field, &path, value, self.atmosphere).unwrap_or_else(|violation| {
                        self.violations.push(violation);
                        f64::NAN
                    }),
                    (None, Presence::Default(default)) => *default,
                    (None, Presence::Optional) => return None,
                    (None, Presence::Required) => {
                        self.missing(&path, unit, field, quiet);
                        f64::NAN
                    }
                };
                Some(self.slot(number, path, field))
            }
            Kind::Flag => {
                let truth = value.map_or(Ok(0.0), |value| number(field, &path, value, self.atmosphere));
                let truth = truth.unwrap_or_else(|violation| {
                    self.violations.push(violation);
                    f64::NAN
                });
                Some(self.slot(truth, path, field))
            }
            Kind::List { .. } => match value {
                None => None,
                Some(Value::Array(items)) => {
                    let mut slots = Vec::new();
                    for (place, item) in items.iter().enumerate() {
                        let path = join(&path, &place.to_string());
                        let number = number(field, &path, item, self.atmosphere).unwrap_or_else(|violation| {
                            self.violations.push(violation);
                            f64::NAN
                        });
                        slots.push(self.slot(number, path, field));
                    }
                    Some(slots.into())
                }
                Some(other) => {
                    self.violations.push(Violation::new(path, describe(other), "must be a list of numbers"));
                    None
                }
            },
            Kind::Count { largest } => match value {
                None => Some(1.into()),
                Some(whole) if whole.as_u64().is_some_and(|whole| (1..=*largest).contains(&whole)) => {
                    Some(whole.clone())
                }
                Some(other) => {
                    let rule = format!("must be a whole number from 1 to {largest}");
                    self.violations.push(Violation::new(path, describe(other), rule));
                    Some(1.into())
                }
            },
            Kind::Text { required } => match value {
                None => {
                    if *required {
                        self.missing(&path, "", field, quiet);
                    }
                    required.then(|| "".into())
                }
                Some(Value::String(text)) => Some(text.clone().into()),
                Some(other) => {
                    self.violations.push(Violation::new(path, describe(other), "must be a text"));
                    required.then(|| "".into())
                }
            },
            Kind::Choice { words, required } => {
                match value {
                    Some(Value::String(word)) if words.contains(&word.as_str()) => return Some(word.clone().into()),
                    Some(other) => {
                        let hint = match other {
                            Value::String(word) => nearest(word, words.iter().copied()),
                            _ => String::new(),
                        };
                        let rule = format!("must be one of {}", words.join(", "));
                        self.violations.push(Violation::new(path, describe(other), rule).hint(hint));
                    }
                    None if *required => self.missing(&path, "", field, quiet),
                    None => {}
                }
                Some(words[0].into())
            }
            Kind::Table { schema, presence } => match value {
                Some(Value::Object(table)) => Some(Value::Object(self.table(Some(table), schema, &path, quiet))),
                None if *presence == TablePresence::Optional => None,
                None if *presence == TablePresence::Filled => {
                    Some(Value::Object(self.table(Some(&Map::new()), schema, &path, quiet)))
                }
                other => {
                    match other {
                        Some(other) => self.not_a_table(&path, other),
                        None => self.missing(&path, "", field, quiet),
                    }
                    Some(Value::Object(self.table(None, schema, &path, true)))
                }
            },
            Kind::Named { schema } => {
                let tables = self.named(value, schema, &path);
                (!tables.is_empty()).then_some(Value::Object(tables))
            }
            Kind::Overrides => {
                // Values are checked once all paths are known.
                match value {
                    None => None,
                    Some(Value::Object(sets)) => {
                        for (name, set) in sets {
                            self.name(&join(&path, name), name);
                            if !set.is_object() {
                                self.not_a_table(&join(&path, name), set);
                            }
                        }
                        let sets = sets.iter().filter(|(_, set)| set.is_object());
                        Some(Value::Object(sets.map(|(name, set)| (name.clone(), set.clone())).collect()))
                    }
                    Some(other) => {
                        self.not_a_table(&path, other);
                        None
                    }
                }
            }
        }
    }

    fn slot(&mut self, number: f64, path: String, field: &'static Field) -> Value {
        self.numbers.push(number);
        self.parameters.push(Parameter { path, field });
        (self.numbers.len() - 1).into()
    }

    fn named(&mut self, value: Option<&Value>, schema: &'static Schema, path: &str) -> Tree {
        let mut tree = Tree::new();
        match value {
            None => {}
            Some(Value::Object(tables)) => {
                for (name, table) in tables {
                    let path = join(path, name);
                    self.name(&path, name);
                    if let Value::Object(table) = table {
                        tree.insert(name.clone(), Value::Object(self.table(Some(table), schema, &path, false)));
                    } else {
                        self.not_a_table(&path, table);
                    }
                }
            }
            Some(Value::Array(_)) => self.violations.push(
                Violation::new(path, "a list", "must be a table keyed by names")
                    .hint("give each entry a name, so that its path is stable"),
            ),
            Some(other) => self.not_a_table(path, other),
        }
        tree
    }

    fn name(&mut self, path: &str, name: &str) {
        if name.is_empty() || !name.chars().all(|c| c.is_ascii_alphanumeric() || c == '_') {
            self.violations.push(
                Violation::new(path, format!("\"{name}\""), "a name is made of letters, digits and _")
                    .hint("dots would end it inside a path"),
            );
        }
    }

    fn missing(&mut self, path: &str, unit: &str, field: &Field, quiet: bool) {
        if !quiet {
            let meaning = field.meaning.trim().trim_end_matches('.');
            // "tyre: is missing (Tyre)" says nothing more.
            let hint = if meaning.to_lowercase() == field.name { "" } else { meaning };
            self.violations.push(Violation::new(path, "", "is missing").unit(unit).hint(hint));
        }
    }

    fn not_a_table(&mut self, path: &str, value: &Value) {
        self.violations.push(Violation::new(path, describe(value), "must be a table"));
    }
}

/// A number as a file or a caller gives it, in SI and within its bounds.
pub(crate) fn number(field: &Field, path: &str, value: &Value, atmosphere: f64) -> Result<f64, Violation> {
    if matches!(field.kind, Kind::Flag) {
        let truth = value.as_bool().ok_or_else(|| Violation::new(path, describe(value), "must be true or false"))?;
        return Ok(f64::from(truth));
    }
    let Some((unit, bounds)) = field.kind.number() else {
        return Err(Violation::new(path, describe(value), "is not a number of the vehicle"));
    };
    let pressure = matches!(field.kind, Kind::Number { pressure: true, .. });
    let wrong = |rule: String, hint: String| Violation::new(path, describe(value), rule).unit(unit).hint(hint);
    let si = match value {
        Value::Number(number) => number.as_f64().unwrap_or(f64::NAN),
        Value::String(text) => match text.trim().trim_start_matches(['+', '-']) {
            "nan" | "NaN" | "inf" | "Infinity" => return Err(wrong("must be a finite number".into(), String::new())),
            _ => {
                let quantity = units::read(text, unit).map_err(|misread| wrong(misread.rule, misread.hint))?;
                match (pressure, quantity.reference) {
                    (true, Some(Reference::Absolute)) | (false, None) => quantity.value,
                    (true, Some(Reference::Gauge)) => quantity.value + atmosphere,
                    (true, None) => {
                        let bar =
                            |p: f64| format!("{:.5}", p / 1e5).trim_end_matches('0').trim_end_matches('.').to_owned();
                        return Err(wrong(
                            "a pressure must say abs or gauge".into(),
                            format!(
                                "\"{text} abs\" is {} bar absolute, \"{text} gauge\" is {} bar absolute",
                                bar(quantity.value),
                                bar(quantity.value + atmosphere)
                            ),
                        ));
                    }
                    (false, Some(_)) => {
                        return Err(wrong("is not a pressure of the system".into(), "leave out abs or gauge".into()));
                    }
                }
            }
        },
        _ => return Err(wrong("must be a number, or a text of number and unit".into(), String::new())),
    };
    if bounds.holds(si) {
        Ok(si)
    } else if !si.is_finite() {
        Err(wrong("must be a finite number".into(), String::new()))
    } else {
        let hint = match value {
            Value::Number(number) if si != 0.0 => slip(number, unit, bounds).unwrap_or_default(),
            _ if si == 0.0 => "leave it out if there is none".into(),
            _ => String::new(),
        };
        Err(wrong(bounds.rule(), hint))
    }
}

// A plain number out of its bounds is often one in a unit of daily use.
fn slip(number: &serde_json::Number, unit: &str, bounds: Bounds) -> Option<String> {
    let daily: &[&str] = match unit {
        "m" => &["mm", "cm"],
        "m^3" => &["L", "cm^3"],
        "m^2/s" => &["mm^2/s"],
        "kg/m^3" => &["kg/L"],
        "K" => &["degC"],
        "1" => &["%"],
        _ => return None,
    };
    daily.iter().map(|daily| format!("{number} {daily}")).find_map(|text| {
        let meant = units::read(&text, unit).ok()?.value;
        bounds.holds(meant).then(|| format!("a plain number is in {unit}; did you mean \"{text}\"?"))
    })
}

pub(crate) fn describe(value: &Value) -> String {
    match value {
        Value::Null => "nothing".into(),
        Value::Array(_) => "a list".into(),
        Value::Object(_) => "a table".into(),
        other => other.to_string(),
    }
}

/// "did you mean …" with the names closest to one that is unknown.
pub(crate) fn nearest<'a>(name: &str, names: impl Iterator<Item = &'a str>) -> String {
    let mut scored: Vec<(f64, &str)> = names.map(|known| (strsim::jaro_winkler(name, known), known)).collect();
    scored.sort_by(|a, b| b.0.total_cmp(&a.0).then(a.1.cmp(b.1)));
    let close: Vec<&str> = scored.iter().filter(|(score, _)| *score > 0.75).take(3).map(|&(_, known)| known).collect();
    if close.is_empty() {
        let all: Vec<&str> = scored.iter().take(8).map(|&(_, known)| known).collect();
        format!("known here: {}", all.join(", "))
    } else {
        format!("did you mean {}?", close.join(" or "))
    }
}
