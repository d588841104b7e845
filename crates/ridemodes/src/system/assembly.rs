//! From the structure and any vector of numbers to the list of elements.

use std::sync::Arc;

use super::{Assembly, Element, ElementKind, PressureRow, mechanical_names};
use crate::axes::{CORNERS, Corner, MECHANICAL};
use crate::equivalent::{Pieces, of_dry_friction};
use crate::error::Result;
use crate::hydraulics::{Chamber, Network, OilState, Reduction, Row, Store, reduce};
use crate::numerics::Scalar;
use crate::spec::{Damper, Motion, Slot};
use crate::statics::{At, Payload, Positions};
use crate::vehicle::Structure;

/// What slow lines do.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum SlowLines {
    /// Oil creeps through them: each is a state.
    Flow,
    /// Shut, as they are to vibration.
    Shut,
}

/// Assembles the linear system at a state. `gravity` takes the moment of the leaned body's weight in.
pub(crate) fn assemble<T: Scalar>(
    structure: &Structure,
    numbers: &[T],
    at: &At<T>,
    payload: &[Payload],
    slow: SlowLines,
    gravity: bool,
) -> Result<Assembly<T>> {
    let spec = &structure.spec;
    let network = &structure.network;
    let value = |slot: Slot| numbers[slot.0];
    let relaxing: Vec<bool> =
        network.accumulators.iter().map(|accumulator| accumulator.relaxation_time.is_some()).collect();
    let gas = at.gas.iter().zip(&relaxing).map(|(gas, &relaxing)| gas.compliance[usize::from(!relaxing)]);
    let state = OilState { gas: gas.collect(), pressure: at.oil.pressure.clone(), temperature: at.oil.temperature };
    let oil = network.values(spec, numbers, &state);
    // Branches on a value are decided in f64.
    let shut = slow == SlowLines::Shut;
    // In a burst circuit all is at the pressure of the air: its lines move nothing that is felt.
    let burst = |line: usize| at.open.get(network.lines[line].from).is_some_and(|&open| open);
    let open: Vec<bool> =
        oil.lines.iter().enumerate().map(|(index, line)| !(line.closed || shut && line.slow || burst(index))).collect();
    let mut ideal: Vec<bool> = oil.lines.iter().map(|line| line.is_ideal()).collect();
    keep_apart(network, &relaxing, &open, &mut ideal);
    let inertial: Vec<bool> = oil.lines.iter().map(|line| line.inertance.value() > 0.0).collect();
    let gives = |stores: &Vec<T>| stores.iter().any(|store| store.value() > 0.0);
    let compliant: Vec<bool> =
        oil.compliance.iter().zip(&at.open).map(|(stores, &open)| open || gives(stores)).collect();
    let area = |chamber: Chamber| chamber.signed_area(spec, numbers, at.deflection[chamber.corner.index()]);
    let reduction = reduce(network, &open, &ideal, &inertial, &compliant, |chamber| area(chamber).value())?;
    let layout = Layout::new(structure, &reduction);
    let mut build = Builder { positions: at.positions(), size: layout.size, elements: Vec::new() };

    for corner in CORNERS {
        let Some(data) = spec.corner(corner) else { continue };
        let names = &structure.names.corners[corner.index()];
        let wheel = build.wheel(corner);
        build.add(
            &names.wheel,
            ElementKind::WheelMass,
            wheel.clone(),
            [value(data.unsprung_mass), T::zero(), T::zero()],
        );
        let (damping, rate) = (value(data.tyre.damping), value(data.tyre.rate));
        let tyre = if at.contact[corner.index()] { [T::zero(), damping, rate] } else { [T::zero(); 3] };
        build.add(&names.tyre, ElementKind::Tyre, wheel, tyre);
        build.on_road(corner);
        let (part, delta) = (&at.parts.corners[corner.index()], at.deflection[corner.index()]);
        if let Some(spring) = &part.spring {
            // (O10) de/dδ = MR + MR′ δ; a slope of it turns the force too: F·MR′
            let row = build.travel(corner, spring.lever.at(delta));
            build.add(&names.spring, ElementKind::Spring, row, [T::zero(), T::zero(), spring.rate(delta)]);
            if !spring.lever.slope.is_zero() {
                let row = build.travel(corner, T::one());
                let turned = spring.force(delta) * spring.lever.slope;
                build.add(&names.spring_geometry, ElementKind::Geometry, row, [T::zero(), T::zero(), turned]);
            }
        }
        for (stop, name) in part.stops.iter().zip([&names.bump_stop, &names.rebound_stop]) {
            if let Some(stop) = stop.filter(|stop| stop.depth(delta).value() > 0.0) {
                let row = build.travel(corner, stop.ratio);
                build.add(name, ElementKind::Stop, row, [T::zero(), T::zero(), stop.rate(delta)]);
            }
        }
        if let Some(damper) = &data.damper {
            let mut row = build.travel(corner, value(damper.motion_ratio));
            // Maxwell branch: the damper on its own travel ξ, the mount on MR δ − ξ.
            if let (Some(mount), Some(inner)) = (damper.mount_rate, layout.inner[corner.index()]) {
                row[inner] = -T::one();
                build.add(&names.mount, ElementKind::Mount, row, [T::zero(), T::zero(), value(mount)]);
                row = build.zeros();
                row[inner] = T::one();
            }
            let coefficient = [T::zero(), damper_coefficient(damper, numbers), T::zero()];
            build.add(&names.damper, ElementKind::Damper, row.clone(), coefficient);
            build.friction(
                &names.damper_friction,
                row,
                value(damper.friction),
                damper.amplitude.map(value),
                damper.motion,
            );
        }
        if let Some(cylinder) = &data.cylinder {
            let lever = value(cylinder.motion_ratio) + value(cylinder.motion_ratio_slope) * delta;
            let row = build.travel(corner, lever);
            let (force, amplitude) = (value(cylinder.friction), cylinder.amplitude.map(value));
            build.friction(&names.cylinder_friction, row, force, amplitude, cylinder.motion);
        }
    }
    for (front, axle, name) in
        [(true, &spec.front, &structure.names.front_bar), (false, &spec.rear, &structure.names.rear_bar)]
    {
        if let Some(bar) = &axle.anti_roll_bar {
            // Roll of the axle relative to the body: (δ_left − δ_right)/track
            let arm = T::one() / value(axle.track);
            let mut deflection = [T::zero(); 4];
            let left = if front { 0 } else { 2 };
            deflection[left] = arm;
            deflection[left + 1] = -arm;
            let row = build.deflection(&deflection);
            build.add(name, ElementKind::AntiRollBar, row, [T::zero(), T::zero(), value(bar.rate)]);
        }
    }

    for (link, name) in spec.links.0.values().zip(&structure.names.links) {
        // s = gᵀδ
        let weights = [link.front_left, link.front_right, link.rear_left, link.rear_right].map(value);
        let row = build.deflection(&weights);
        build.add(name, ElementKind::Link, row, [link.inertance, link.damping, link.rate].map(value));
    }

    for region in at.parts.regions.iter().zip(&at.pressure) {
        // ±(p − p_atm) A·MR′ of chambers
        for chamber in region.0.chambers.iter().filter(|chamber| !chamber.lever.slope.is_zero()) {
            let corner = CORNERS[chamber.corner];
            let row = build.travel(corner, T::one());
            let turned = (*region.1 - at.parts.atmosphere) * chamber.area * chamber.lever.slope;
            let name = &structure.names.corners[chamber.corner].cylinder_geometry;
            build.add(name, ElementKind::OilGeometry, row, [T::zero(), T::zero(), turned]);
        }
    }
    let mut pressures = Vec::new();
    for pool in reduction.pools.iter().filter(|pool| !pool.nodes.iter().any(|&node| at.open[node])) {
        let inflow = build.oil(&pool.inflow, &layout, area);
        let mut compliance = T::zero();
        for &node in &pool.nodes {
            compliance += oil.node_compliance(node);
        }
        for &node in &pool.nodes {
            for (named, &store) in network.nodes[node].stores.iter().zip(&oil.compliance[node]) {
                let kind = match named.store {
                    Store::Gas(_) => ElementKind::Gas,
                    Store::Swell(_) | Store::PipeSwell { .. } => ElementKind::Hose,
                    _ => ElementKind::Oil,
                };
                if kind == ElementKind::Hose && store.is_zero() {
                    continue;
                }
                // Energy of one store at the common pressure: C_i p²/2 with p = g·u/C.
                let share = store / compliance.square();
                build.add(&named.name, kind, inflow.clone(), [T::zero(), T::zero(), share]);
            }
        }
        for index in pool.nodes.iter().flat_map(|&node| network.nodes[node].gases()) {
            let (Some(time), Some(inner)) = (network.accumulators[index].relaxation_time, layout.gases[index]) else {
                continue;
            };
            let [slow, fast] = at.gas[index].compliance;
            let others = compliance - slow;
            // (O11, O12) Beside what else gives at the node, K_iso + ΔK sτ/(1 + sτ) of the gas keeps its form: with C_o of the
            // others, K = 1/(C_o + C_gas) slow and fast, and τ (1 + C_o K_ad)/(1 + C_o K_iso).
            let stiffening = T::one() / (others + fast) - T::one() / compliance;
            let longer = value(time) * (others + fast) * slow / (fast * compliance);
            let (stiffening, time) = if slow.value() > 0.0 { (stiffening, longer) } else { (T::zero(), value(time)) };
            let mut row = inflow.clone();
            row[inner] = -T::one();
            let name = &network.accumulators[index].relaxation_name;
            build.add(name, ElementKind::Gas, row, [T::zero(), T::zero(), stiffening]);
            let mut own = build.zeros();
            own[inner] = T::one();
            // An empty accumulator still has its coordinate: it must not float.
            let resistance = if stiffening.value() > 0.0 { stiffening * time } else { T::one() };
            build.add(name, ElementKind::Gas, own, [T::zero(), resistance, T::zero()]);
        }
        let name = Arc::clone(&network.nodes[pool.nodes[0]].name);
        pressures.push(PressureRow { name, inflow, compliance });
    }
    pressures.sort_by(|a, b| a.name.cmp(&b.name));
    for (line, moved) in &reduction.moved {
        let values = oil.lines[*line];
        let names = &network.lines[*line];
        let row = build.oil(moved, &layout, area);
        if names.throttle.is_some() {
            let throttle = [T::zero(), values.throttle, T::zero()];
            build.add(&names.throttle_name, ElementKind::Throttle, row.clone(), throttle);
        }
        if names.valve.is_some() {
            build.add(&names.valve_name, ElementKind::Valve, row.clone(), [T::zero(), values.valve, T::zero()]);
        }
        if names.pipe.is_some() {
            build.add(&names.pipe_name, ElementKind::Line, row, [values.inertance, values.pipe, T::zero()]);
        }
    }

    // Chambers whose flow a line carries without any give between them.
    let carried = |row: &Row| {
        let chamber = row.chambers.iter().find(|(chamber, _)| area(*chamber).value() != 0.0);
        chamber.map(|(chamber, _)| chamber.name())
    };
    let carried = reduction.moved.iter().find_map(|(_, moved)| carried(moved));

    if gravity {
        // (O13) K_φφ − m g h′ of the leaned body and M_φφ + m h′² of the same motion about the roll axis
        let mut row = build.zeros();
        row[2] = T::one();
        let arm = at.parts.arm;
        let turned = [at.parts.mass * arm.square(), T::zero(), -at.parts.leaning];
        build.add(&structure.names.gravity, ElementKind::Gravity, row, turned);
    }

    let inertia = [spec.body.roll_inertia, spec.body.pitch_inertia, spec.body.roll_pitch_product].map(value);
    let body = at.body(value(spec.body.mass), inertia, payload);
    let circulations = reduction
        .circulations
        .iter()
        .map(|(free, shape)| {
            let mut full = vec![0.0; layout.size];
            for (kept, &entry) in shape.iter().enumerate() {
                full[layout.volumes[kept]] = entry;
            }
            (layout.volumes[*free], full)
        })
        .collect();
    Ok(Assembly {
        coordinates: layout.names,
        volumes: layout.volumes,
        gases: layout.gases.iter().copied().flatten().collect(),
        body,
        elements: build.elements,
        pressures,
        positions: build.positions,
        circulations,
        carried,
    })
}

// Gases that relax side by side at one pressure are kept at nodes of their own: their ways stay coordinates, which follow
// statically.
fn keep_apart(network: &Network, relaxing: &[bool], open: &[bool], ideal: &mut [bool]) {
    let pools = network.regions(|line| open[line] && ideal[line]);
    let relaxes = |node: usize| network.nodes[node].gases().any(|gas| relaxing[gas]);
    let count = |pool: usize| (0..pools.len()).filter(|&node| pools[node] == pool && relaxes(node)).count();
    for (line, ideal) in network.lines.iter().zip(ideal) {
        if *ideal && relaxes(line.to) && count(pools[line.to]) > 1 {
            *ideal = false;
        }
    }
}

// As given, or E[F v]/E[v²] of the table at its amplitude.
fn damper_coefficient<T: Scalar>(damper: &Damper<Slot>, numbers: &[T]) -> T {
    let value = |slot: &Slot| numbers[slot.0];
    match (&damper.coefficient, &damper.velocity, &damper.force, &damper.amplitude) {
        (Some(coefficient), ..) => value(coefficient),
        (None, Some(velocity), Some(force), Some(amplitude)) => {
            let list = |slots: &[Slot]| slots.iter().map(value).collect::<Vec<T>>();
            Pieces::through(&list(velocity), &list(force)).equivalent(value(amplitude), damper.motion)
        }
        _ => T::zero(),
    }
}

// Where each coordinate stands: the mechanical ones, then all others by name.
struct Layout {
    names: Vec<Arc<str>>,
    /// Coordinate of each kept line.
    volumes: Vec<usize>,
    /// Coordinate of the damper's own travel at each corner.
    inner: [Option<usize>; 4],
    /// Coordinate of the volume that relaxes in each gas.
    gases: Vec<Option<usize>>,
    size: usize,
}

impl Layout {
    fn new(structure: &Structure, reduction: &Reduction) -> Self {
        enum Owner {
            Volume(usize),
            Damper(usize),
            Gas(usize),
        }
        let volumes = reduction
            .kept
            .iter()
            .enumerate()
            .map(|(kept, &line)| (Arc::clone(&structure.network.lines[line].name), Owner::Volume(kept)));
        let dampers = CORNERS.into_iter().filter_map(|corner| {
            structure.spec.corner(corner)?.damper.as_ref()?.mount_rate?;
            Some((Arc::clone(&structure.names.corners[corner.index()].damper), Owner::Damper(corner.index())))
        });
        let accumulators = &structure.network.accumulators;
        let gases = accumulators.iter().enumerate().filter(|(_, accumulator)| accumulator.relaxation_time.is_some());
        let gases = gases.map(|(index, accumulator)| (Arc::clone(&accumulator.relaxation_name), Owner::Gas(index)));
        let mut others: Vec<(Arc<str>, Owner)> = volumes.chain(dampers).chain(gases).collect();
        others.sort_by(|a, b| a.0.cmp(&b.0));
        let mut layout = Self {
            names: mechanical_names().collect(),
            volumes: vec![0; reduction.kept.len()],
            inner: [None; 4],
            gases: vec![None; accumulators.len()],
            size: MECHANICAL + others.len(),
        };
        for (name, owner) in others {
            let place = layout.names.len();
            layout.names.push(name);
            match owner {
                Owner::Volume(kept) => layout.volumes[kept] = place,
                Owner::Damper(corner) => layout.inner[corner] = Some(place),
                Owner::Gas(index) => layout.gases[index] = Some(place),
            }
        }
        layout
    }
}

struct Builder<T> {
    positions: Positions<T>,
    size: usize,
    elements: Vec<Element<T>>,
}

impl<T: Scalar> Builder<T> {
    fn add(&mut self, name: &Arc<str>, kind: ElementKind, row: Vec<T>, [mass, damping, stiffness]: [T; 3]) {
        self.elements.push(Element { name: Arc::clone(name), kind, row, mass, damping, stiffness, road: None });
    }

    // Dry friction at its amplitude; none is no element.
    fn friction(&mut self, name: &Arc<str>, row: Vec<T>, force: T, amplitude: Option<T>, motion: Motion) {
        if let Some(amplitude) = amplitude.filter(|_| !force.is_zero()) {
            let coefficient = of_dry_friction(force, amplitude, motion);
            self.add(name, ElementKind::Friction, row, [T::zero(), coefficient, T::zero()]);
        }
    }

    // The element added last stands on the road.
    fn on_road(&mut self, corner: Corner) {
        if let Some(last) = self.elements.last_mut() {
            last.road = Some(corner);
        }
    }

    fn zeros(&self) -> Vec<T> {
        vec![T::zero(); self.size]
    }

    fn wheel(&self, corner: Corner) -> Vec<T> {
        let mut row = self.zeros();
        row[3 + corner.index()] = T::one();
        row
    }

    fn travel(&self, corner: Corner, ratio: T) -> Vec<T> {
        let mut deflection = [T::zero(); 4];
        deflection[corner.index()] = ratio;
        self.deflection(&deflection)
    }

    // A weighted sum of deflections over the coordinates: δ = w − (z − xθ + yφ)
    fn deflection(&self, weights: &[T; 4]) -> Vec<T> {
        let mut row = self.zeros();
        for (i, &weight) in weights.iter().enumerate() {
            row[0] += -weight;
            row[1] += weight * self.positions.x.0[i];
            row[2] += -(weight * self.positions.y.0[i]);
            row[3 + i] = weight;
        }
        row
    }

    // A volume: chambers through B L, lines through N.
    fn oil(&self, volume: &Row, layout: &Layout, area: impl Fn(Chamber) -> T) -> Vec<T> {
        let mut weights = [T::zero(); 4];
        for &(chamber, coefficient) in &volume.chambers {
            weights[chamber.corner.index()] += area(chamber) * coefficient;
        }
        let mut row = self.deflection(&weights);
        for (kept, &coefficient) in volume.lines.iter().enumerate() {
            row[layout.volumes[kept]] = T::constant(coefficient);
        }
        row
    }
}

#[cfg(test)]
mod tests {
    use nalgebra::DMatrix;

    use super::*;
    use crate::numerics::Dual;
    use crate::vehicle::Vehicle;

    // M, C and K in any scalar, summed from the elements.
    fn matrices<T: Scalar + nalgebra::Scalar>(assembly: &Assembly<T>) -> [DMatrix<T>; 3] {
        let n = assembly.coordinates.len();
        let mut sums = [(); 3].map(|()| DMatrix::from_element(n, n, T::zero()));
        for i in 0..3 {
            for j in 0..3 {
                sums[0][(i, j)] = assembly.body[i][j];
            }
        }
        for element in &assembly.elements {
            let scalars = [element.mass, element.damping, element.stiffness];
            for (sum, scalar) in sums.iter_mut().zip(scalars) {
                for i in 0..n {
                    for j in 0..n {
                        sum[(i, j)] += scalar * element.row[i] * element.row[j];
                    }
                }
            }
        }
        sums
    }

    fn at_design<T: Scalar>(car: &Vehicle, numbers: &[T]) -> Assembly<T> {
        let at = car.settle().unwrap().at(numbers);
        assemble(car.structure(), numbers, &at, &[], SlowLines::Flow, false).unwrap()
    }

    // The derivative with respect to every number of every example, against central differences.
    #[test]
    fn derivatives_by_every_number() {
        let mut compared = 0;
        for name in Vehicle::examples() {
            let car = Vehicle::example(name).unwrap();
            let at = |slot: usize, value: f64| {
                let mut numbers = car.numbers().to_vec();
                numbers[slot] = value;
                matrices(&at_design(&car, &numbers))
            };
            for (slot, parameter) in car.structure().parameters.iter().enumerate() {
                if parameter.field.kind.number().is_none() {
                    continue; // a flag
                }
                let value = car.numbers()[slot];
                if value == 0.0 {
                    continue; // at a bound: a throttle of zero is no throttle
                }
                let seeded: Vec<Dual> = (0..car.numbers().len())
                    .map(|i| {
                        let number = car.numbers()[i];
                        if i == slot { Dual::variable(number) } else { Dual::constant(number) }
                    })
                    .collect();
                let exact = matrices(&at_design(&car, &seeded));
                let step = 1e-5 * value;
                for ((exact, above), below) in exact.iter().zip(at(slot, value + step)).zip(at(slot, value - step)) {
                    let size = |i: usize| exact[(i, i)].value.abs();
                    for (index, dual) in exact.iter().enumerate() {
                        let (row, column) = (index % exact.nrows(), index / exact.nrows());
                        let numeric = (above[index] - below[index]) / (2.0 * step);
                        // A difference cannot see below the rounding of the sums it subtracts.
                        let blur = 1e-10 * (size(row) * size(column)).sqrt() / value.abs();
                        let error = (dual.derivative - numeric).abs();
                        assert!(
                            error <= 1e-7 * numeric.abs() + blur,
                            "{name} {}: {} against {numeric}",
                            parameter.path,
                            dual.derivative
                        );
                        compared += usize::from(numeric != 0.0);
                    }
                }
            }
        }
        assert!(compared > 1000, "{compared}");
    }
}
