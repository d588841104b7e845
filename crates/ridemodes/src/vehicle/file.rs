//! Reading and writing vehicles.

use std::path::Path;

use serde::Serialize;
use serde_json::Value;

use super::Vehicle;
use crate::error::{Error, Result, Violation};
use crate::spec::{CURRENT_FORMAT, Spec, describe, parse_json, parse_toml};

impl Vehicle {
    /// Reads TOML or JSON; JSON is what begins with `{`.
    pub fn from_text(text: &str) -> Result<Self> {
        if text.trim_start().starts_with('{') { Self::from_json(text) } else { Self::from_toml(text) }
    }

    /// Reads TOML.
    pub fn from_toml(text: &str) -> Result<Self> {
        Self::from_tree(&parse_toml(text)?)
    }

    /// Reads JSON.
    pub fn from_json(text: &str) -> Result<Self> {
        Self::from_tree(&parse_json(text)?)
    }

    /// Builds a vehicle from the tables of its file.
    pub fn from_value(value: &Value) -> Result<Self> {
        match value {
            Value::Object(tree) => Self::from_tree(tree),
            other => Err(Error::invalid(Violation::new("", describe(other), "must be a table"))),
        }
    }

    /// Builds a vehicle from the data of its file.
    pub fn from_spec(spec: &Spec) -> Result<Self> {
        let value = serde_json::to_value(spec).map_err(|error| Error::Parse {
            line: 0,
            column: 0,
            message: error.to_string(),
        })?;
        Self::from_value(&without_nulls(value))
    }

    /// Reads a `.toml` or `.json` file.
    pub fn load(path: impl AsRef<Path>) -> Result<Self> {
        let path = path.as_ref();
        let text = std::fs::read_to_string(path).map_err(|error| file_error(path, &error))?;
        match path.extension().and_then(|extension| extension.to_str()) {
            Some("json") => Self::from_json(&text),
            Some("toml") => Self::from_toml(&text),
            _ => Self::from_text(&text),
        }
    }

    /// Writes a `.toml` or `.json` file in SI. The file is replaced as a whole or not at all.
    pub fn save(&self, path: impl AsRef<Path>) -> Result<()> {
        let path = path.as_ref();
        let json = path.extension().is_some_and(|extension| extension == "json");
        let text = if json { self.to_json() } else { self.to_toml() };
        let mut partial = path.as_os_str().to_owned();
        partial.push(format!(".{}.partial", std::process::id()));
        let partial = Path::new(&partial);
        std::fs::write(partial, text)
            .and_then(|()| std::fs::rename(partial, path))
            .inspect_err(|_| {
                // Best effort: the error worth reporting is the one above.
                let _ = std::fs::remove_file(partial);
            })
            .map_err(|error| file_error(path, &error))
    }

    /// The file as TOML, in SI.
    pub fn to_toml(&self) -> String {
        toml::to_string(&self.to_value()).unwrap_or_default()
    }

    /// The file as JSON, in SI.
    pub fn to_json(&self) -> String {
        format!("{:#}", self.to_value())
    }

    /// The file as data, in SI.
    pub fn to_value(&self) -> Value {
        let mut tree = self.structure().filled(self.numbers());
        tree.insert("format".into(), CURRENT_FORMAT.into());
        Value::Object(tree)
    }
}

impl Serialize for Vehicle {
    fn serialize<S: serde::Serializer>(&self, serializer: S) -> std::result::Result<S::Ok, S::Error> {
        self.to_json().serialize(serializer)
    }
}

impl<'de> serde::Deserialize<'de> for Vehicle {
    fn deserialize<D: serde::Deserializer<'de>>(deserializer: D) -> std::result::Result<Self, D::Error> {
        let text = String::deserialize(deserializer)?;
        Self::from_json(&text).map_err(serde::de::Error::custom)
    }
}

fn without_nulls(value: Value) -> Value {
    match value {
        Value::Object(table) => Value::Object(
            table
                .into_iter()
                .filter(|(_, value)| !value.is_null())
                .map(|(key, value)| (key, without_nulls(value)))
                .collect(),
        ),
        other => other,
    }
}

fn file_error(path: &Path, error: &std::io::Error) -> Error {
    Error::File { path: path.display().to_string(), cause: error.to_string(), code: error.raw_os_error() }
}
