//! How a field is described, and the macro that declares a table of the file.
//!
//! A table is written once: its doc comments give the meaning, its kinds the unit, the bounds and
//! the default. The reader, the errors, `parameters()`, the JSON Schema and the documentation all
//! read that one description.

use std::collections::BTreeMap;

use serde::{Deserialize, Deserializer, Serialize, Serializer};

/// A table of the file.
#[derive(Debug)]
pub struct Schema {
    /// Name of the table's type.
    pub name: &'static str,
    /// What the table describes.
    pub meaning: &'static str,
    /// Its fields.
    pub fields: &'static [Field],
}

/// A field of a table.
#[derive(Debug)]
pub struct Field {
    /// Key in the file.
    pub name: &'static str,
    /// What it means.
    pub meaning: &'static str,
    /// What it may hold.
    pub kind: Kind,
}

/// What a field may hold.
#[derive(Debug)]
pub enum Kind {
    /// A number.
    Number {
        /// SI unit, "1" if none.
        unit: &'static str,
        /// Values allowed.
        bounds: Bounds,
        /// Whether an absolute pressure is meant (text must then say `abs` or `gauge`).
        pressure: bool,
        /// Whether the file must give it, may leave it out, or leaves it at a value.
        presence: Presence,
    },
    /// Free text, or the name of another part.
    Text {
        /// Whether the file must give it.
        required: bool,
    },
    /// True or false; left out it is false. It is kept among the numbers as 1 or 0, so that a setting can turn it.
    Flag,
    /// A list of numbers.
    List {
        /// SI unit, "1" if none.
        unit: &'static str,
        /// Values allowed.
        bounds: Bounds,
    },
    /// A whole number that decides how many parts there are; 1 where it is left out.
    Count {
        /// Largest number allowed.
        largest: u64,
    },
    /// One of several words; the first is taken where the field is left out, unless it is required.
    Choice {
        /// The words.
        words: &'static [&'static str],
        /// Whether the file must give it.
        required: bool,
    },
    /// A table.
    Table {
        /// Its description.
        schema: &'static Schema,
        /// Whether the file must give it.
        presence: TablePresence,
    },
    /// Tables keyed by names of the user's.
    Named {
        /// Description of each of them.
        schema: &'static Schema,
    },
    /// Named sets of values by path.
    Overrides,
}

impl Kind {
    /// Unit and bounds, where a number has them.
    pub fn number(&self) -> Option<(&'static str, Bounds)> {
        match self {
            Self::Number { unit, bounds, .. } | Self::List { unit, bounds } => Some((unit, *bounds)),
            _ => None,
        }
    }
}

/// Whether a number must be there.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Presence {
    /// It must.
    Required,
    /// It may be left out, and then there is none.
    Optional,
    /// It may be left out, and is then this.
    Default(f64),
}

/// Whether a table must be there.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum TablePresence {
    /// It must.
    Required,
    /// It may be left out, and then there is none.
    Optional,
    /// It may be left out, and then holds its defaults.
    Filled,
}

/// Values a number may take.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Bounds {
    /// Least value.
    pub least: f64,
    /// Whether the least value itself is excluded.
    pub open: bool,
    /// Largest value.
    pub largest: f64,
}

impl Bounds {
    /// Any finite number.
    pub const ANY: Self = Self { least: f64::NEG_INFINITY, open: false, largest: f64::INFINITY };
    /// Zero or more.
    pub const NOT_NEGATIVE: Self = Self { least: 0.0, ..Self::ANY };
    /// More than zero.
    pub const POSITIVE: Self = Self { least: 0.0, open: true, ..Self::ANY };

    /// More than zero, up to `largest`: what lies above is a slip of unit.
    pub const fn up_to(largest: f64) -> Self {
        Self { least: 0.0, open: true, largest }
    }

    /// From `least` to `largest`, both included.
    pub const fn within(least: f64, largest: f64) -> Self {
        Self { least, open: false, largest }
    }

    /// Whether `value` is finite and allowed.
    pub fn holds(&self, value: f64) -> bool {
        value.is_finite() && value <= self.largest && if self.open { value > self.least } else { value >= self.least }
    }

    /// The rule in words.
    pub fn rule(&self) -> String {
        let least = if self.open { "greater than" } else { "at least" };
        match (self.least.is_finite(), self.largest.is_finite()) {
            (false, false) => "must be a finite number".into(),
            (true, false) => format!("must be {least} {}", self.least),
            (false, true) => format!("must be at most {}", self.largest),
            (true, true) => format!("must be {least} {} and at most {}", self.least, self.largest),
        }
    }
}

/// A struct that is a table of the file.
pub trait Described {
    /// Its description.
    const SCHEMA: &'static Schema;
}

/// An enum that is one of several words of the file.
pub trait Choice {
    /// The words, the default first.
    const WORDS: &'static [&'static str];
}

/// Tables keyed by names, in the order of the names.
#[derive(Clone, Debug, PartialEq)]
pub struct Named<T>(pub BTreeMap<String, T>);

impl<T> Default for Named<T> {
    fn default() -> Self {
        Self(BTreeMap::new())
    }
}

// An absent table and an empty one are the same.
impl<T: Serialize> Serialize for Named<T> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        (!self.0.is_empty()).then_some(&self.0).serialize(serializer)
    }
}

impl<'de, T: Deserialize<'de>> Deserialize<'de> for Named<T> {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        Ok(Self(Option::deserialize(deserializer)?.unwrap_or_default()))
    }
}

/// True or false. Its number is 1 or 0; in a file of plain numbers it is written `true` or `false`.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Flag<N>(pub N);

// A slot is a whole number and stays one; a plain number is written as truth.
impl<N: Serialize> Serialize for Flag<N> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        match serde_json::to_value(&self.0) {
            Ok(value) if value.is_f64() => (value.as_f64() == Some(1.0)).serialize(serializer),
            Ok(value) => value.serialize(serializer),
            Err(error) => Err(serde::ser::Error::custom(error)),
        }
    }
}

impl<'de, N: serde::de::DeserializeOwned> Deserialize<'de> for Flag<N> {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        let value = match serde_json::Value::deserialize(deserializer)? {
            serde_json::Value::Bool(truth) => f64::from(truth).into(),
            other => other,
        };
        serde_json::from_value(value).map(Self).map_err(serde::de::Error::custom)
    }
}

/// Declares the tables of the file.
///
/// Each field is `name: Type = kind`, with kinds
/// `number("unit", bounds)`, `number("unit", bounds, default)`, `optional("unit", bounds)`,
/// `pressure`, `pressure(default)`, `maybe_pressure`, `list("unit", bounds)`, `flag`, `count(largest)`, `text`, `label`, `choice(Enum)`, `must_choose(Enum)`, `table(Struct)`,
/// `maybe(Struct)`, `filled(Struct)`, `named(Struct)`, `overrides`.
macro_rules! tables {
    ($( $(#[doc = $doc:literal])+ $name:ident { $( $(#[doc = $meaning:literal])+ $field:ident: $type:ty = $kind:ident $(($($args:tt)*))?, )+ } )+) => { $(
        $(#[doc = $doc])+
        ///
        /// `N` is the type of its numbers: `f64` in a file, a slot in a vehicle's structure.
        #[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
        #[serde(bound(serialize = "N: Serialize", deserialize = "N: serde::de::DeserializeOwned"))]
        pub struct $name<N = f64> {
            $(
                $(#[doc = $meaning])+
                pub $field: $type,
            )+
        }

        impl<N> Described for $name<N> {
            const SCHEMA: &'static Schema = &Schema {
                name: stringify!($name),
                meaning: concat!($($doc),+),
                fields: &[ $( Field {
                    name: stringify!($field),
                    meaning: concat!($($meaning),+),
                    kind: tables!(@kind $kind $(($($args)*))?),
                } ),+ ],
            };
        }
    )+ };

    (@kind number ($unit:literal, $bounds:expr)) => { tables!(@number $unit, $bounds, false, Presence::Required) };
    (@kind number ($unit:literal, $bounds:expr, $default:expr)) => { tables!(@number $unit, $bounds, false, Presence::Default($default)) };
    (@kind optional ($unit:literal, $bounds:expr)) => { tables!(@number $unit, $bounds, false, Presence::Optional) };
    (@kind pressure) => { tables!(@number "Pa", Bounds::POSITIVE, true, Presence::Required) };
    (@kind maybe_pressure) => { tables!(@number "Pa", Bounds::POSITIVE, true, Presence::Optional) };
    (@kind pressure ($default:expr)) => { tables!(@number "Pa", Bounds::POSITIVE, true, Presence::Default($default)) };
    (@kind list ($unit:literal, $bounds:expr)) => { Kind::List { unit: $unit, bounds: $bounds } };
    (@kind flag) => { Kind::Flag };
    (@kind count ($largest:literal)) => { Kind::Count { largest: $largest } };
    (@kind text) => { Kind::Text { required: false } };
    (@kind label) => { Kind::Text { required: true } };
    (@kind choice ($type:ident)) => { Kind::Choice { words: <$type as Choice>::WORDS, required: false } };
    (@kind must_choose ($type:ident)) => { Kind::Choice { words: <$type as Choice>::WORDS, required: true } };
    (@kind table ($type:ident)) => { Kind::Table { schema: <$type as Described>::SCHEMA, presence: TablePresence::Required } };
    (@kind filled ($type:ident)) => { Kind::Table { schema: <$type as Described>::SCHEMA, presence: TablePresence::Filled } };
    (@kind maybe ($type:ident)) => { Kind::Table { schema: <$type as Described>::SCHEMA, presence: TablePresence::Optional } };
    (@kind named ($type:ident)) => { Kind::Named { schema: <$type as Described>::SCHEMA } };
    (@kind overrides) => { Kind::Overrides };

    (@number $unit:literal, $bounds:expr, $pressure:expr, $presence:expr) => {
        Kind::Number { unit: $unit, bounds: $bounds, pressure: $pressure, presence: $presence }
    };
}
pub(super) use tables;
