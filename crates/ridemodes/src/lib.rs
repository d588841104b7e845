//! Coupled ride modes of a four-wheeled vehicle whose suspension corners share oil.
//!
//! A vehicle is read from a file (TOML or JSON), settled at its operating point, linearised, and
//! solved for its modes; each stage returns a new immutable value:
//!
//! ```
//! use ridemodes::Vehicle;
//!
//! # fn main() -> Result<(), ridemodes::Error> {
//! let car = Vehicle::example("roadster")?;
//! let lin = car.settle()?.linear()?;
//! let modes = lin.modes()?;
//! let roll = modes.rows("body roll")[0];
//! assert!((1.5..3.5).contains(&modes.frequency[roll]));
//! println!("{}", modes.table());
//!
//! // The oil stiffens roll and leaves warp alone.
//! let motions = lin.motions()?;
//! assert!(motions.stiffness.oil[(2, 2)] > 50.0 * motions.stiffness.oil[(3, 3)]);
//! # Ok(())
//! # }
//! ```
//!
//! Everything is SI; pressures are absolute; axes are those of ISO 8855 (x forward, y left, z up); corners
//! come in the order front left, front right, rear left, rear right. The equations are in
//! [the theory text](https://docs.rs/crate/ridemodes/latest/source/docs/theory.md) of the crate
//! and its chapter on the network.
//!
//! Results are for engineering judgement, not a release to the road: a vehicle with changed suspension is
//! proven by test, under local rules and by qualified people. Pressurised accumulators can injure; charge and
//! service them by their maker's instructions.
//!
//! [`nalgebra`] and [`ndarray`] appear in signatures and are re-exported; a new major version of either is a
//! breaking release of this crate.

mod axes;
mod corner_motions;
mod decoupling;
mod equivalent;
mod error;
mod examples;
mod frequency;
mod gas;
mod hydraulics;
mod modes;
mod numerics;
mod readings;
mod report;
mod sensitivities;
pub mod spec;
mod states;
mod statics;
mod sweep;
mod system;
mod units;
mod vehicle;

pub use nalgebra;
pub use ndarray;
pub use num_complex::Complex64;

pub use axes::{CORNER_NAMES, CORNERS, Corner, MECHANICAL_NAMES, MOTION_NAMES, MOTIONS, PerCorner};
pub use corner_motions::{MotionMatrix, Motions, RollStiffness};
pub use decoupling::{Decoupling, Remedy};
pub use error::{Error, Result, Violation};
pub use frequency::FrequencyResponse;
pub use modes::{MOTION_SHARE_NAMES, ModeKind, Modes, SHARE_NAMES};
pub use numerics::{Dual, Scalar};
pub use readings::{PATTERN_NAMES, Readings, WheelRates};
pub use report::{CAUTION, Table, Tables};
pub use sensitivities::Sensitivities;
pub use states::States;
pub use statics::{AccumulatorState, ClosedOff, Condition, Fault, Limit, OperatingPoint, Payload, SlowLine};
pub use sweep::Sweep;
pub use system::{Element, ElementKind, LinearSystem, StateSpace};
pub use units::{STANDARD_ATMOSPHERE, STANDARD_GRAVITY};
pub use vehicle::{Parameter, Quantity, Vehicle};
