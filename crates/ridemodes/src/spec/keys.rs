//! Slots of numbers and keys of chambers.

use serde::{Deserialize, Serialize};

use crate::axes::Corner;

/// Position of a number in a vehicle's vector of numbers.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, Serialize, Deserialize)]
#[serde(transparent)]
pub(crate) struct Slot(pub usize);

/// A chamber of a circuit by its key, e.g. `front_left_bump`.
pub(crate) fn chamber(key: &str) -> Option<(Corner, bool)> {
    let (corner, side) = key.rsplit_once('_')?;
    let bump = match side {
        "bump" => true,
        "rebound" => false,
        _ => return None,
    };
    Some((Corner::from_name(corner)?, bump))
}
