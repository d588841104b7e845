//! Corners, motions and their fixed order (ISO 8855 axes: x forward, y left, z up).

use std::ops::{Index, IndexMut};

use serde::{Deserialize, Serialize};

/// A corner of the vehicle.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Corner {
    /// Front left.
    FrontLeft,
    /// Front right.
    FrontRight,
    /// Rear left.
    RearLeft,
    /// Rear right.
    RearRight,
}

/// The corners in their fixed order: FL, FR, RL, RR.
pub const CORNERS: [Corner; 4] = [Corner::FrontLeft, Corner::FrontRight, Corner::RearLeft, Corner::RearRight];

/// Names of the corners, in their order.
pub const CORNER_NAMES: [&str; 4] = ["front_left", "front_right", "rear_left", "rear_right"];

/// Names of the four wheel-plane motions, in their order.
pub const MOTION_NAMES: [&str; 4] = ["heave", "pitch", "roll", "warp"];

/// Wheel-plane motions, one row each: heave, pitch (nose down: front wheels down relative to the
/// rear), roll (left up), warp. `TᵀT = 4 I` with these as columns of `T`.
pub const MOTIONS: [[f64; 4]; 4] =
    [[1.0, 1.0, 1.0, 1.0], [-1.0, -1.0, 1.0, 1.0], [1.0, -1.0, 1.0, -1.0], [1.0, -1.0, -1.0, 1.0]];

/// Names of the mechanical coordinates, in their order.
pub const MECHANICAL_NAMES: [&str; 7] = ["z", "pitch", "roll", "front_left", "front_right", "rear_left", "rear_right"];

/// Number of mechanical coordinates: body heave, pitch, roll and four wheels.
pub(crate) const MECHANICAL: usize = 7;

impl Corner {
    /// Position in the fixed order, 0 to 3.
    pub const fn index(self) -> usize {
        self as usize
    }

    /// `front_left`, `front_right`, `rear_left` or `rear_right`.
    pub const fn name(self) -> &'static str {
        CORNER_NAMES[self as usize]
    }

    /// Whether the corner is on the front axle.
    pub const fn is_front(self) -> bool {
        (self as usize) < 2
    }

    /// Whether the corner is on the left.
    pub const fn is_left(self) -> bool {
        (self as usize).is_multiple_of(2)
    }

    /// The corner with this name.
    pub fn from_name(name: &str) -> Option<Self> {
        CORNERS.into_iter().find(|corner| corner.name() == name)
    }
}

/// One value for each corner, indexed by [`Corner`].
#[derive(Clone, Copy, Debug, Default, PartialEq, Serialize, Deserialize)]
pub struct PerCorner<T>(pub [T; 4]);

impl<T> PerCorner<T> {
    /// A value from each corner.
    pub fn new(value: impl FnMut(Corner) -> T) -> Self {
        Self(CORNERS.map(value))
    }

    /// The values in the order FL, FR, RL, RR.
    pub fn as_array(&self) -> &[T; 4] {
        &self.0
    }

    /// A new value from each corner's value.
    pub fn map<U>(self, value: impl FnMut(T) -> U) -> PerCorner<U> {
        PerCorner(self.0.map(value))
    }
}

impl<T> Index<Corner> for PerCorner<T> {
    type Output = T;
    fn index(&self, corner: Corner) -> &T {
        &self.0[corner.index()]
    }
}

impl<T> IndexMut<Corner> for PerCorner<T> {
    fn index_mut(&mut self, corner: Corner) -> &mut T {
        &mut self.0[corner.index()]
    }
}
