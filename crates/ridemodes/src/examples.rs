//! The vehicles that come with the crate.

use crate::error::{Error, Result, Violation};
use crate::spec::nearest;
use crate::vehicle::Vehicle;

const EXAMPLES: [(&str, &str); 5] = [
    ("delivery_van", include_str!("../data/delivery_van.toml")),
    ("field_sprayer", include_str!("../data/field_sprayer.toml")),
    ("forest_truck", include_str!("../data/forest_truck.toml")),
    ("roadster", include_str!("../data/roadster.toml")),
    ("roadster_without_oil", include_str!("../data/roadster_without_oil.toml")),
];

impl Vehicle {
    /// Names of the example vehicles.
    pub fn examples() -> Vec<&'static str> {
        EXAMPLES.iter().map(|(name, _)| *name).collect()
    }

    /// An example vehicle by name. All of them are inventions.
    pub fn example(name: &str) -> Result<Self> {
        match EXAMPLES.iter().find(|(known, _)| *known == name) {
            Some((_, text)) => Self::from_toml(text),
            None => Err(Error::invalid(
                Violation::new("example", format!("\"{name}\""), "no such example")
                    .hint(nearest(name, Self::examples().into_iter())),
            )),
        }
    }
}
