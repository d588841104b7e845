//! Oil: its properties, the graph of nodes and lines, and what remains of it as coordinates.

mod chamber;
mod network;
mod oil;
mod plan;
mod reduction;
mod valve;

pub(crate) use chamber::Chamber;
pub(crate) use network::{Network, NetworkValues, OilState, Store, Way};
pub(crate) use plan::pressure;
pub(crate) use reduction::{Reduction, Row, reduce};
