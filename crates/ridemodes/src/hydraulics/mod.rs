//! Oil: its properties, the graph of nodes and lines, and what remains of it as coordinates.

mod network;
mod oil;
mod reduction;

pub(crate) use network::{Chamber, Line, LineValues, Network, Store};
pub(crate) use reduction::{Reduction, Row, reduce};
