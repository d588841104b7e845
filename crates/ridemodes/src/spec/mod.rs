//! The vehicle file as plain data: one source for every field's meaning, unit and bounds.

mod fields;
mod json_schema;
mod keys;
mod read;
mod schema;
mod tree;

pub use fields::*;
pub use json_schema::json_schema;
pub(crate) use keys::{Slot, chamber};
pub(crate) use read::{CURRENT_FORMAT, Parameter, describe, nearest, number, read_tree};
pub use schema::{Bounds, Choice, Described, Field, Flag, Kind, Named, Presence, Schema, TablePresence};
pub(crate) use tree::{Tree, expand, fill, join, parse_json, parse_toml, walk};
