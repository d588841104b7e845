//! From the file's circuits, nodes and lines to the graph.

use std::collections::HashMap;
use std::sync::Arc;

use super::chamber::Chamber;
use super::network::{AccumulatorRef, Line, NamedStore, Network, Node, Store, Way};
use crate::gas::Fill;
use crate::spec::{self, CylinderKind, Slot, Spec, Valve, chamber};

/// What stands in a way, from its start on.
struct Fittings<'a> {
    throttle: Slot,
    valve: Option<&'a Valve<Slot>>,
    pipe: Option<spec::Line<Slot>>,
    /// Name of the pipe in the way, and of its two ends.
    pipe_name: &'a str,
    ends: [&'a str; 2],
    closed: Option<Slot>,
    slow: Option<Slot>,
}

impl<'a> Fittings<'a> {
    // Between a hub and what hangs on it.
    fn of_branch(
        throttle: Slot,
        valve: Option<&'a Valve<Slot>>,
        pipe: Option<&spec::Line<Slot>>,
        closed: Option<Slot>,
    ) -> Self {
        Self { throttle, valve, pipe: pipe.cloned(), pipe_name: "line", ends: ["hub", "far"], closed, slow: None }
    }
}

/// Design pressure of a circuit: its own, or that of a circuit it is joined to by lines.
pub(crate) fn pressure(spec: &Spec<Slot>, circuit: &str) -> Option<Slot> {
    let circuit_of =
        |place: &str| spec.nodes.0.get(place).map_or_else(|| place.to_owned(), |node| node.circuit.clone());
    let mut joined = vec![circuit.to_owned()];
    let mut next = 0;
    while let Some(here) = joined.get(next).cloned() {
        if let Some(pressure) = spec.circuits.0.get(&here).and_then(|circuit| circuit.pressure) {
            return Some(pressure);
        }
        for line in spec.lines.0.values() {
            let (from, to) = (circuit_of(&line.from), circuit_of(&line.to));
            let other = if from == here {
                to
            } else if to == here {
                from
            } else {
                continue;
            };
            if !joined.contains(&other) {
                joined.push(other);
            }
        }
        next += 1;
    }
    None
}

impl Network {
    /// Lays out the graph of a vehicle whose groups are written out: hubs and nodes by name, then each circuit's
    /// chambers and accumulators, then the lines between.
    pub(crate) fn new(spec: &Spec<Slot>) -> Self {
        let mut network = Self::default();
        let mut places: HashMap<&str, usize> = HashMap::new();
        for (name, circuit) in &spec.circuits.0 {
            let Some(pressure) = pressure(spec, name) else { continue };
            let index = network.circuits.len();
            network.circuits.push(name.as_str().into());
            network.pressures.push(pressure);
            let base = format!("circuits.{name}");
            let node = network.node(&base, index, pressure);
            network.hold(node, &format!("{base}.oil"), Store::Extra(circuit.volume));
            network.hold(node, &format!("{base}.swell"), Store::Swell(circuit.compliance));
            network.hubs.push(node);
            places.insert(name, node);
        }
        for (name, own) in &spec.nodes.0 {
            let Some(&hub) = places.get(own.circuit.as_str()) else { continue };
            let base = format!("nodes.{name}");
            let node = network.node(&base, network.nodes[hub].circuit, network.nodes[hub].pressure);
            network.hold(node, &format!("{base}.oil"), Store::Extra(own.volume));
            network.hold(node, &format!("{base}.swell"), Store::Swell(own.compliance));
            places.insert(name, node);
        }
        let at = |name: &Option<String>, hub: usize| {
            name.as_ref().and_then(|name| places.get(name.as_str()).copied()).unwrap_or(hub)
        };
        for (name, circuit) in &spec.circuits.0 {
            let Some(&hub) = places.get(name.as_str()) else { continue };
            for (key, port) in &circuit.chambers.0 {
                let Some((corner, bump)) = chamber(key) else { continue };
                let path = format!("circuits.{name}.chambers.{key}");
                let from = at(&port.node, hub);
                let fittings =
                    Fittings::of_branch(port.throttle, port.valve.as_ref(), port.line.as_ref(), Some(port.closed.0));
                let node = network.branch(&path, from, &fittings);
                network.chamber(node, &format!("{path}.oil"), Chamber { corner, bump });
                network.piston(spec, node, Chamber { corner, bump });
            }
            for (key, accumulator) in &circuit.accumulators.0 {
                network.accumulator(
                    &format!("circuits.{name}.accumulators.{key}"),
                    at(&accumulator.node, hub),
                    accumulator,
                );
            }
        }
        for (name, line) in &spec.lines.0 {
            let (Some(&from), Some(&to)) = (places.get(line.from.as_str()), places.get(line.to.as_str())) else {
                continue;
            };
            let fittings = Fittings {
                throttle: line.throttle,
                valve: line.valve.as_ref(),
                pipe: line.has_pipe().then(|| line.line()),
                pipe_name: "pipe",
                ends: ["from", "to"],
                closed: Some(line.closed.0),
                slow: Some(line.slow.0),
            };
            network.way(&format!("lines.{name}"), from, to, &fittings);
        }
        network
    }

    fn node(&mut self, name: &str, circuit: usize, pressure: Slot) -> usize {
        self.nodes.push(Node { name: name.into(), circuit, pressure, chambers: Vec::new(), stores: Vec::new() });
        self.nodes.len() - 1
    }

    fn hold(&mut self, node: usize, name: &str, store: Store) {
        self.nodes[node].stores.push(NamedStore { name: name.into(), store });
    }

    fn chamber(&mut self, node: usize, name: &str, chamber: Chamber) {
        self.nodes[node].chambers.push(chamber);
        self.hold(node, name, Store::Chamber(chamber));
    }

    // Both chambers joined through the piston: forward is the flow in bump.
    fn piston(&mut self, spec: &Spec<Slot>, from: usize, bump: Chamber) {
        let cylinder = spec.corner(bump.corner).and_then(|corner| corner.cylinder.as_ref());
        let Some(cylinder) = cylinder.filter(|cylinder| cylinder.kind == CylinderKind::PistonValve) else { return };
        let path = format!("{}.cylinder.piston", bump.corner.name());
        let fittings = Fittings::of_branch(cylinder.piston_throttle, cylinder.piston_valve.as_ref(), None, None);
        let node = self.branch(&path, from, &fittings);
        self.chamber(node, &format!("{path}.oil"), Chamber { bump: false, ..bump });
    }

    fn accumulator(&mut self, path: &str, from: usize, accumulator: &spec::Accumulator<Slot>) {
        let fill = match (accumulator.volume, accumulator.gas_volume) {
            (Some(volume), _) => Fill::Precharge(volume),
            (None, Some(volume)) => Fill::Rest(volume),
            (None, None) => return,
        };
        let fittings = Fittings::of_branch(
            accumulator.throttle,
            accumulator.valve.as_ref(),
            accumulator.line.as_ref(),
            Some(accumulator.closed.0),
        );
        let node = self.branch(path, from, &fittings);
        self.hold(node, &format!("{path}.gas"), Store::Gas(self.accumulators.len()));
        self.accumulators.push(AccumulatorRef {
            name: path.into(),
            circuit: self.nodes[from].circuit,
            pressure: self.nodes[from].pressure,
            fill,
            precharge: accumulator.precharge,
            precharge_temperature: accumulator.precharge_temperature,
            exponent: accumulator.exponent,
            kind: accumulator.gas,
            relaxation_name: format!("{path}.relaxation").into(),
            relaxation_time: accumulator.relaxation_time,
            least_gas_volume: accumulator.least_gas_volume,
            yearly_loss: accumulator.yearly_loss,
        });
    }

    // A node at the end of a way.
    fn branch(&mut self, path: &str, from: usize, fittings: &Fittings<'_>) -> usize {
        let node = self.node(path, self.nodes[from].circuit, self.nodes[from].pressure);
        self.way(path, from, node, fittings);
        node
    }

    // Lines from one node to another. The volume of each piece is halved to its ends; throttle, valve and what shuts
    // the way stand before the first piece.
    fn way(&mut self, path: &str, from: usize, to: usize, fittings: &Fittings<'_>) {
        let pieces = fittings.pipe.as_ref().map_or(1, |pipe| pipe.pieces);
        let pipe = fittings.pipe.as_ref().map(|pipe| {
            self.pipes.push(pipe.clone());
            self.pipes.len() - 1
        });
        let first = self.lines.len();
        let base = format!("{path}.{}", fittings.pipe_name);
        let digits = pieces.to_string().len();
        let mut here = from;
        for piece in 1..=pieces {
            let number = format!("{piece:0digits$}");
            let next = if piece == pieces {
                to
            } else {
                self.node(&format!("{path}.{number}"), self.nodes[from].circuit, self.nodes[from].pressure)
            };
            let (name, pipe_name) = match pieces {
                1 => (path.into(), base.as_str().into()),
                _ => (format!("{path}.{number}").into(), format!("{base}.{number}").into()),
            };
            let head = piece == 1;
            let share = 1.0 / pieces as f64;
            self.lines.push(Line {
                name,
                throttle_name: format!("{path}.throttle").into(),
                valve_name: format!("{path}.valve").into(),
                pipe_name,
                from: here,
                to: next,
                throttle: head.then_some(fittings.throttle),
                valve: fittings.valve.filter(|_| head).cloned().map(Box::new),
                pipe: pipe.map(|pipe| (pipe, share)),
                closed: fittings.closed.filter(|_| head),
                slow: fittings.slow.filter(|_| head),
            });
            if let Some(pipe) = pipe {
                if head {
                    self.hold_pipe(here, &base, fittings.ends[0], pipe, 0.5 * share);
                }
                let (end, share) =
                    if piece == pieces { (fittings.ends[1], 0.5 * share) } else { (number.as_str(), share) };
                self.hold_pipe(next, &base, end, pipe, share);
            }
            here = next;
        }
        self.ways.push(Way { name: Arc::from(path), lines: first..self.lines.len() });
    }

    fn hold_pipe(&mut self, node: usize, base: &str, end: &str, pipe: usize, share: f64) {
        self.hold(node, &format!("{base}.oil_{end}"), Store::PipeOil { pipe, share });
        self.hold(node, &format!("{base}.swell_{end}"), Store::PipeSwell { pipe, share });
    }
}
