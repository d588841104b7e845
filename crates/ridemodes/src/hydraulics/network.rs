//! The graph of the oil: nodes that hold pressure and lines between them.

use std::sync::Arc;

use super::chamber::Chamber;
use super::oil::{Oil, pipe_area};
use super::valve;
use crate::gas::{self, Fill, GasState};
use crate::numerics::Scalar;
use crate::spec::{self, Inertia, Slot, Spec, Valve};

/// What stores volume at a node.
#[derive(Debug)]
pub(crate) enum Store {
    /// Oil beside chambers and lines.
    Extra(Slot),
    /// Swell of hoses.
    Swell(Slot),
    /// Half the stroke of a chamber.
    Chamber(Chamber),
    /// A share of the oil in a pipe.
    PipeOil { pipe: usize, share: f64 },
    /// A share of the swell of a pipe.
    PipeSwell { pipe: usize, share: f64 },
    /// Gas of an accumulator; its position among the network's.
    Gas(usize),
}

/// A store with the name of its element.
#[derive(Debug)]
pub(crate) struct NamedStore {
    pub name: Arc<str>,
    pub store: Store,
}

#[derive(Debug)]
pub(crate) struct Node {
    pub name: Arc<str>,
    pub circuit: usize,
    pub pressure: Slot,
    pub chambers: Vec<Chamber>,
    pub stores: Vec<NamedStore>,
}

/// A line between two nodes; a way of the file is one of them or, cut into pieces, several.
#[derive(Debug)]
pub(crate) struct Line {
    pub name: Arc<str>,
    pub throttle_name: Arc<str>,
    pub valve_name: Arc<str>,
    pub pipe_name: Arc<str>,
    pub from: usize,
    pub to: usize,
    pub throttle: Option<Slot>,
    pub valve: Option<Box<Valve<Slot>>>,
    /// The pipe and the share of it that this line is.
    pub pipe: Option<(usize, f64)>,
    pub closed: Option<Slot>,
    pub slow: Option<Slot>,
}

/// A way of the file: the lines it consists of.
#[derive(Debug)]
pub(crate) struct Way {
    pub name: Arc<str>,
    pub lines: std::ops::Range<usize>,
}

#[derive(Debug)]
pub(crate) struct AccumulatorRef {
    pub name: Arc<str>,
    pub circuit: usize,
    pub pressure: Slot,
    pub(super) fill: Fill<Slot>,
    pub(super) precharge: Slot,
    pub(super) precharge_temperature: Slot,
    pub(super) exponent: Slot,
}

/// Nodes, lines and accumulators in a fixed order.
#[derive(Debug, Default)]
pub(crate) struct Network {
    pub circuits: Vec<Arc<str>>,
    /// Design pressure of each circuit.
    pub pressures: Vec<Slot>,
    pub nodes: Vec<Node>,
    pub lines: Vec<Line>,
    pub ways: Vec<Way>,
    pub pipes: Vec<spec::Line<Slot>>,
    pub accumulators: Vec<AccumulatorRef>,
}

/// Resistances and inertance of a line, and whether it is shut.
#[derive(Clone, Copy, Debug)]
pub(crate) struct LineValues<T> {
    pub throttle: T,
    pub valve: T,
    pub pipe: T,
    pub inertance: T,
    pub closed: bool,
    pub slow: bool,
}

impl<T: Scalar> LineValues<T> {
    /// Whether it joins its nodes: neither resistance nor inertance.
    pub(crate) fn is_ideal(&self) -> bool {
        [self.throttle, self.valve, self.pipe, self.inertance].iter().all(|part| part.value() == 0.0)
    }
}

/// Numbers of the network at its design condition.
pub(crate) struct NetworkValues<T> {
    /// Compliance of each node's stores, in their order [m³/Pa].
    pub compliance: Vec<Vec<T>>,
    pub lines: Vec<LineValues<T>>,
}

impl<T: Scalar> NetworkValues<T> {
    /// Compliance of a node [m³/Pa].
    pub(crate) fn node_compliance(&self, node: usize) -> T {
        let mut total = T::zero();
        for &store in &self.compliance[node] {
            total += store;
        }
        total
    }
}

impl Network {
    /// Compliances, resistances, inertances and gas at the design condition.
    pub(crate) fn values<T: Scalar>(&self, spec: &Spec<Slot>, numbers: &[T]) -> NetworkValues<T> {
        let value = |slot: Slot| numbers[slot.0];
        let temperature = value(spec.temperature);
        let Some(oil) = &spec.oil else { return NetworkValues { compliance: Vec::new(), lines: Vec::new() } };
        let oil = Oil::new(oil, numbers, temperature, value(spec.atmosphere));
        let gas: Vec<GasState<T>> = self.accumulators.iter().map(|a| a.gas(numbers, temperature)).collect();
        let store = |store: &Store, pressure: T| {
            let volume = match store {
                Store::Extra(volume) => value(*volume),
                Store::Chamber(chamber) => chamber.rest_volume(spec, numbers),
                Store::PipeOil { pipe, share } => pipe_volume(&self.pipes[*pipe], numbers) * *share,
                Store::PipeSwell { pipe, share } => {
                    let pipe = &self.pipes[*pipe];
                    let swell = pipe.length.map_or(T::zero(), |length| value(pipe.swell) * value(length));
                    return (swell + value(pipe.compliance)) * *share;
                }
                Store::Swell(slot) => return value(*slot),
                Store::Gas(index) => return gas[*index].compliance,
            };
            // (N4) C = V/β_e
            volume * oil.compressibility(pressure)
        };
        let compliance = self
            .nodes
            .iter()
            .map(|node| node.stores.iter().map(|named| store(&named.store, value(node.pressure))).collect())
            .collect();
        let is_true = |flag: Option<Slot>| flag.is_some_and(|flag| numbers[flag.0].value() == 1.0);
        let lines = self
            .lines
            .iter()
            .map(|line| {
                let (pipe, inertance) = line.pipe.map_or((T::zero(), T::zero()), |(pipe, share)| {
                    let (resistance, inertance) = pipe_values(&self.pipes[pipe], numbers, &oil);
                    (resistance * share, inertance * share)
                });
                LineValues {
                    throttle: line.throttle.map_or(T::zero(), value),
                    valve: line.valve.as_ref().map_or(T::zero(), |valve| valve::resistance(valve, numbers, &oil)),
                    pipe,
                    inertance,
                    closed: is_true(line.closed),
                    slow: is_true(line.slow),
                }
            })
            .collect();
        NetworkValues { compliance, lines }
    }

    /// The connected region of each node, numbered from 0, with the lines that `open` takes.
    pub(crate) fn regions(&self, open: impl Fn(usize) -> bool) -> Vec<usize> {
        let mut region: Vec<usize> = (0..self.nodes.len()).collect();
        for (_, line) in self.lines.iter().enumerate().filter(|(index, _)| open(*index)) {
            let (a, b) = (region[line.from], region[line.to]);
            let (keep, drop) = (a.min(b), a.max(b));
            for place in &mut region {
                if *place == drop {
                    *place = keep;
                }
            }
        }
        let mut firsts = region.clone();
        firsts.sort_unstable();
        firsts.dedup();
        region.iter().map(|first| firsts.binary_search(first).unwrap_or(0)).collect()
    }
}

// Oil volume: as given, or A L.
fn pipe_volume<T: Scalar>(pipe: &spec::Line<Slot>, numbers: &[T]) -> T {
    let value = |slot: Slot| numbers[slot.0];
    match (pipe.volume, pipe.length, pipe.bore) {
        (Some(volume), ..) => value(volume),
        (None, Some(length), Some(bore)) => pipe_area(value(bore)) * value(length),
        _ => T::zero(),
    }
}

// Resistance and inertance of (N5): as given, or from geometry.
fn pipe_values<T: Scalar>(pipe: &spec::Line<Slot>, numbers: &[T], oil: &Oil<T>) -> (T, T) {
    let value = |slot: Slot| numbers[slot.0];
    let geometry = pipe.length.zip(pipe.bore).map(|(length, bore)| (value(length), value(bore)));
    let from_geometry = |law: &dyn Fn(T, T) -> T| geometry.map_or(T::zero(), |(length, bore)| law(length, bore));
    let resistance = pipe.resistance.map_or_else(|| from_geometry(&|length, bore| oil.resistance(length, bore)), value);
    let share = match pipe.inertia {
        Inertia::Plug => 1.0,
        Inertia::Developed => 4.0 / 3.0,
        Inertia::None => 0.0,
    };
    let inertance =
        pipe.inertance.map_or_else(|| from_geometry(&|length, bore| oil.inertance(length, bore) * share), value);
    (resistance, inertance)
}

impl AccumulatorRef {
    /// Gas at the circuit's design pressure.
    pub(crate) fn gas<T: Scalar>(&self, numbers: &[T], temperature: T) -> GasState<T> {
        let value = |slot: Slot| numbers[slot.0];
        let fill = match self.fill {
            Fill::Precharge(volume) => Fill::Precharge(value(volume)),
            Fill::Rest(volume) => Fill::Rest(value(volume)),
        };
        let (precharge, charged_at) = (value(self.precharge), value(self.precharge_temperature));
        let pressure = value(self.pressure);
        let empty = pressure.value() < precharge.value() * temperature.value() / charged_at.value();
        gas::ideal(fill, precharge, charged_at, value(self.exponent), pressure, temperature, empty)
    }
}
