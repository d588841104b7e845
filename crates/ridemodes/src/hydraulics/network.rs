//! The graph of the oil: nodes that hold pressure and lines between them.

use std::sync::Arc;

use super::oil::{Oil, pipe_area};
use crate::axes::Corner;
use crate::gas::{self, Fill, GasState};
use crate::numerics::Scalar;
use crate::spec::{Inertia, Slot, Spec, chamber};

/// A cylinder chamber.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub(crate) struct Chamber {
    pub corner: Corner,
    /// Whether bump squeezes it.
    pub bump: bool,
}

impl Chamber {
    /// E.g. `front_left_bump`.
    pub(crate) fn name(self) -> String {
        format!("{}_{}", self.corner.name(), if self.bump { "bump" } else { "rebound" })
    }

    /// Pressed area at the wheel, +A·MR where bump squeezes the chamber, −A·MR where it expands it
    /// [m²]; the rod is on the rebound side.
    pub(crate) fn signed_area<T: Scalar>(self, spec: &Spec<Slot>, numbers: &[T]) -> T {
        self.cylinder_area(spec, numbers).map_or(
            T::zero(),
            |(area, ratio)| {
                if self.bump { area * ratio } else { -(area * ratio) }
            },
        )
    }

    fn cylinder_area<T: Scalar>(self, spec: &Spec<Slot>, numbers: &[T]) -> Option<(T, T)> {
        let cylinder = spec.corner(self.corner)?.cylinder.as_ref()?;
        let value = |slot: Slot| numbers[slot.0];
        let bore = pipe_area(value(cylinder.bore));
        let area = if self.bump { bore } else { bore - pipe_area(value(cylinder.rod)) };
        Some((area, value(cylinder.motion_ratio)))
    }
}

/// What stores volume at a node.
#[derive(Debug)]
pub(crate) enum Store {
    /// Oil beside chambers and lines.
    Extra(Slot),
    /// Half the stroke of a chamber.
    Chamber(Chamber),
    /// Half a line.
    HalfLine { length: Slot, bore: Slot },
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

#[derive(Debug)]
pub(crate) struct Line {
    pub name: Arc<str>,
    pub throttle_name: Arc<str>,
    pub pipe_name: Arc<str>,
    pub from: usize,
    pub to: usize,
    pub throttle: Slot,
    pub pipe: Option<(Slot, Slot, Inertia)>,
}

#[derive(Debug)]
pub(crate) struct AccumulatorRef {
    pub name: Arc<str>,
    pub circuit: usize,
    pub pressure: Slot,
    fill: Fill<Slot>,
    precharge: Slot,
    precharge_temperature: Slot,
    exponent: Slot,
}

/// Nodes, lines and accumulators in a fixed order: circuits by name, and in each its hub, its
/// chambers and its accumulators.
#[derive(Debug, Default)]
pub(crate) struct Network {
    pub circuits: Vec<Arc<str>>,
    pub nodes: Vec<Node>,
    pub lines: Vec<Line>,
    pub accumulators: Vec<AccumulatorRef>,
}

/// Resistance and inertance of a line.
#[derive(Clone, Copy, Debug)]
pub(crate) struct LineValues<T> {
    pub throttle: T,
    pub resistance: T,
    pub inertance: T,
}

/// Numbers of the network at its design condition.
pub(crate) struct NetworkValues<T> {
    /// Compliance of each node's stores, in their order [m³/Pa].
    pub compliance: Vec<Vec<T>>,
    pub lines: Vec<LineValues<T>>,
}

impl Network {
    /// Lays out the graph of a vehicle whose groups are written out.
    pub(crate) fn new(spec: &Spec<Slot>) -> Self {
        let mut network = Self::default();
        for (name, circuit) in &spec.circuits.0 {
            let index = network.circuits.len();
            network.circuits.push(name.as_str().into());
            let base = format!("circuits.{name}");
            let hub = network.nodes.len();
            network.nodes.push(Node {
                name: base.as_str().into(),
                circuit: index,
                pressure: circuit.pressure,
                chambers: Vec::new(),
                stores: vec![NamedStore { name: format!("{base}.oil").into(), store: Store::Extra(circuit.volume) }],
            });
            for (key, port) in &circuit.chambers.0 {
                let Some((corner, bump)) = chamber(key) else { continue };
                let path = format!("{base}.chambers.{key}");
                let node = network.branch(&path, hub, port.throttle, port.line.as_ref());
                network.nodes[node].chambers.push(Chamber { corner, bump });
                network.nodes[node].stores.push(NamedStore {
                    name: format!("{path}.oil").into(),
                    store: Store::Chamber(Chamber { corner, bump }),
                });
            }
            for (key, accumulator) in &circuit.accumulators.0 {
                let path = format!("{base}.accumulators.{key}");
                let node = network.branch(&path, hub, accumulator.throttle, accumulator.line.as_ref());
                let fill = match (accumulator.volume, accumulator.gas_volume) {
                    (Some(volume), _) => Fill::Precharge(volume),
                    (None, Some(volume)) => Fill::Rest(volume),
                    (None, None) => continue,
                };
                network.nodes[node].stores.push(NamedStore {
                    name: format!("{path}.gas").into(),
                    store: Store::Gas(network.accumulators.len()),
                });
                network.accumulators.push(AccumulatorRef {
                    name: path.as_str().into(),
                    circuit: index,
                    pressure: circuit.pressure,
                    fill,
                    precharge: accumulator.precharge,
                    precharge_temperature: accumulator.precharge_temperature,
                    exponent: accumulator.exponent,
                });
            }
        }
        network
    }

    // A node at the end of a way from the hub. Volume of the way is halved to its ends.
    fn branch(&mut self, path: &str, hub: usize, throttle: Slot, line: Option<&crate::spec::Line<Slot>>) -> usize {
        let node = self.nodes.len();
        let half = |end: &str, line: &crate::spec::Line<Slot>| NamedStore {
            name: format!("{path}.line.oil_{end}").into(),
            store: Store::HalfLine { length: line.length, bore: line.bore },
        };
        self.nodes.push(Node {
            name: path.into(),
            circuit: self.nodes[hub].circuit,
            pressure: self.nodes[hub].pressure,
            chambers: Vec::new(),
            stores: line.map(|line| half("far", line)).into_iter().collect(),
        });
        if let Some(line) = line {
            self.nodes[hub].stores.push(half("hub", line));
        }
        self.lines.push(Line {
            name: path.into(),
            throttle_name: format!("{path}.throttle").into(),
            pipe_name: format!("{path}.line").into(),
            from: hub,
            to: node,
            throttle,
            pipe: line.map(|line| (line.length, line.bore, line.inertia)),
        });
        node
    }

    /// Compliances, resistances, inertances and gas at the design condition.
    pub(crate) fn values<T: Scalar>(&self, spec: &Spec<Slot>, numbers: &[T]) -> NetworkValues<T> {
        let value = |slot: Slot| numbers[slot.0];
        let temperature = value(spec.temperature);
        let oil = spec.oil.as_ref().map(|oil| Oil::new(oil, numbers, temperature, value(spec.atmosphere)));
        let gas: Vec<GasState<T>> = self.accumulators.iter().map(|a| a.gas(numbers, temperature)).collect();
        let store = |store: &Store, pressure: T| {
            let volume = match store {
                Store::Extra(volume) => value(*volume),
                Store::Chamber(chamber) => chamber.rest_volume(spec, numbers),
                Store::HalfLine { length, bore } => pipe_area(value(*bore)) * value(*length) * 0.5,
                Store::Gas(index) => return gas[*index].compliance,
            };
            // C = V/β_e
            oil.as_ref().map_or(T::zero(), |oil| volume * oil.compressibility(pressure))
        };
        let compliance = self
            .nodes
            .iter()
            .map(|node| node.stores.iter().map(|named| store(&named.store, value(node.pressure))).collect())
            .collect();
        let lines = self
            .lines
            .iter()
            .map(|line| {
                let throttle = value(line.throttle);
                let none = LineValues { throttle, resistance: T::zero(), inertance: T::zero() };
                let (Some((length, bore, inertia)), Some(oil)) = (line.pipe, &oil) else { return none };
                let plug = oil.inertance(value(length), value(bore));
                LineValues {
                    throttle,
                    resistance: oil.resistance(value(length), value(bore)),
                    inertance: match inertia {
                        Inertia::Plug => plug,
                        Inertia::Developed => plug * (4.0 / 3.0),
                        Inertia::None => T::zero(),
                    },
                }
            })
            .collect();
        NetworkValues { compliance, lines }
    }
}

impl Chamber {
    // Oil in the chamber with the piston in the middle of its stroke [m³].
    fn rest_volume<T: Scalar>(self, spec: &Spec<Slot>, numbers: &[T]) -> T {
        let stroke = spec.corner(self.corner).and_then(|corner| Some(corner.cylinder.as_ref()?.stroke));
        match (self.cylinder_area(spec, numbers), stroke) {
            (Some((area, _)), Some(stroke)) => area * numbers[stroke.0] * 0.5,
            _ => T::zero(),
        }
    }
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
