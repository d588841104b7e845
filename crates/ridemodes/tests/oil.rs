//! The oil of a car by nodal impedance, worked out from its data alone.
//!
//! Every hub, chamber and accumulator is a node; D(s) = Bᵀ [s C + N (R + sI)⁻¹ Nᵀ]⁻¹ s B.

use ridemodes::Complex64;
use ridemodes::nalgebra::{DMatrix, Matrix4, RowVector4};
use serde_json::{Value, json};

use crate::support::{corner, number};

const ATMOSPHERE: f64 = 101_325.0;

struct Line {
    from: usize,
    to: usize,
    resistance: f64,
    inertance: f64,
}

pub(crate) struct Oil {
    /// Volume pushed into each node per wheel travel, B.
    areas: Vec<RowVector4<f64>>,
    compliance: Vec<f64>,
    circuit: Vec<usize>,
    lines: Vec<Line>,
}

impl Oil {
    pub(crate) fn new(car: &Value) -> Self {
        let mut oil = Self { areas: Vec::new(), compliance: Vec::new(), circuit: Vec::new(), lines: Vec::new() };
        let fluid = Fluid::new(car);
        for (index, circuit) in circuits(car).iter().enumerate() {
            oil.add_circuit(car, &fluid, index, circuit);
        }
        oil
    }

    fn add_circuit(&mut self, car: &Value, fluid: &Fluid, index: usize, circuit: &Value) {
        let pressure = circuit["pressure"].as_f64().unwrap();
        let compressibility = fluid.compressibility(pressure);
        let hub = self.node(index, number(&circuit["volume"], 0.0) * compressibility);
        for (key, way) in circuit["chambers"].as_object().unwrap() {
            let node = self.way(fluid, compressibility, hub, way);
            let (corner_index, area, volume) = chamber(car, key);
            self.areas[node][corner_index] += area;
            self.compliance[node] += volume * compressibility;
        }
        for accumulator in circuit["accumulators"].as_object().into_iter().flat_map(|all| all.values()) {
            let node = self.way(fluid, compressibility, hub, accumulator);
            self.compliance[node] += gas_compliance(accumulator, pressure, number(&car["temperature"], 293.15));
        }
    }

    fn node(&mut self, circuit: usize, compliance: f64) -> usize {
        self.areas.push(RowVector4::zeros());
        self.compliance.push(compliance);
        self.circuit.push(circuit);
        self.areas.len() - 1
    }

    // The node at the far end of a way; the hub itself where the way is nothing.
    fn way(&mut self, fluid: &Fluid, compressibility: f64, hub: usize, way: &Value) -> usize {
        let mut resistance = number(&way["throttle"], 0.0);
        let (mut inertance, mut half) = (0.0, 0.0);
        if let Some(line) = way.get("line") {
            let (length, bore) = (line["length"].as_f64().unwrap(), line["bore"].as_f64().unwrap());
            let area = std::f64::consts::PI * bore * bore / 4.0;
            // Hagen–Poiseuille
            resistance += 128.0 * fluid.viscosity * length / (std::f64::consts::PI * bore.powi(4));
            inertance = fluid.density * length / area
                * match line["inertia"].as_str() {
                    Some("none") => 0.0,
                    Some("developed") => 4.0 / 3.0,
                    _ => 1.0,
                };
            half = 0.5 * length * area * compressibility;
        }
        if resistance == 0.0 && inertance == 0.0 {
            return hub;
        }
        self.compliance[hub] += half;
        let to = self.node(self.circuit[hub], half);
        self.lines.push(Line { from: hub, to, resistance, inertance });
        to
    }

    /// K_hyd(0) = Σ b bᵀ/ΣC over the circuits, b the sum of B's rows.
    pub(crate) fn quasi_static(&self) -> Matrix4<f64> {
        let count = self.circuit.iter().max().map_or(0, |last| last + 1);
        let mut total = Matrix4::zeros();
        for circuit in 0..count {
            let nodes = (0..self.areas.len()).filter(|&node| self.circuit[node] == circuit);
            let (area, compliance) = nodes.fold((RowVector4::zeros(), 0.0), |(area, compliance), node| {
                (area + self.areas[node], compliance + self.compliance[node])
            });
            total += area.transpose() * area / compliance;
        }
        total
    }

    /// D(s) for s ≠ 0 as written above. Where s C is small beside 1/(R + sI) it loses digits.
    pub(crate) fn impedance(&self, s: Complex64) -> Matrix4<Complex64> {
        let count = self.areas.len();
        let mut admittance = DMatrix::zeros(count, count);
        for node in 0..count {
            admittance[(node, node)] += s * self.compliance[node];
        }
        for line in &self.lines {
            let flow = 1.0 / (line.resistance + s * line.inertance);
            for (node, sign) in [(line.from, -1.0), (line.to, 1.0)] {
                admittance[(node, line.from)] -= flow * sign;
                admittance[(node, line.to)] += flow * sign;
            }
        }
        let areas = DMatrix::from_fn(count, 4, |node, wheel| Complex64::from(self.areas[node][wheel]));
        let pressures = admittance.lu().solve(&(&areas * s)).expect("every node has a way to the gas");
        let result = areas.transpose() * pressures;
        Matrix4::from_fn(|i, j| result[(i, j)])
    }

    /// The same with the ends of the lines eliminated by hand, which loses none: with Y = 1/(R + sI) an end passes
    /// Y/(sC + Y) of its inflow on to the hub and loads it by Y·sC/(Y + sC).
    pub(crate) fn impedance_of_stars(&self, s: Complex64) -> Matrix4<Complex64> {
        let mut total = Matrix4::zeros();
        let is_end = |node: usize| self.lines.iter().any(|line| line.to == node);
        for hub in (0..self.areas.len()).filter(|&node| !is_end(node)) {
            let mut load = s * self.compliance[hub];
            let mut inflow = self.areas[hub].map(Complex64::from);
            for line in self.lines.iter().filter(|line| line.from == hub) {
                let impedance = line.resistance + s * line.inertance;
                let (area, store) = (self.areas[line.to].map(Complex64::from), s * self.compliance[line.to]);
                let passed = 1.0 / (1.0 + store * impedance);
                load += store * passed;
                inflow += area * passed;
                total += area.transpose() * area * (s * impedance * passed);
            }
            total += inflow.transpose() * inflow * (s / load);
        }
        total
    }

    /// Pressure at the hub of each circuit per wheel travel, hubs in the order of [`circuits`].
    pub(crate) fn hub_pressures(&self, s: Complex64) -> Vec<RowVector4<Complex64>> {
        let is_end = |node: usize| self.lines.iter().any(|line| line.to == node);
        (0..self.areas.len())
            .filter(|&node| !is_end(node))
            .map(|hub| {
                let mut load = Complex64::from(self.compliance[hub]);
                let mut inflow = self.areas[hub].map(Complex64::from);
                for line in self.lines.iter().filter(|line| line.from == hub) {
                    let store = s * self.compliance[line.to] * (line.resistance + s * line.inertance);
                    load += self.compliance[line.to] / (1.0 + store);
                    inflow += self.areas[line.to].map(Complex64::from) / (1.0 + store);
                }
                inflow / load
            })
            .collect()
    }

    pub(crate) fn circuits(&self) -> usize {
        self.circuit.iter().max().map_or(0, |last| last + 1)
    }

    /// Lines with inertance, and those without.
    pub(crate) fn line_counts(&self) -> (usize, usize) {
        let inertial = self.lines.iter().filter(|line| line.inertance > 0.0).count();
        (inertial, self.lines.len() - inertial)
    }
}

struct Fluid {
    density: f64,
    viscosity: f64,
    bulk_modulus: f64,
    air_fraction: f64,
    air_exponent: f64,
}

impl Fluid {
    fn new(car: &Value) -> Self {
        let oil = &car["oil"];
        let temperature = number(&car["temperature"], 293.15);
        let density =
            oil["density"].as_f64().unwrap() / (1.0 + number(&oil["expansion"], 7e-4) * (temperature - 288.15));
        let kinematic = viscosity(
            oil["kinematic_viscosity"].as_f64().unwrap() * 1e6,
            oil["kinematic_viscosity_hot"].as_f64().unwrap() * 1e6,
            temperature,
        );
        Self {
            density,
            viscosity: density * kinematic * 1e-6,
            bulk_modulus: number(&oil["bulk_modulus"], f64::INFINITY),
            air_fraction: number(&oil["air_fraction"], 0.0),
            air_exponent: number(&oil["air_exponent"], 1.4),
        }
    }

    // H. E. Merritt, Hydraulic Control Systems, 1967 (from memory): 1/β_e = 1/β + x/(κ p); the fraction is stated
    // at the atmosphere, so that x = x₀ p_atm/p.
    fn compressibility(&self, pressure: f64) -> f64 {
        1.0 / self.bulk_modulus + self.air_fraction * ATMOSPHERE / (self.air_exponent * pressure * pressure)
    }
}

// Walther's line through both stated viscosities, in decimal logarithms as ASTM D341 writes it (from memory).
fn viscosity(cold: f64, hot: f64, temperature: f64) -> f64 {
    let ordinate = |viscosity: f64| (viscosity + 0.7).log10().log10();
    let share = (temperature.log10() - 313.15_f64.log10()) / (373.15_f64.log10() - 313.15_f64.log10());
    let at = ordinate(cold) + share * (ordinate(hot) - ordinate(cold));
    10_f64.powf(10_f64.powf(at)) - 0.7
}

/// Gas volume at system pressure of an ideal gas charged at 293.15 K unless said otherwise.
pub(crate) fn gas_volume(accumulator: &Value, pressure: f64, temperature: f64) -> f64 {
    let charged_at = number(&accumulator["precharge_temperature"], 293.15);
    let precharge = accumulator["precharge"].as_f64().unwrap() * temperature / charged_at;
    accumulator["gas_volume"].as_f64().unwrap_or_else(|| accumulator["volume"].as_f64().unwrap() * precharge / pressure)
}

fn gas_compliance(accumulator: &Value, pressure: f64, temperature: f64) -> f64 {
    gas_volume(accumulator, pressure, temperature) / (number(&accumulator["exponent"], 1.4) * pressure)
}

// Corner, signed area at the wheel and oil at mid-stroke of a chamber such as `front_left_bump`.
fn chamber(car: &Value, key: &str) -> (usize, f64, f64) {
    let index = 2 * usize::from(key.starts_with("rear")) + usize::from(key.contains("right"));
    let cylinder = &corner(car, index)["cylinder"];
    let round = |diameter: &Value| std::f64::consts::PI * diameter.as_f64().unwrap().powi(2) / 4.0;
    let bump = key.ends_with("bump");
    let area = round(&cylinder["bore"]) - if bump { 0.0 } else { round(&cylinder["rod"]) };
    let volume = area * number(&cylinder["stroke"], 0.0) / 2.0;
    (index, area * number(&cylinder["motion_ratio"], 1.0) * if bump { 1.0 } else { -1.0 }, volume)
}

/// Wheel and signed area of a chamber, +A·MR where bump squeezes it.
pub(crate) fn signed_area(car: &Value, key: &str) -> (usize, f64) {
    let (wheel, area, _) = chamber(car, key);
    (wheel, area)
}

/// Circuits of a car, a layout written out.
pub(crate) fn circuits(car: &Value) -> Vec<Value> {
    let Some(layout) = car.get("layout") else {
        return car["circuits"].as_object().into_iter().flat_map(|all| all.values().cloned()).collect();
    };
    plan(layout["kind"].as_str().unwrap())
        .into_iter()
        .map(|chambers| {
            let mut circuit = layout.clone();
            circuit["chambers"] = chambers
                .into_iter()
                .map(|key| {
                    let port = key.replace("_left", "").replace("_right", "");
                    (key, layout.get("ports").and_then(|ports| ports.get(port)).cloned().unwrap_or(json!({})))
                })
                .collect();
            circuit
        })
        .collect()
}

// Which chambers share a circuit: each row of a circuit is a wheel and the side of its piston.
fn plan(kind: &str) -> Vec<Vec<String>> {
    let [fl, fr, rl, rr] = ["front_left", "front_right", "rear_left", "rear_right"];
    let join = |bump: &[&str], rebound: &[&str]| {
        let bump = bump.iter().map(|wheel| format!("{wheel}_bump"));
        bump.chain(rebound.iter().map(|wheel| format!("{wheel}_rebound"))).collect()
    };
    match kind {
        "roll" => vec![join(&[fl, rl], &[fr, rr]), join(&[fr, rr], &[fl, rl])],
        "pitch" => vec![join(&[fl, fr], &[rl, rr]), join(&[rl, rr], &[fl, fr])],
        "diagonal" => vec![join(&[fl], &[rr]), join(&[fr], &[rl]), join(&[rl], &[fr]), join(&[rr], &[fl])],
        "heave" => vec![join(&[fl, fr, rl, rr], &[]), join(&[], &[fl, fr, rl, rr])],
        "axle_roll" => vec![join(&[fl], &[fr]), join(&[fr], &[fl]), join(&[rl], &[rr]), join(&[rr], &[rl])],
        other => panic!("no layout {other}"),
    }
}
