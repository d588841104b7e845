//! Connected oil at one pressure, and the volumes that balance in it.

use super::condition::Condition;
use super::parts::Lever;
use crate::gas::{Gas, GasState};
use crate::hydraulics::Chamber;
use crate::numerics::Scalar;
use crate::spec::Slot;
use crate::vehicle::Structure;

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

// Connected oil with slow lines open, or shut for a fast change.
pub(super) fn regions<T: Scalar>(
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
