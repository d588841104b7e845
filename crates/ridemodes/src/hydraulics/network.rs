//! The graph of the oil: nodes that hold pressure and lines between them.

use std::sync::Arc;

use super::chamber::Chamber;
use super::oil::{Oil, pipe_area};
use super::valve;
use crate::gas::{Fill, Gas};
use crate::numerics::Scalar;
use crate::spec::{self, GasKind, Inertia, Slot, Spec, Valve};

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
    pub(super) kind: GasKind,
    pub relaxation_name: Arc<str>,
    pub relaxation_time: Option<Slot>,
    pub least_gas_volume: Slot,
    pub yearly_loss: Slot,
}

impl Node {
    /// Accumulators whose gas is at the node.
    pub(crate) fn gases(&self) -> impl Iterator<Item = usize> + '_ {
        self.stores.iter().filter_map(|named| match named.store {
            Store::Gas(index) => Some(index),
            _ => None,
        })
    }
}

/// Nodes, lines and accumulators in a fixed order.
#[derive(Debug, Default)]
pub(crate) struct Network {
    pub circuits: Vec<Arc<str>>,
    /// Design pressure of each circuit.
    pub pressures: Vec<Slot>,
    /// Node of each circuit's hub.
    pub hubs: Vec<usize>,
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

// What a store amounts to.
enum Stored<T> {
    Oil(T),
    Hose(T),
    Gas(usize),
}

/// Where the oil stands: its temperature, the pressure of each node, the compliance of each accumulator's gas.
pub(crate) struct OilState<T> {
    pub temperature: T,
    pub pressure: Vec<T>,
    pub gas: Vec<T>,
}

/// Numbers of the network at a state.
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
    /// Oil volume [m³] and hose compliance [m³/Pa] of each node.
    pub(crate) fn stores<T: Scalar>(&self, spec: &Spec<Slot>, numbers: &[T]) -> Vec<(T, T)> {
        let of_node = |node: &Node| {
            let mut sums = (T::zero(), T::zero());
            for named in &node.stores {
                match self.store(&named.store, spec, numbers) {
                    Stored::Oil(volume) => sums.0 += volume,
                    Stored::Hose(compliance) => sums.1 += compliance,
                    Stored::Gas(_) => {}
                }
            }
            sums
        };
        self.nodes.iter().map(of_node).collect()
    }

    fn store<T: Scalar>(&self, store: &Store, spec: &Spec<Slot>, numbers: &[T]) -> Stored<T> {
        let value = |slot: Slot| numbers[slot.0];
        match store {
            Store::Extra(volume) => Stored::Oil(value(*volume)),
            Store::Chamber(chamber) => Stored::Oil(chamber.rest_volume(spec, numbers)),
            Store::PipeOil { pipe, share } => Stored::Oil(pipe_volume(&self.pipes[*pipe], numbers) * *share),
            Store::PipeSwell { pipe, share } => {
                let pipe = &self.pipes[*pipe];
                let swell = pipe.length.map_or(T::zero(), |length| value(pipe.swell) * value(length));
                Stored::Hose((swell + value(pipe.compliance)) * *share)
            }
            Store::Swell(slot) => Stored::Hose(value(*slot)),
            Store::Gas(index) => Stored::Gas(*index),
        }
    }

    /// Compliances, resistances and inertances at a state: the pressure of each node, and the compliance of each gas.
    pub(crate) fn values<T: Scalar>(&self, spec: &Spec<Slot>, numbers: &[T], state: &OilState<T>) -> NetworkValues<T> {
        let value = |slot: Slot| numbers[slot.0];
        let Some(oil) = &spec.oil else { return NetworkValues { compliance: Vec::new(), lines: Vec::new() } };
        let oil = Oil::new(oil, numbers, state.temperature, value(spec.atmosphere));
        let compliance = self
            .nodes
            .iter()
            .zip(&state.pressure)
            .map(|(node, &pressure)| {
                let of_store = |named: &NamedStore| match self.store(&named.store, spec, numbers) {
                    // (N4) C = V/β_e
                    Stored::Oil(volume) => volume * oil.compressibility(pressure),
                    Stored::Hose(compliance) => compliance,
                    Stored::Gas(index) => state.gas[index],
                };
                node.stores.iter().map(of_store).collect()
            })
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

    /// The oil at the design condition.
    pub(crate) fn design_state<T: Scalar>(&self, spec: &Spec<Slot>, numbers: &[T]) -> OilState<T> {
        let temperature = numbers[spec.temperature.0];
        let gas = |own: &AccumulatorRef| {
            let (gas, at) = (own.gas(numbers, temperature), [numbers[own.pressure.0], temperature]);
            gas.compliances(gas.at(at[0], at[1]), at)[1]
        };
        OilState {
            temperature,
            pressure: self.nodes.iter().map(|node| numbers[node.pressure.0]).collect(),
            gas: self.accumulators.iter().map(gas).collect(),
        }
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
    /// Its gas, charged as the file says; `temperature` is that of the design condition.
    pub(crate) fn gas<T: Scalar>(&self, numbers: &[T], temperature: T) -> Gas<T> {
        let value = |slot: Slot| numbers[slot.0];
        let fill = match self.fill {
            Fill::Precharge(volume) => Fill::Precharge(value(volume)),
            Fill::Rest(volume) => Fill::Rest(value(volume)),
        };
        let at_rest = [value(self.pressure), temperature];
        let (precharge, charged_at) = (value(self.precharge), value(self.precharge_temperature));
        let gas = Gas::charged(self.kind, fill, precharge, charged_at, value(self.exponent), at_rest);
        Gas { least: value(self.least_gas_volume), ..gas }
    }
}
