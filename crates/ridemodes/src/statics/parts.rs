//! The parts that carry the vehicle, as numbers in any scalar.

use super::condition::Condition;
use super::{Positions, corner_loads};
use crate::axes::{CORNERS, PerCorner};
use crate::gas::{Gas, GasState};
use crate::hydraulics::Chamber;
use crate::numerics::Scalar;
use crate::spec::{Slot, Stop};
use crate::vehicle::Structure;

/// (O1) A law that passes a travel on through a motion ratio that may change with it: e = MR δ + MR′ δ²/2.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Lever<T> {
    pub ratio: T,
    pub slope: T,
}

impl<T: Scalar> Lever<T> {
    pub(crate) fn travel(&self, deflection: T) -> T {
        deflection * (self.ratio + self.slope * deflection * 0.5)
    }

    /// de/dδ
    pub(crate) fn at(&self, deflection: T) -> T {
        self.ratio + self.slope * deflection
    }
}

/// Spring of a corner.
#[derive(Clone, Copy, Debug)]
pub(crate) struct SpringPart<T> {
    pub lever: Lever<T>,
    pub rate: T,
    pub cubic: T,
    /// Force at the design condition [N].
    pub preload: T,
    /// Lift of the seat [m of spring travel].
    pub seat: T,
}

impl<T: Scalar> SpringPart<T> {
    /// (O2) F = F₀ + k x + k₃ x³ with x = e + seat
    pub(crate) fn force(&self, deflection: T) -> T {
        let x = self.lever.travel(deflection) + self.seat;
        self.preload + x * (self.rate + self.cubic * x.square())
    }

    /// dF/de
    pub(crate) fn rate(&self, deflection: T) -> T {
        let x = self.lever.travel(deflection) + self.seat;
        self.rate + self.cubic * x.square() * 3.0
    }
}

/// Stop of a corner, in bump or in rebound.
#[derive(Clone, Copy, Debug)]
pub(crate) struct StopPart<T> {
    /// Stop travel per wheel travel, negative for rebound.
    pub ratio: T,
    pub gap: T,
    pub rate: T,
    pub cubic: T,
}

impl<T: Scalar> StopPart<T> {
    fn new(stop: &Stop<Slot>, numbers: &[T], bump: bool) -> Self {
        let value = |slot: Slot| numbers[slot.0];
        let ratio = value(stop.motion_ratio);
        Self {
            ratio: if bump { ratio } else { -ratio },
            gap: value(stop.gap),
            rate: value(stop.rate),
            cubic: value(stop.cubic),
        }
    }

    /// Travel into the stop, negative while there is a gap.
    pub(crate) fn depth(&self, deflection: T) -> T {
        self.ratio * deflection - self.gap
    }

    /// Force of the stop itself, k x + k₃ x³ beyond the gap.
    pub(crate) fn force(&self, deflection: T) -> T {
        let x = self.depth(deflection);
        if x.value() > 0.0 { x * (self.rate + self.cubic * x.square()) } else { T::zero() }
    }

    /// Its tangent rate.
    pub(crate) fn rate(&self, deflection: T) -> T {
        let x = self.depth(deflection);
        if x.value() > 0.0 { self.rate + self.cubic * x.square() * 3.0 } else { T::zero() }
    }
}

#[derive(Clone, Copy, Debug)]
pub(crate) struct CornerPart<T> {
    pub x: T,
    pub y: T,
    pub spring: Option<SpringPart<T>>,
    /// Force at the wheel that nothing in the file carries: of a corner without a spring.
    pub rest: T,
    pub stops: [Option<StopPart<T>>; 2],
    pub unsprung: T,
    pub tyre_rate: T,
    /// Tyre load at the design condition [N].
    pub tyre_load: T,
    /// Height of the ground [m].
    pub height: T,
    /// Vertical force on the wheel and, of the same pair, on the body: links under acceleration.
    pub on_wheel: T,
}

/// A chamber as it acts at its wheel.
#[derive(Clone, Copy, Debug)]
pub(crate) struct ChamberPart<T> {
    pub corner: usize,
    /// Signed pressed area of the piston.
    pub area: T,
    pub lever: Lever<T>,
}

/// Connected oil: one pressure when it stands.
#[derive(Clone, Debug)]
pub(crate) struct Region<T> {
    pub nodes: Vec<usize>,
    /// Circuits whose hub it holds.
    pub hubs: Vec<usize>,
    pub chambers: Vec<ChamberPart<T>>,
    /// Accumulators, with the volume of their gas at the design condition.
    pub gases: Vec<(usize, Gas<T>, T)>,
    pub design_pressure: T,
    /// Oil at the design condition [m³], and what is added.
    pub oil: T,
    pub added: T,
    /// α (T − T_d)
    pub growth: T,
    inverse_bulk: T,
    /// x₀ p_atm/κ of entrained air.
    air: T,
    hoses: T,
    /// Pressure it is held at.
    pub held: Option<T>,
    /// Start of a fast change: each gas, the pressure it starts at.
    pub start: Option<(Vec<GasState<T>>, T)>,
    pub temperature: T,
}

/// Pressures below which oil evaporates: it is held there and a cavity forms [Pa].
pub(crate) const VACUUM: f64 = 100.0;

impl<T: Scalar> Region<T> {
    /// Volume pushed in by the chambers, Σ∫B dδ.
    pub(crate) fn pushed(&self, deflection: &[T; 4]) -> T {
        let mut total = T::zero();
        for chamber in &self.chambers {
            total += chamber.area * chamber.lever.travel(deflection[chamber.corner]);
        }
        total
    }

    /// State of a gas of the region at a pressure.
    pub(crate) fn gas(&self, place: usize, pressure: T) -> GasState<T> {
        let gas = &self.gases[place].1;
        match &self.start {
            Some((start, from)) => gas.after(start[place], [*from, self.temperature], pressure),
            None => gas.at(pressure, self.temperature),
        }
    }

    // (O3) ΣV_g(p) − ΣV_g,d + V_oil (α ΔT − ∫dp/β_e) + V_added − ΣC_hose (p − p_s) + Σ∫B dδ, which is zero and falls with p
    fn excess(&self, pressure: T, pushed: T) -> T {
        let mut total = pushed + self.added + self.oil * (self.growth - self.compression(pressure));
        total += -(self.hoses * (pressure - self.design_pressure));
        for (place, (_, _, design)) in self.gases.iter().enumerate() {
            total += self.gas(place, pressure).volume - *design;
        }
        total
    }

    // (O4) ∫dp/β_e from p_s to p, with 1/β_e = 1/β + x₀ p_atm/(κ p²)
    fn compression(&self, pressure: T) -> T {
        self.inverse_bulk * (pressure - self.design_pressure)
            + self.air * (T::one() / self.design_pressure - T::one() / pressure)
    }

    /// Tangent compliance: that of gas (slow, or fast once a start is given), oil and hoses [m³/Pa].
    pub(crate) fn compliance(&self, pressure: T) -> T {
        let mut total = self.hoses + self.oil * (self.inverse_bulk + self.air / pressure.square());
        for (place, (_, gas, _)) in self.gases.iter().enumerate() {
            let [slow, fast] = gas.compliances(self.gas(place, pressure), [pressure, self.temperature]);
            // Along a path without heat exchange nitrogen warms: its slope there is by the path itself.
            total += if self.start.is_some() { fast } else { slow };
        }
        total
    }

    /// Pressure that the volume pushed in brings about, from a guess on. `None` where nothing gives.
    pub(crate) fn pressure(&self, pushed: T, guess: f64) -> Option<T> {
        if let Some(held) = self.held {
            return Some(held);
        }
        let volume = T::constant(pushed.value());
        let excess = |p: f64| self.excess(T::constant(p), volume).value();
        let compliance_at = |p: f64| self.compliance(T::constant(p)).value();
        // Newton in ln p, kept between bounds that close in.
        let (mut low, mut high) = (VACUUM, f64::INFINITY);
        let mut p = guess.max(2.0 * VACUUM);
        for _ in 0..200 {
            let missing = excess(p);
            let step = missing / (compliance_at(p) * p);
            // The step in the scalar takes the rest: it is quadratic.
            if step.abs() <= 1e-10 {
                break;
            }
            if missing > 0.0 {
                low = low.max(p);
            } else {
                high = high.min(p);
            }
            let mut next = p * step.clamp(-2.0, 2.0).exp();
            if !(next > low && next < high && step.is_finite()) {
                next = if high.is_finite() { (low * high).sqrt() } else { p * 4.0 };
            }
            if next > 1e12 {
                return None;
            }
            if next < 2.0 * VACUUM && excess(VACUUM) <= 0.0 {
                return Some(T::constant(VACUUM));
            }
            p = next;
            if high / low <= 1.0 + 1e-14 {
                break;
            }
        }
        self.followed(pushed, p)
    }

    /// The pressure next to one that is solved: one step in the scalar, which carries the derivatives (implicit function
    /// theorem).
    pub(crate) fn followed(&self, pushed: T, solved: f64) -> Option<T> {
        if let Some(held) = self.held {
            return Some(held);
        }
        let end = T::constant(solved);
        if solved <= VACUUM {
            return Some(end);
        }
        let compliance = self.compliance(end).value();
        (compliance > 0.0).then(|| end + self.excess(end, pushed) / T::constant(compliance))
    }

    /// Volume of the cavity where the oil has torn off [m³].
    pub(crate) fn cavity(&self, pressure: T, pushed: T) -> f64 {
        if self.held.is_some() || pressure.value() > VACUUM {
            0.0
        } else {
            (-self.excess(pressure, pushed).value()).max(0.0)
        }
    }

    /// What the balance of volumes misses at a pressure, in the scalar [m³].
    pub(crate) fn missing(&self, pressure: T, pushed: T) -> T {
        -self.excess(pressure, pushed)
    }
}

/// Everything that the balance is made of.
#[derive(Clone, Debug)]
pub(crate) struct Parts<T> {
    pub corners: [CornerPart<T>; 4],
    /// Bar rates at the wheels, front and rear: force on a wheel per difference of travel.
    pub bars: [T; 2],
    /// Weights and rate of each link.
    pub links: Vec<([T; 4], T)>,
    pub regions: Vec<Region<T>>,
    pub atmosphere: T,
    /// External force and moments on the body over z, pitch and roll at the design attitude.
    pub load: [T; 3],
    /// Moment per roll angle of the leaned body's weight.
    pub leaning: T,
    /// Height of the centre of gravity above the roll axis.
    pub arm: T,
    /// Weight of all that the springs carry, for scales.
    pub weight: f64,
    /// Sprung mass with payload, and its centre ahead, to the left and above the body's.
    pub mass: T,
    pub centre: [T; 3],
}

impl<T: Scalar> Parts<T> {
    /// The parts under a condition, with the share of its charge that each accumulator keeps.
    pub(crate) fn new(structure: &Structure, numbers: &[T], condition: &Condition, charge: &[f64], fast: bool) -> Self {
        let spec = &structure.spec;
        let value = |slot: Slot| numbers[slot.0];
        let loads = Loads::new(structure, numbers, condition);
        let positions = Positions::new(spec, numbers);
        let corner_load = corner_loads(spec, numbers);
        let atmosphere = value(spec.atmosphere);
        let design_oil = oil_loads(structure, numbers);
        let corners = CORNERS.map(|corner| {
            let i = corner.index();
            let data = spec.corner(corner);
            let carried = corner_load[corner] - design_oil[corner];
            let spring = data.and_then(|data| data.spring.as_ref()).map(|spring| {
                let ratio = value(spring.motion_ratio);
                SpringPart {
                    lever: Lever { ratio, slope: value(spring.motion_ratio_slope) },
                    rate: value(spring.rate),
                    cubic: value(spring.cubic),
                    preload: carried / ratio,
                    seat: T::constant(condition.spring_seat[i]),
                }
            });
            let stop = |stop: Option<&Stop<Slot>>, bump| stop.map(|stop| StopPart::new(stop, numbers, bump));
            let unsprung = data.map_or(T::zero(), |data| value(data.unsprung_mass));
            CornerPart {
                x: positions.x[corner],
                y: positions.y[corner],
                rest: if spring.is_some() { T::zero() } else { carried },
                spring,
                stops: [
                    stop(data.and_then(|data| data.bump_stop.as_ref()), true),
                    stop(data.and_then(|data| data.rebound_stop.as_ref()), false),
                ],
                unsprung,
                tyre_rate: data.map_or(T::zero(), |data| value(data.tyre.rate)),
                tyre_load: corner_load[corner] + unsprung * crate::units::STANDARD_GRAVITY,
                height: T::constant(condition.heights[i]),
                on_wheel: loads.on_wheel[i],
            }
        });
        let bar = |axle: &crate::spec::Axle<Slot>| {
            axle.anti_roll_bar.as_ref().map_or(T::zero(), |bar| value(bar.rate) / value(axle.track).square())
        };
        let links = spec.links.0.values().map(|link| {
            let weights = [link.front_left, link.front_right, link.rear_left, link.rear_right].map(value);
            (weights, value(link.rate))
        });
        Self {
            corners,
            bars: [bar(&spec.front), bar(&spec.rear)],
            links: links.collect(),
            regions: regions(structure, numbers, condition, charge, fast),
            atmosphere,
            load: loads.on_body,
            leaning: loads.leaning,
            arm: loads.arm,
            weight: value(spec.body.mass).value() * crate::units::STANDARD_GRAVITY,
            mass: loads.mass,
            centre: loads.centre,
        }
    }
}

/// External forces on body (z, pitch, roll) and wheels under a condition, but for gravity of the wheels.
pub(crate) fn external_loads<T: Scalar>(structure: &Structure, numbers: &[T], condition: &Condition) -> [T; 7] {
    let loads = Loads::new(structure, numbers, condition);
    std::array::from_fn(|i| if i < 3 { loads.on_body[i] } else { loads.on_wheel[i - 3] })
}

// Share of each corner load that oil carries at the design condition, Bᵀ(p_s − p_atm).
fn oil_loads<T: Scalar>(structure: &Structure, numbers: &[T]) -> PerCorner<T> {
    let spec = &structure.spec;
    let atmosphere = numbers[spec.atmosphere.0];
    let mut loads = PerCorner([T::zero(); 4]);
    for node in &structure.network.nodes {
        for chamber in &node.chambers {
            loads[chamber.corner] +=
                chamber.signed_area(spec, numbers, T::zero()) * (numbers[node.pressure.0] - atmosphere);
        }
    }
    loads
}

// What acts from outside.
struct Loads<T> {
    on_body: [T; 3],
    on_wheel: [T; 4],
    leaning: T,
    arm: T,
    mass: T,
    centre: [T; 3],
}

impl<T: Scalar> Loads<T> {
    fn new(structure: &Structure, numbers: &[T], condition: &Condition) -> Self {
        let spec = &structure.spec;
        let value = |slot: Slot| numbers[slot.0];
        let weight = condition.weight();
        let (a, b) = (value(spec.front.distance), value(spec.rear.distance));
        let wheelbase = a + b;
        let body = value(spec.body.mass);
        // Payload moves the centre of gravity.
        let (mut mass, mut first) = (body, [T::zero(); 3]);
        for one in &condition.payload {
            mass += T::constant(one.mass);
            for (sum, place) in first.iter_mut().zip([one.x, one.y, one.z]) {
                *sum += T::constant(one.mass * place);
            }
        }
        let centre = first.map(|moment| moment / mass);
        let height = value(spec.body.cg_height) + centre[2];
        // Height above the roll axis, at the centre of gravity.
        let share_front = (b + centre[0]) / wheelbase;
        let (h_front, h_rear) = (value(spec.front.roll_centre_height), value(spec.rear.roll_centre_height));
        let arm = height - (h_front * share_front + h_rear * (T::one() - share_front));
        let (across, ahead) = (condition.across(), condition.ahead());

        let [front_down, rear_down] = condition.downforce.map(T::constant);
        // (O6) Weight at the centre, downforce at the axles; lateral moment about the roll axis.
        let mut on_body = [
            -(mass * weight) - front_down - rear_down,
            first[0] * weight + a * front_down - b * rear_down,
            -(first[1] * weight) + mass * arm * across,
        ];
        let mut on_wheel = [T::zero(); 4];
        let mut whole = mass * height;
        for (axle, share, h_roll, left) in
            [(&spec.front, share_front, h_front, 0), (&spec.rear, T::one() - share_front, h_rear, 2)]
        {
            let unsprung = |left: bool| axle.side(left).map_or(T::zero(), |corner| value(corner.unsprung_mass));
            let own = (unsprung(true) + unsprung(false)) * value(axle.unsprung_height);
            whole += own;
            // (O7) ±(m_axle h_R + m_u h_u) a_y/t through the links, unloading the left
            let pair = (mass * share * h_roll + own) * across / value(axle.track);
            on_wheel[left] += pair;
            on_wheel[left + 1] += -pair;
        }
        // (O8) ΔF = m h a_x/wheelbase from front to rear; the links' share is a pair of forces between body and wheels.
        on_body[1] += -(whole * ahead);
        let transfer = whole * ahead / wheelbase;
        for (axle, gain, x, left) in [(&spec.front, -transfer, a, 0), (&spec.rear, transfer, -b, 2)] {
            let share = if ahead < 0.0 { value(axle.anti_braking) } else { value(axle.anti_driving) };
            let links = share * gain;
            on_body[0] += links;
            on_body[1] += -(x * links);
            on_wheel[left] += -(links * 0.5);
            on_wheel[left + 1] += -(links * 0.5);
        }
        Self { on_body, on_wheel, leaning: mass * arm * weight, arm, mass, centre }
    }
}

// Connected oil with slow lines open, or shut for a fast change.
fn regions<T: Scalar>(
    structure: &Structure,
    numbers: &[T],
    condition: &Condition,
    charge: &[f64],
    fast: bool,
) -> Vec<Region<T>> {
    let (spec, network) = (&structure.spec, &structure.network);
    let value = |slot: Slot| numbers[slot.0];
    let Some(oil) = &spec.oil else { return Vec::new() };
    let is_true = |flag: Option<Slot>| flag.is_some_and(|flag| numbers[flag.0].value() == 1.0);
    let region_of =
        network.regions(|line| !(is_true(network.lines[line].closed) || fast && is_true(network.lines[line].slow)));
    let count = region_of.iter().max().map_or(0, |last| last + 1);
    let design_temperature = value(spec.temperature);
    let temperature = condition.temperature.map_or(design_temperature, T::constant);
    let atmosphere = value(spec.atmosphere);
    let held = condition.held(atmosphere.value());
    let mut regions: Vec<Region<T>> = (0..count)
        .map(|own| {
            let first = region_of.iter().position(|&region| region == own).unwrap_or(0);
            let node = &network.nodes[first];
            Region {
                nodes: Vec::new(),
                hubs: Vec::new(),
                chambers: Vec::new(),
                gases: Vec::new(),
                design_pressure: value(node.pressure),
                oil: T::zero(),
                added: T::zero(),
                growth: value(oil.expansion) * (temperature - design_temperature),
                inverse_bulk: oil.bulk_modulus.map_or(T::zero(), |modulus| T::one() / value(modulus)),
                air: value(oil.air_fraction) * atmosphere / value(oil.air_exponent),
                hoses: T::zero(),
                held: None,
                start: None,
                temperature,
            }
        })
        .collect();
    let stores = network.stores(spec, numbers);
    for (index, node) in network.nodes.iter().enumerate() {
        let region = &mut regions[region_of[index]];
        let (oil, hoses) = stores[index];
        region.nodes.push(index);
        region.oil += oil;
        region.hoses += hoses;
        for &chamber in &node.chambers {
            region.chambers.push(chamber_part(structure, numbers, chamber));
        }
        for gas in node.gases() {
            let law = network.accumulators[gas].gas(numbers, design_temperature);
            let design = law.at(value(node.pressure), design_temperature).volume;
            let law = Gas { amount: law.amount * charge[gas], ..law };
            region.gases.push((gas, law, design));
        }
        if let Some(circuit) = network.hubs.iter().position(|&hub| hub == index) {
            region.hubs.push(circuit);
            let name = &*network.circuits[circuit];
            if let Some(volume) = condition.oil.get(name) {
                region.added += T::constant(*volume);
            }
            if let Some(pressure) = held.get(name) {
                region.held = Some(T::constant(*pressure));
            }
        }
    }
    regions
}

fn chamber_part<T: Scalar>(structure: &Structure, numbers: &[T], chamber: Chamber) -> ChamberPart<T> {
    let cylinder = structure.spec.corner(chamber.corner).and_then(|corner| corner.cylinder.as_ref());
    let (ratio, slope) = cylinder.map_or((T::zero(), T::zero()), |cylinder| {
        (numbers[cylinder.motion_ratio.0], numbers[cylinder.motion_ratio_slope.0])
    });
    let area = chamber.piston_area(&structure.spec, numbers);
    ChamberPart {
        corner: chamber.corner.index(),
        area: if chamber.bump { area } else { -area },
        lever: Lever { ratio, slope },
    }
}

/// Forces of the suspension on the body (and, reversed, on the wheels), bump positive in the deflection [N].
pub(crate) fn suspension_forces<T: Scalar>(parts: &Parts<T>, deflection: &[T; 4], pressure: &[T]) -> [T; 4] {
    let mut forces = [T::zero(); 4];
    for (i, corner) in parts.corners.iter().enumerate() {
        let delta = deflection[i];
        forces[i] += corner.rest;
        if let Some(spring) = &corner.spring {
            forces[i] += spring.force(delta) * spring.lever.at(delta);
        }
        for stop in corner.stops.iter().flatten() {
            forces[i] += stop.force(delta) * stop.ratio;
        }
    }
    for (axle, &bar) in parts.bars.iter().enumerate() {
        let (left, right) = (2 * axle, 2 * axle + 1);
        let force = bar * (deflection[left] - deflection[right]);
        forces[left] += force;
        forces[right] += -force;
    }
    for (weights, rate) in &parts.links {
        let mut travel = T::zero();
        for i in 0..4 {
            travel += weights[i] * deflection[i];
        }
        for i in 0..4 {
            forces[i] += *rate * travel * weights[i];
        }
    }
    for (region, &p) in parts.regions.iter().zip(pressure) {
        let gauge = p - parts.atmosphere;
        for chamber in &region.chambers {
            forces[chamber.corner] += chamber.area * chamber.lever.at(deflection[chamber.corner]) * gauge;
        }
    }
    forces
}

/// δ_i = w_i − (z − x_i θ + y_i φ) of the unknowns z, θ, φ, w.
pub(crate) fn deflections<T: Scalar>(parts: &Parts<T>, unknowns: &[T; 7]) -> [T; 4] {
    let [z, pitch, roll, ..] = *unknowns;
    std::array::from_fn(|i| {
        let corner = &parts.corners[i];
        unknowns[3 + i] - (z - corner.x * pitch + corner.y * roll)
    })
}

/// Tyre loads, which do not pull.
pub(crate) fn tyre_loads<T: Scalar>(parts: &Parts<T>, unknowns: &[T; 7]) -> [T; 4] {
    std::array::from_fn(|i| {
        let corner = &parts.corners[i];
        let load = corner.tyre_load + corner.tyre_rate * (corner.height - unknowns[3 + i]);
        if load.value() > 0.0 { load } else { T::zero() }
    })
}

/// What is left of the balance of the body (z, pitch, roll) and the wheels, upwards [N, N·m].
pub(crate) fn imbalance<T: Scalar>(parts: &Parts<T>, unknowns: &[T; 7], pressure: &[T], weight: f64) -> [T; 7] {
    let deflection = deflections(parts, unknowns);
    let forces = suspension_forces(parts, &deflection, pressure);
    let tyres = tyre_loads(parts, unknowns);
    let mut rows = [T::zero(); 7];
    rows[..3].copy_from_slice(&parts.load);
    rows[2] += parts.leaning * unknowns[2];
    for (i, corner) in parts.corners.iter().enumerate() {
        rows[0] += forces[i];
        rows[1] += -(corner.x * forces[i]);
        rows[2] += corner.y * forces[i];
        rows[3 + i] = tyres[i] + corner.on_wheel - forces[i] - corner.unsprung * weight;
    }
    rows
}
