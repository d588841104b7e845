//! From the structure and any vector of numbers to the list of elements.

use std::sync::Arc;

use super::{Assembly, Element, ElementKind, PressureRow, mechanical_names};
use crate::axes::{CORNERS, Corner, MECHANICAL};
use crate::error::Result;
use crate::hydraulics::{Chamber, LineValues, Reduction, Row, Store, reduce};
use crate::numerics::Scalar;
use crate::spec::Slot;
use crate::statics::Positions;
use crate::vehicle::Structure;

/// Assembles the linear system at the design condition.
pub(crate) fn assemble<T: Scalar>(structure: &Structure, numbers: &[T]) -> Result<Assembly<T>> {
    let spec = &structure.spec;
    let network = &structure.network;
    let value = |slot: Slot| numbers[slot.0];
    let oil = network.values(spec, numbers);
    // Branches on a value are decided in f64.
    let ideal: Vec<bool> = oil.lines.iter().map(is_ideal).collect();
    let inertial: Vec<bool> = oil.lines.iter().map(|line| line.inertance.value() > 0.0).collect();
    let compliant: Vec<bool> =
        oil.compliance.iter().map(|stores| stores.iter().any(|store| store.value() > 0.0)).collect();
    let area = |chamber: Chamber| chamber.signed_area(spec, numbers);
    let reduction = reduce(network, &ideal, &inertial, &compliant, |chamber| area(chamber).value())?;
    let layout = Layout::new(structure, &reduction);
    let mut build = Builder { positions: Positions::new(spec, numbers), size: layout.size, elements: Vec::new() };

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
        build.add(&names.tyre, ElementKind::Tyre, wheel, [T::zero(), value(data.tyre.damping), value(data.tyre.rate)]);
        build.on_road(corner);
        if let Some(spring) = &data.spring {
            // e = MR δ
            let row = build.travel(corner, value(spring.motion_ratio));
            build.add(&names.spring, ElementKind::Spring, row, [T::zero(), T::zero(), value(spring.rate)]);
        }
        if let Some(damper) = &data.damper {
            let mut row = build.travel(corner, value(damper.motion_ratio));
            let coefficient = value(damper.coefficient);
            match (damper.mount_rate, layout.inner[corner.index()]) {
                // Maxwell branch: the damper on its own travel ξ, the mount on MR δ − ξ.
                (Some(mount), Some(inner)) => {
                    row[inner] = -T::one();
                    build.add(&names.mount, ElementKind::Mount, row, [T::zero(), T::zero(), value(mount)]);
                    let mut own = build.zeros();
                    own[inner] = T::one();
                    build.add(&names.damper, ElementKind::Damper, own, [T::zero(), coefficient, T::zero()]);
                }
                _ => build.add(&names.damper, ElementKind::Damper, row, [T::zero(), coefficient, T::zero()]),
            }
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

    let mut pressures = Vec::new();
    for pool in &reduction.pools {
        let inflow = build.oil(&pool.inflow, &layout, area);
        let mut compliance = T::zero();
        for &node in &pool.nodes {
            for &store in &oil.compliance[node] {
                compliance += store;
            }
        }
        for &node in &pool.nodes {
            for (named, &store) in network.nodes[node].stores.iter().zip(&oil.compliance[node]) {
                let kind = match named.store {
                    Store::Gas(_) => ElementKind::Gas,
                    _ => ElementKind::Oil,
                };
                // Energy of one store at the common pressure: C_i p²/2 with p = g·u/C.
                let share = store / compliance.square();
                build.add(&named.name, kind, inflow.clone(), [T::zero(), T::zero(), share]);
            }
        }
        let name = Arc::clone(&network.nodes[pool.nodes[0]].name);
        pressures.push(PressureRow { name, inflow, compliance });
    }
    for (line, moved) in &reduction.moved {
        let values = oil.lines[*line];
        let names = &network.lines[*line];
        let row = build.oil(moved, &layout, area);
        build.add(&names.throttle_name, ElementKind::Throttle, row.clone(), [T::zero(), values.throttle, T::zero()]);
        if names.pipe.is_some() {
            build.add(&names.pipe_name, ElementKind::Line, row, [values.inertance, values.resistance, T::zero()]);
        }
    }

    // Chambers whose flow a line carries without any give between them.
    let carried = |row: &Row| {
        let chamber = row.chambers.iter().find(|(chamber, _)| area(*chamber).value() != 0.0);
        chamber.map(|(chamber, _)| chamber.name())
    };
    let carried = reduction.moved.iter().find_map(|(_, moved)| carried(moved));

    // About the centre of gravity: [[m, 0, 0], [0, I_yy, −P_xy], [0, −P_xy, I_xx]]
    let body = &spec.body;
    let product = -value(body.roll_pitch_product);
    let zero = T::zero();
    let body = [
        [value(body.mass), zero, zero],
        [zero, value(body.pitch_inertia), product],
        [zero, product, value(body.roll_inertia)],
    ];
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
        body,
        elements: build.elements,
        pressures,
        positions: build.positions,
        circulations,
        carried,
    })
}

// A pipe with neither resistance nor inertance joins its nodes.
fn is_ideal<T: Scalar>(line: &LineValues<T>) -> bool {
    line.throttle.value() == 0.0 && line.resistance.value() == 0.0 && line.inertance.value() == 0.0
}

// Where each coordinate stands: the mechanical ones, then all others by name.
struct Layout {
    names: Vec<Arc<str>>,
    /// Coordinate of each kept line.
    volumes: Vec<usize>,
    /// Coordinate of the damper's own travel at each corner.
    inner: [Option<usize>; 4],
    size: usize,
}

impl Layout {
    fn new(structure: &Structure, reduction: &Reduction) -> Self {
        enum Owner {
            Volume(usize),
            Damper(usize),
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
        let mut others: Vec<(Arc<str>, Owner)> = volumes.chain(dampers).collect();
        others.sort_by(|a, b| a.0.cmp(&b.0));
        let mut layout = Self {
            names: mechanical_names().collect(),
            volumes: vec![0; reduction.kept.len()],
            inner: [None; 4],
            size: MECHANICAL + others.len(),
        };
        for (name, owner) in others {
            let place = layout.names.len();
            layout.names.push(name);
            match owner {
                Owner::Volume(kept) => layout.volumes[kept] = place,
                Owner::Damper(corner) => layout.inner[corner] = Some(place),
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

    // The derivative with respect to every number of every example, against central differences.
    #[test]
    fn derivatives_by_every_number() {
        let mut compared = 0;
        for name in Vehicle::examples() {
            let car = Vehicle::example(name).unwrap();
            let at = |slot: usize, value: f64| {
                let mut numbers = car.numbers().to_vec();
                numbers[slot] = value;
                matrices(&assemble(car.structure(), &numbers).unwrap())
            };
            for (slot, parameter) in car.structure().parameters.iter().enumerate() {
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
                let exact = matrices(&assemble(car.structure(), &seeded).unwrap());
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
