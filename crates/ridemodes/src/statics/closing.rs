//! Slow lines with their time constants, and what shut lines close off.

use serde::{Deserialize, Serialize};

use crate::hydraulics::{Network, NetworkValues, OilState, Store, Way};

/// A slow line between two parts of the oil.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct SlowLine {
    /// Path of the line, e.g. `lines.balance`.
    pub name: String,
    /// Its resistance [Pa·s/m³].
    pub resistance: f64,
    /// Time in which a difference of pressure falls to 1/e with the wheels held and other slow lines shut,
    /// R C_a C_b/(C_a + C_b) [s]: of two equal accumulators R C/2.
    pub time_constant: f64,
}

/// Oil on one side of a line that is shut.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct ClosedOff {
    /// Lines whose closing bounds it.
    pub lines: Vec<String>,
    /// Its nodes.
    pub nodes: Vec<String>,
    /// Its accumulators.
    pub accumulators: Vec<String>,
    /// Absolute pressure [Pa].
    pub pressure: f64,
    /// Compliance of all that it holds, the denominator of (N16) [m³/Pa].
    pub compliance: f64,
}

/// Both lists of a state.
pub(super) fn lines_apart(
    network: &Network,
    values: &NetworkValues<f64>,
    state: &OilState<f64>,
) -> (Vec<SlowLine>, Vec<ClosedOff>) {
    let compliance = |region: &[usize], own: usize| -> f64 {
        (0..region.len()).filter(|&node| region[node] == own).map(|node| values.node_compliance(node)).sum()
    };
    let fast = network.regions(|line| !values.lines[line].closed && !values.lines[line].slow);
    let slow_lines = network
        .ways
        .iter()
        .filter(|way| values.lines[way.lines.start].slow && !values.lines[way.lines.start].closed)
        .map(|way| {
            let parts = || way.lines.clone().map(|line| values.lines[line]);
            let resistance: f64 = parts().map(|line| line.throttle + line.valve + line.pipe).sum();
            let line = &network.lines[way.lines.start];
            let (a, b) = (fast[line.from], fast[line.to]);
            let (from, to) = (compliance(&fast, a), compliance(&fast, b));
            // (N15) τ = R C_a C_b/(C_a + C_b)
            let series = if a == b || from + to == 0.0 { 0.0 } else { from * to / (from + to) };
            SlowLine { name: way.name.to_string(), resistance, time_constant: resistance * series }
        })
        .collect();
    let shut: Vec<&Way> = network.ways.iter().filter(|way| values.lines[way.lines.start].closed).collect();
    let region = network.regions(|line| !values.lines[line].closed);
    let count = region.iter().max().map_or(0, |last| last + 1);
    let bounds = |way: &Way, own: usize| {
        let line = &network.lines[way.lines.start];
        region[line.from] == own || region[line.to] == own
    };
    let closed_off = (0..count)
        .filter_map(|own| {
            let lines: Vec<String> =
                shut.iter().filter(|way| bounds(way, own)).map(|way| way.name.to_string()).collect();
            let nodes: Vec<usize> = (0..region.len()).filter(|&node| region[node] == own).collect();
            let first = *nodes.first().filter(|_| !lines.is_empty())?;
            let names = nodes.iter().map(|&node| network.nodes[node].name.to_string()).collect();
            let gas =
                nodes.iter().flat_map(|&node| &network.nodes[node].stores).filter_map(|named| match named.store {
                    Store::Gas(index) => Some(network.accumulators[index].name.to_string()),
                    _ => None,
                });
            Some(ClosedOff {
                accumulators: gas.collect(),
                lines,
                nodes: names,
                pressure: state.pressure[first],
                compliance: compliance(&region, own),
            })
        })
        .collect();
    (slow_lines, closed_off)
}
