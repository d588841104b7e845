//! The validated vehicle: an immutable structure and one flat vector of numbers.

mod change;
mod file;
mod rules;
mod structure;

use std::sync::Arc;

use serde_json::Value;

use crate::error::{Error, Result, Violation};
use crate::spec::{Bounds, Kind, Presence, Slot, Spec};

pub(crate) use structure::Structure;

/// A vehicle that has passed every check.
///
/// The structure (which elements, nodes, lines and names) is shared between all vehicles that
/// differ by numbers alone, so that changing numbers costs no parsing.
#[derive(Clone, Debug)]
pub struct Vehicle {
    structure: Arc<Structure>,
    numbers: Arc<[f64]>,
}

/// One number of a vehicle, as [`Vehicle::parameters`] lists it.
#[derive(Clone, Debug, PartialEq)]
pub struct Parameter {
    /// Path, e.g. `front.both.spring.rate`.
    pub path: String,
    /// Value [SI].
    pub value: f64,
    /// SI unit, "1" if none.
    pub unit: &'static str,
    /// What it means.
    pub meaning: &'static str,
    /// Values it may take.
    pub bounds: Bounds,
}

/// A value given to [`Vehicle::with_values`]: an SI number or a text with its unit.
#[derive(Clone, Debug, PartialEq)]
pub enum Quantity {
    /// Number in the SI unit of the path.
    Number(f64),
    /// Text of number and unit, e.g. `32 bar abs`.
    Text(String),
}

impl From<f64> for Quantity {
    fn from(number: f64) -> Self {
        Self::Number(number)
    }
}

impl From<&str> for Quantity {
    fn from(text: &str) -> Self {
        Self::Text(text.to_owned())
    }
}

impl From<Quantity> for Value {
    fn from(quantity: Quantity) -> Self {
        match quantity {
            // A number that is not finite has no JSON form; as text it is refused by name.
            Quantity::Number(number) => {
                serde_json::Number::from_f64(number).map_or_else(|| number.to_string().into(), Self::Number)
            }
            Quantity::Text(text) => text.into(),
        }
    }
}

/// Two vehicles are equal when their files would be.
impl PartialEq for Vehicle {
    fn eq(&self, other: &Self) -> bool {
        self.numbers == other.numbers
            && (Arc::ptr_eq(&self.structure, &other.structure) || self.structure.given == other.structure.given)
    }
}

impl Vehicle {
    pub(crate) fn structure(&self) -> &Arc<Structure> {
        &self.structure
    }

    pub(crate) fn numbers(&self) -> &Arc<[f64]> {
        &self.numbers
    }

    pub(crate) fn spec(&self) -> &Spec<Slot> {
        &self.structure.spec
    }

    /// Name given in the file.
    pub fn name(&self) -> Option<&str> {
        self.spec().name.as_deref()
    }

    /// Description given in the file.
    pub fn description(&self) -> Option<&str> {
        self.spec().description.as_deref()
    }

    /// Names of the settings in the file, in their order.
    pub fn settings(&self) -> Vec<&str> {
        self.spec().settings.0.keys().map(String::as_str).collect()
    }

    /// Names of the circuits, in their order.
    pub fn circuits(&self) -> Vec<&str> {
        self.spec().circuits.0.keys().map(String::as_str).collect()
    }

    /// Every number once, as the file gives it, ordered by path.
    pub fn parameters(&self) -> Vec<Parameter> {
        let mut list: Vec<Parameter> = self
            .structure
            .parameters
            .iter()
            .zip(self.numbers.iter())
            .filter_map(|(parameter, &value)| {
                let (unit, bounds) = parameter.field.kind.number()?;
                let meaning = parameter.field.meaning.trim();
                Some(Parameter { path: parameter.path.clone(), value, unit, meaning, bounds })
            })
            .collect();
        list.sort_by(|a, b| a.path.cmp(&b.path));
        list
    }

    /// The number at a path; one side of a pair, or one circuit of a layout, can be read too.
    pub fn value(&self, path: &str) -> Result<f64> {
        if let Some(&slot) = self.structure.readable.get(path) {
            return Ok(self.numbers[slot]);
        }
        if let Some((left, right)) = change::sides(path)
            && let (Some(&left), Some(&right)) =
                (self.structure.readable.get(&left), self.structure.readable.get(&right))
        {
            let (left, right) = (self.numbers[left], self.numbers[right]);
            return if left == right {
                Ok(left)
            } else {
                Err(Error::invalid(
                    Violation::new(path, format!("{left} left, {right} right"), "the two sides differ")
                        .hint("ask for one side"),
                ))
            };
        }
        Err(Error::invalid(self.structure.unknown_path(path)))
    }

    /// A vehicle with other numbers at some paths. Setting one side of a pair, or one circuit of a
    /// layout, splits it. Everything that is wrong is reported together.
    pub fn with_values<P: AsRef<str>, Q: Into<Quantity>>(
        &self,
        values: impl IntoIterator<Item = (P, Q)>,
    ) -> Result<Self> {
        let changes: Vec<(String, Value)> =
            values.into_iter().map(|(path, value)| (path.as_ref().to_owned(), value.into().into())).collect();
        change::apply(self, &changes)
    }

    /// As [`with_values`](Self::with_values), with the values as data of a file.
    pub fn with_changes(&self, changes: serde_json::Map<String, Value>) -> Result<Self> {
        change::apply(self, &changes.into_iter().collect::<Vec<_>>())
    }

    /// The vehicle with a named setting of its file applied.
    pub fn with_setting(&self, name: &str) -> Result<Self> {
        let Some(set) = self.spec().settings.0.get(name) else {
            let hint = if self.spec().settings.0.is_empty() {
                "the file has none".to_owned()
            } else {
                crate::spec::nearest(name, self.settings().into_iter())
            };
            return Err(Error::invalid(Violation::new(format!("settings.{name}"), "", "no such setting").hint(hint)));
        };
        let changes: Vec<(String, Value)> = set.iter().map(|(path, value)| (path.clone(), value.clone())).collect();
        change::apply(self, &changes)
    }

    /// The vehicle with a flag set.
    pub(crate) fn with_flag(&self, path: &str) -> Result<Self> {
        change::apply(self, &[(path.to_owned(), Value::Bool(true))])
    }

    // Same structure, other numbers that have passed every check.
    fn with_checked_numbers(&self, numbers: Vec<f64>) -> Self {
        Self { structure: Arc::clone(&self.structure), numbers: numbers.into() }
    }
}

/// Whether a number may be left out of the file.
pub(crate) fn is_optional(kind: &Kind) -> bool {
    matches!(kind, Kind::Flag) || matches!(kind, Kind::Number { presence, .. } if *presence != Presence::Required)
}
