//! The oil of a car by nodal impedance, worked out from its data alone.
//!
//! Every hub, node, chamber and accumulator is a node; D(s) = Bᵀ [s C + N (R + sI)⁻¹ Nᵀ]⁻¹ s B.

use std::collections::HashMap;

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
    /// Nodes that ideal pipes make one.
    joined: Vec<(usize, usize)>,
}

impl Oil {
    pub(crate) fn new(car: &Value) -> Self {
        let mut oil = Self {
            areas: Vec::new(),
            compliance: Vec::new(),
            circuit: Vec::new(),
            lines: Vec::new(),
            joined: Vec::new(),
        };
        let fluid = Fluid::new(car);
        let all = named_circuits(car);
        let mut places = HashMap::new();
        for (index, (name, circuit)) in all.iter().enumerate() {
            let hub = oil.node(index, own_store(circuit, fluid.compressibility(pressure(circuit))));
            places.insert(name.clone(), (hub, pressure(circuit)));
        }
        for (name, node) in car["nodes"].as_object().into_iter().flatten() {
            let (hub, pressure) = places[node["circuit"].as_str().unwrap()];
            let own = oil.node(oil.circuit[hub], own_store(node, fluid.compressibility(pressure)));
            places.insert(name.clone(), (own, pressure));
        }
        for (name, circuit) in &all {
            oil.add_circuit(car, &fluid, places[name].0, circuit, &places);
        }
        for line in car["lines"].as_object().into_iter().flat_map(|lines| lines.values()) {
            let ((from, pressure), (to, _)) =
                (places[line["from"].as_str().unwrap()], places[line["to"].as_str().unwrap()]);
            oil.connect(&fluid, fluid.compressibility(pressure), from, to, line, line);
        }
        oil
    }

    fn add_circuit(
        &mut self,
        car: &Value,
        fluid: &Fluid,
        hub: usize,
        circuit: &Value,
        places: &HashMap<String, (usize, f64)>,
    ) {
        let pressure = circuit["pressure"].as_f64().unwrap();
        let compressibility = fluid.compressibility(pressure);
        for (key, way) in circuit["chambers"].as_object().unwrap() {
            let node = self.way(fluid, compressibility, hub, way);
            let (corner_index, area, volume) = chamber(car, key);
            self.areas[node][corner_index] += area;
            self.compliance[node] += volume * compressibility;
            let cylinder = &corner(car, corner_index)["cylinder"];
            if cylinder["kind"] == "piston_valve" {
                let other = self.node(self.circuit[hub], 0.0);
                let (_, area, volume) = chamber(car, &key.replace("bump", "rebound"));
                self.areas[other][corner_index] += area;
                self.compliance[other] += volume * compressibility;
                let passage = json!({ "throttle": cylinder["piston_throttle"] });
                self.connect(fluid, compressibility, node, other, &passage, &Value::Null);
            }
        }
        for accumulator in circuit["accumulators"].as_object().into_iter().flat_map(|all| all.values()) {
            let at = accumulator["node"].as_str().map_or(hub, |name| places[name].0);
            let node = self.way(fluid, compressibility, at, accumulator);
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
        let to = self.node(self.circuit[hub], 0.0);
        self.connect(fluid, compressibility, hub, to, way, &way["line"]);
        match self.joined.last() {
            Some(&(_, last)) if last == to => {
                // Nothing between: one node.
                self.joined.pop();
                self.areas.pop();
                self.compliance.pop();
                self.circuit.pop();
                hub
            }
            _ => to,
        }
    }

    fn connect(&mut self, fluid: &Fluid, compressibility: f64, from: usize, to: usize, way: &Value, pipe: &Value) {
        let throttle = number(&way["throttle"], 0.0)
            + way.get("valve").map_or(0.0, |valve| valve_resistance(valve, fluid.density));
        let (mut resistance, mut inertance, mut store) = (0.0, 0.0, 0.0);
        if let (Some(length), Some(bore)) = (pipe["length"].as_f64(), pipe["bore"].as_f64()) {
            let area = std::f64::consts::PI * bore * bore / 4.0;
            // Hagen–Poiseuille
            resistance = 128.0 * fluid.viscosity * length / (std::f64::consts::PI * bore.powi(4));
            inertance = fluid.density * length / area
                * match pipe["inertia"].as_str() {
                    Some("none") => 0.0,
                    Some("developed") => 4.0 / 3.0,
                    _ => 1.0,
                };
            store = length * area * compressibility + number(&pipe["swell"], 0.0) * length;
        } else if let Some(volume) = pipe["volume"].as_f64() {
            resistance = number(&pipe["resistance"], 0.0);
            inertance = number(&pipe["inertance"], 0.0);
            store = volume * compressibility + number(&pipe["compliance"], 0.0);
        }
        let pieces = pipe["pieces"].as_u64().unwrap_or(1);
        let share = 1.0 / pieces as f64;
        let mut here = from;
        for piece in 0..pieces {
            let next = if piece + 1 == pieces { to } else { self.node(self.circuit[from], 0.0) };
            for end in [here, next] {
                self.compliance[end] += 0.5 * share * store;
            }
            let head = if piece == 0 { throttle } else { 0.0 };
            let line =
                Line { from: here, to: next, resistance: head + resistance * share, inertance: inertance * share };
            if line.resistance == 0.0 && line.inertance == 0.0 {
                self.joined.push((here, next));
            } else {
                self.lines.push(line);
            }
            here = next;
        }
    }

    // The first of the nodes that are one with each.
    fn merged(&self, joined: impl Iterator<Item = (usize, usize)>) -> Vec<usize> {
        let mut first: Vec<usize> = (0..self.areas.len()).collect();
        for (a, b) in joined {
            let (a, b) = (first[a].min(first[b]), first[a].max(first[b]));
            first.iter_mut().filter(|place| **place == b).for_each(|place| *place = a);
        }
        first
    }

    /// K_hyd(0) = Σ b bᵀ/ΣC over the circuits, b the sum of B's rows.
    pub(crate) fn quasi_static(&self) -> Matrix4<f64> {
        let lines = self.lines.iter().map(|line| (line.from, line.to));
        let region = self.merged(lines.chain(self.joined.iter().copied()));
        let mut total = Matrix4::zeros();
        for first in (0..self.areas.len()).filter(|&node| region[node] == node) {
            let nodes = (0..self.areas.len()).filter(|&node| region[node] == first);
            let (area, compliance) = nodes.fold((RowVector4::zeros(), 0.0), |(area, compliance), node| {
                (area + self.areas[node], compliance + self.compliance[node])
            });
            if compliance > 0.0 {
                total += area.transpose() * area / compliance;
            }
        }
        total
    }

    /// D(s) for s ≠ 0 as written above. Where s C is small beside 1/(R + sI) it loses digits.
    pub(crate) fn impedance(&self, s: Complex64) -> Matrix4<Complex64> {
        let one = self.merged(self.joined.iter().copied());
        let mut firsts = one.clone();
        firsts.sort_unstable();
        firsts.dedup();
        let place = |node: usize| firsts.binary_search(&one[node]).unwrap();
        let count = firsts.len();
        let mut admittance = DMatrix::zeros(count, count);
        let mut areas = DMatrix::zeros(count, 4);
        for node in 0..self.areas.len() {
            admittance[(place(node), place(node))] += s * self.compliance[node];
            for wheel in 0..4 {
                areas[(place(node), wheel)] += Complex64::from(self.areas[node][wheel]);
            }
        }
        for line in &self.lines {
            let flow = 1.0 / (line.resistance + s * line.inertance);
            for (node, sign) in [(line.from, -1.0), (line.to, 1.0)] {
                admittance[(place(node), place(line.from))] -= flow * sign;
                admittance[(place(node), place(line.to))] += flow * sign;
            }
        }
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

    /// Largest admittance of a line over what a node stores at this rate.
    pub(crate) fn stiffness_ratio(&self, omega: f64) -> f64 {
        let most =
            self.lines.iter().map(|line| 1.0 / line.resistance.hypot(omega * line.inertance)).fold(0.0, f64::max);
        let least = self.compliance.iter().copied().filter(|c| *c > 0.0).fold(f64::INFINITY, f64::min);
        most / (omega * least)
    }

    /// Closed loops: lines beyond a spanning forest.
    pub(crate) fn loops(&self) -> usize {
        let one = self.merged(self.joined.iter().copied());
        let lines = self.lines.iter().map(|line| (line.from, line.to));
        let region = self.merged(lines.chain(self.joined.iter().copied()));
        let count = |first: &[usize]| (0..first.len()).filter(|&node| first[node] == node).count();
        self.lines.len() + count(&region) - count(&one)
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
    let full = bump && cylinder["kind"] != "through_rod";
    let area = round(&cylinder["bore"]) - if full { 0.0 } else { round(&cylinder["rod"]) };
    let volume = area * number(&cylinder["stroke"], 0.0) / 2.0;
    (index, area * number(&cylinder["motion_ratio"], 1.0) * if bump { 1.0 } else { -1.0 }, volume)
}

/// Wheel and signed area of a chamber, +A·MR where bump squeezes it.
pub(crate) fn signed_area(car: &Value, key: &str) -> (usize, f64) {
    let (wheel, area, _) = chamber(car, key);
    (wheel, area)
}

fn pressure(circuit: &Value) -> f64 {
    circuit["pressure"].as_f64().unwrap()
}

// Oil and hoses at a hub or node.
fn own_store(place: &Value, compressibility: f64) -> f64 {
    number(&place["volume"], 0.0) * compressibility + number(&place["compliance"], 0.0)
}

// E[Δp Q]/E[Q²] by quadrature over the Gaussian density or the sine.
fn valve_resistance(valve: &Value, density: f64) -> f64 {
    let field = |name: &str| number(&valve[name], 0.0);
    let drop = |flow: f64| match valve["kind"].as_str().unwrap() {
        "check" => {
            let (throttle, open, cracks) = (field("throttle"), field("open_resistance"), field("cracking_pressure"));
            // Forward, the check valve carries what the throttle does not: Q = Δp/R_t + (Δp − p_c)/R_o.
            if flow > cracks / throttle {
                (flow + cracks / open) / (1.0 / throttle + 1.0 / open)
            } else {
                throttle * flow
            }
        }
        "split" => flow * if flow > 0.0 { field("forward") } else { field("backward") },
        "table" => {
            let list = |name: &str| -> Vec<f64> {
                valve[name].as_array().unwrap().iter().map(|x| x.as_f64().unwrap()).collect()
            };
            let (x, y) = (list("flow"), list("pressure_drop"));
            let k = x.iter().rposition(|&x| x <= flow.abs()).unwrap().min(x.len() - 2);
            flow.signum() * (y[k] + (y[k + 1] - y[k]) / (x[k + 1] - x[k]) * (flow.abs() - x[k]))
        }
        _ => {
            let area = 0.611 * std::f64::consts::PI * field("diameter").powi(2) / 4.0;
            0.5 * density * flow * flow.abs() / (area * area)
        }
    };
    // Simpson's rule between the kinks, over the Gaussian density or a half period of the sine.
    let sigma = field("amplitude");
    let mut kinks = vec![0.0, field("cracking_pressure") / field("throttle").max(1.0)];
    for flow in valve["flow"].as_array().into_iter().flatten().filter_map(Value::as_f64) {
        kinks.extend([flow, -flow]);
    }
    let harmonic = valve["motion"] == "harmonic";
    let peak = sigma * 2.0_f64.sqrt();
    let end = if harmonic { std::f64::consts::FRAC_PI_2 } else { 9.0 };
    let place =
        |flow: f64| if harmonic { (flow / peak).clamp(-1.0, 1.0).asin() } else { (flow / sigma).clamp(-9.0, 9.0) };
    let mut places: Vec<f64> = kinks.into_iter().map(place).chain([-end, end]).collect();
    places.sort_by(f64::total_cmp);
    let integral = |part: &dyn Fn(f64) -> f64| -> f64 {
        let at = |x: f64| {
            if harmonic { part(peak * x.sin()) } else { part(sigma * x) * (-0.5 * x * x).exp() }
        };
        let pieces = places.windows(2).filter(|pair| pair[1] > pair[0]);
        pieces
            .map(|pair| {
                let n = 1000;
                let h = (pair[1] - pair[0]) / f64::from(n);
                let weight = |k: i32| if k == 0 || k == n { 1.0 } else { 2.0 + 2.0 * f64::from(k % 2) };
                // The kinks themselves belong to either side.
                let inside = |k: i32| (pair[0] + h * f64::from(k)).clamp(pair[0] + 1e-14, pair[1] - 1e-14);
                (0..=n).map(|k| weight(k) * at(inside(k))).sum::<f64>() * h / 3.0
            })
            .sum()
    };
    integral(&|flow| drop(flow) * flow) / integral(&|flow| flow * flow)
}

/// Circuits of a car, a layout written out.
pub(crate) fn circuits(car: &Value) -> Vec<Value> {
    named_circuits(car).into_iter().map(|(_, circuit)| circuit).collect()
}

// Which circuit a layout gives a chamber to is known by the chamber that bump squeezes.
fn name_of(kind: &str, index: usize) -> &'static str {
    match kind {
        "roll" => ["left", "right"][index],
        "pitch" => ["front", "rear"][index],
        "heave" => ["bump", "rebound"][index],
        _ => ["front_left", "front_right", "rear_left", "rear_right"][index],
    }
}

fn named_circuits(car: &Value) -> Vec<(String, Value)> {
    let Some(layout) = car.get("layout") else {
        return car["circuits"].as_object().into_iter().flatten().map(|(name, c)| (name.clone(), c.clone())).collect();
    };
    let kind = layout["kind"].as_str().unwrap();
    plan(kind)
        .into_iter()
        .enumerate()
        .map(|(index, chambers)| {
            let mut circuit = layout.clone();
            circuit["chambers"] = chambers
                .into_iter()
                .filter(|key| {
                    let index = 2 * usize::from(key.starts_with("rear")) + usize::from(key.contains("right"));
                    let kind = &corner(car, index)["cylinder"]["kind"];
                    key.ends_with("bump") || !(kind == "single_acting" || kind == "piston_valve")
                })
                .map(|key| {
                    let port = key.replace("_left", "").replace("_right", "");
                    (key, layout.get("ports").and_then(|ports| ports.get(port)).cloned().unwrap_or(json!({})))
                })
                .collect();
            (name_of(kind, index).to_owned(), circuit)
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
