//! Random cars, all of them valid.

use proptest::collection::vec;
use proptest::prelude::*;
use serde_json::{Value, json};

/// What a random car may hold.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Wanted {
    /// Left and right alike, no product of inertia.
    pub(crate) symmetric: bool,
    /// Oil: never, or in every car.
    pub(crate) oil: bool,
    /// Every node of the oil has compliance of its own.
    pub(crate) compressible: bool,
    /// Lines may have inertance.
    pub(crate) inertance: bool,
    /// Nodes and lines beside the circuits, valves, links, friction, cylinders of any kind.
    pub(crate) network: bool,
}

pub(crate) const ANY: Wanted =
    Wanted { symmetric: false, oil: true, compressible: false, inertance: true, network: false };
pub(crate) const COMPRESSIBLE: Wanted = Wanted { compressible: true, ..ANY };
pub(crate) const SYMMETRIC: Wanted = Wanted { symmetric: true, ..ANY };
pub(crate) const NETWORK: Wanted = Wanted { network: true, ..ANY };
pub(crate) const DRY: Wanted = Wanted { oil: false, ..ANY };

const KINDS: [&str; 6] = ["roll", "pitch", "diagonal", "heave", "axle_roll", "one by one"];

/// Cars as data in SI.
pub(crate) fn cars(wanted: Wanted) -> impl Strategy<Value = Value> {
    vec(0.0..1.0, 400).prop_map(move |rolls| Dice { rolls, next: 0 }.car(wanted))
}

// Numbers between 0 and 1, taken one after the other.
struct Dice {
    rolls: Vec<f64>,
    next: usize,
}

impl Dice {
    fn roll(&mut self) -> f64 {
        self.next += 1;
        self.rolls[(self.next - 1) % self.rolls.len()]
    }

    fn within(&mut self, least: f64, most: f64) -> f64 {
        least + (most - least) * self.roll()
    }

    // Even over orders of magnitude.
    fn scale(&mut self, least: f64, most: f64) -> f64 {
        least * (most / least).powf(self.roll())
    }

    fn chance(&mut self, probability: f64) -> bool {
        self.roll() < probability
    }

    fn pick(&mut self, count: usize) -> usize {
        ((self.roll() * count as f64) as usize).min(count - 1)
    }

    fn car(mut self, wanted: Wanted) -> Value {
        let (roll, pitch) = (self.within(250.0, 700.0), self.within(900.0, 2500.0));
        let (front, rear) = (self.axle(wanted), self.axle(wanted));
        let mut car = json!({
            "body": {
                "mass": self.within(700.0, 2000.0), "roll_inertia": roll, "pitch_inertia": pitch, "cg_height": 0.5,
            },
            "front": front, "rear": rear,
        });
        if !wanted.symmetric {
            car["body"]["cg_offset"] = json!(self.within(-0.1, 0.1));
            car["body"]["roll_pitch_product"] = json!(self.within(-0.2, 0.2) * (roll * pitch).sqrt());
        }
        if wanted.oil {
            car["temperature"] = json!(self.within(263.0, 343.0));
            car["oil"] = self.oil(wanted);
            self.circuits(&mut car, wanted);
            if wanted.network {
                self.network(&mut car, wanted);
            }
        }
        car
    }

    fn axle(&mut self, wanted: Wanted) -> Value {
        let mut axle = json!({ "distance": self.within(1.0, 1.7), "track": self.within(1.3, 1.8) });
        if self.chance(0.5) {
            axle["anti_roll_bar"] = json!({ "rate": self.scale(1e3, 3e4) });
        }
        if wanted.symmetric || self.chance(0.3) {
            axle["both"] = self.corner(wanted);
        } else {
            axle["left"] = self.corner(wanted);
            axle["right"] = self.corner(wanted);
        }
        axle
    }

    fn corner(&mut self, wanted: Wanted) -> Value {
        let mut corner = json!({
            "unsprung_mass": self.within(25.0, 70.0),
            "tyre": { "rate": self.within(150e3, 320e3), "damping": self.within(0.0, 400.0) },
            "spring": { "rate": self.scale(8e3, 8e4), "motion_ratio": self.within(0.6, 1.1) },
            "damper": { "coefficient": self.scale(300.0, 5e3), "motion_ratio": self.within(0.6, 1.1) },
        });
        if self.chance(0.3) {
            corner["damper"]["mount_rate"] = json!(self.scale(1e5, 2e6));
        }
        if wanted.oil {
            let bore = self.within(0.02, 0.045);
            let stroke = if wanted.compressible || self.chance(0.5) { self.within(0.1, 0.25) } else { 0.0 };
            corner["cylinder"] = json!({
                "bore": bore, "rod": bore * self.within(0.3, 0.8), "motion_ratio": self.within(0.5, 1.1), "stroke": stroke,
            });
        }
        corner
    }

    fn oil(&mut self, wanted: Wanted) -> Value {
        let cold = self.scale(1e-5, 6e-5);
        let mut oil = json!({
            "density": self.within(800.0, 900.0), "kinematic_viscosity": cold,
            "kinematic_viscosity_hot": cold * self.within(0.15, 0.3), "air_fraction": 0.0,
        });
        if wanted.compressible || self.chance(0.6) {
            oil["bulk_modulus"] = json!(self.scale(0.8e9, 2e9));
        }
        if self.chance(0.4) {
            oil["air_fraction"] = json!(self.within(0.001, 0.02));
        }
        oil
    }

    // A layout by rule, or circuits one by one: each axle's bump chambers, each side's rebound chambers.
    fn circuits(&mut self, car: &mut Value, wanted: Wanted) {
        let kind = KINDS[self.pick(KINDS.len())];
        if kind != "one by one" {
            let ports: serde_json::Map<String, Value> = ["front_bump", "front_rebound", "rear_bump", "rear_rebound"]
                .map(|port| (port.to_owned(), self.way(wanted)))
                .into_iter()
                .collect();
            car["layout"] = self.hub(wanted);
            car["layout"]["kind"] = json!(kind);
            car["layout"]["ports"] = Value::Object(ports);
            return;
        }
        for (name, chambers) in [
            ("front", ["front_left_bump", "front_right_bump"]),
            ("left", ["front_left_rebound", "rear_left_rebound"]),
            ("rear", ["rear_left_bump", "rear_right_bump"]),
            ("right", ["front_right_rebound", "rear_right_rebound"]),
        ] {
            let mut circuit = match (name, wanted.symmetric) {
                ("right", true) => car["circuits"]["left"].clone(),
                _ => self.hub(wanted),
            };
            let way = self.way(wanted);
            let ways = if wanted.symmetric {
                // Like chambers left and right have like ways.
                match name {
                    "right" => {
                        let left = &car["circuits"]["left"]["chambers"];
                        [left["front_left_rebound"].clone(), left["rear_left_rebound"].clone()]
                    }
                    "left" => [way, self.way(wanted)],
                    _ => [way.clone(), way],
                }
            } else {
                [way, self.way(wanted)]
            };
            circuit["chambers"] = chambers.map(str::to_owned).into_iter().zip(ways).collect();
            car["circuits"][name] = circuit;
        }
    }

    // Nodes, and lines between whatever has one pressure; closed loops come by themselves.
    fn network(&mut self, car: &mut Value, wanted: Wanted) {
        let layout = car.get("layout").is_some();
        let names: Vec<String> = match car["layout"]["kind"].as_str() {
            None => car["circuits"].as_object().unwrap().keys().cloned().collect(),
            Some("roll") => ["left", "right"].map(str::to_owned).to_vec(),
            Some("pitch") => ["front", "rear"].map(str::to_owned).to_vec(),
            Some("heave") => ["bump", "rebound"].map(str::to_owned).to_vec(),
            Some(_) => ["front_left", "front_right", "rear_left", "rear_right"].map(str::to_owned).to_vec(),
        };
        let mut places: Vec<(String, String)> = names.iter().map(|name| (name.clone(), name.clone())).collect();
        let mut lines = serde_json::Map::new();
        for node in ["tee", "spur", "branch"].iter().take(self.pick(4)) {
            let circuit = names[self.pick(names.len())].clone();
            car["nodes"][*node] = json!({ "circuit": circuit });
            if wanted.compressible || self.chance(0.5) {
                car["nodes"][*node]["volume"] = json!(self.within(5e-6, 50e-6));
            }
            if self.chance(0.3) {
                car["nodes"][*node]["compliance"] = json!(self.scale(1e-14, 1e-12));
            }
            lines.insert(format!("to_{node}"), self.line(&circuit, node, wanted));
            if !layout && self.chance(0.5) {
                let gas = car["circuits"][&circuit]["accumulators"].as_object_mut().unwrap();
                gas.values_mut().next().unwrap()["node"] = json!(node);
            }
            places.push(((*node).to_owned(), circuit));
        }
        for k in 0..self.pick(4) {
            let (a, b) = (self.pick(places.len()), self.pick(places.len()));
            if a != b && (layout || places[a].1 == places[b].1) {
                lines.insert(format!("extra_{k}"), self.line(&places[a].0, &places[b].0, wanted));
            }
        }
        car["lines"] = Value::Object(lines);
        for name in ["heave", "twist"].iter().take(self.pick(3)) {
            let mut link = json!({ "front_left": 1.0 });
            for corner in ["front_right", "rear_left", "rear_right"] {
                link[corner] = json!(self.within(-1.0, 1.0));
            }
            for (field, least, most) in [("rate", 1e3, 5e4), ("damping", 1e2, 2e3), ("inertance", 1.0, 100.0)] {
                if self.chance(0.6) {
                    link[field] = json!(self.scale(least, most));
                }
            }
            car["links"][*name] = link;
        }
        for axle in ["front", "rear"] {
            for side in ["both", "left", "right"] {
                if let Some(corner) = car[axle].get_mut(side) {
                    self.parts(corner, layout && names[0] != "bump");
                }
            }
        }
    }

    fn line(&mut self, from: &str, to: &str, wanted: Wanted) -> Value {
        let mut line = json!({ "from": from, "to": to });
        let way = self.way(wanted);
        if let Some(throttle) = way.get("throttle") {
            line["throttle"] = throttle.clone();
        }
        for (key, value) in way["line"].as_object().into_iter().flatten() {
            line[key] = value.clone();
        }
        if line.get("length").is_some() {
            line["pieces"] = json!(1 + self.pick(3));
            if self.chance(0.4) {
                line["swell"] = json!(self.scale(1e-15, 1e-12));
            }
        } else if self.chance(0.3) {
            line["resistance"] = json!(self.scale(1e7, 1e9));
            line["inertance"] = json!(if wanted.inertance { self.scale(1e5, 1e7) } else { 0.0 });
            line["volume"] = json!(self.within(5e-6, 50e-6));
            line["compliance"] = json!(self.scale(1e-14, 1e-12));
        }
        if self.chance(0.3) {
            line["valve"] = self.valve();
        }
        line
    }

    fn valve(&mut self) -> Value {
        let mut valve = match self.pick(4) {
            0 => json!({ "kind": "check", "throttle": self.scale(1e8, 3e9), "open_resistance": self.scale(1e6, 1e8),
                         "cracking_pressure": self.within(0.0, 2e5) }),
            1 => json!({ "kind": "split", "forward": self.scale(1e7, 1e9), "backward": self.scale(1e7, 1e9) }),
            2 => json!({ "kind": "table", "flow": [0.0, 5e-5, 2e-4], "pressure_drop": [0.0, 2e5, 4e5] }),
            _ => json!({ "kind": "orifice", "diameter": self.within(1e-3, 4e-3) }),
        };
        valve["amplitude"] = json!(self.scale(1e-5, 3e-4));
        valve["motion"] = json!(["random", "harmonic"][self.pick(2)]);
        valve
    }

    fn parts(&mut self, corner: &mut Value, any_kind: bool) {
        if self.chance(0.4) {
            corner["damper"] = json!({
                "velocity": [-1.0, -0.1, 0.0, 0.1, 1.0], "force": [-2400.0, -500.0, 0.0, 300.0, 1200.0],
                "amplitude": self.scale(0.02, 0.5), "friction": self.within(0.0, 60.0),
            });
        }
        let kinds = ["double_acting", "through_rod", "single_acting", "piston_valve"];
        let kind = kinds[self.pick(if any_kind { 4 } else { 2 })];
        corner["cylinder"]["kind"] = json!(kind);
        if kind == "piston_valve" && self.chance(0.7) {
            corner["cylinder"]["piston_throttle"] = json!(self.scale(1e8, 3e9));
        }
        if self.chance(0.5) {
            corner["cylinder"]["friction"] = json!(self.within(10.0, 120.0));
            corner["cylinder"]["amplitude"] = json!(self.scale(0.02, 0.3));
        }
    }

    fn hub(&mut self, wanted: Wanted) -> Value {
        let pressure = self.scale(15e5, 120e5);
        let mut accumulators = serde_json::Map::new();
        for name in ["first", "second"].iter().take(1 + self.pick(2)) {
            let mut accumulator = self.way(wanted);
            // Charged at 293 K, still below the system pressure at 343 K.
            accumulator["precharge"] = json!(pressure * self.within(0.3, 0.8));
            accumulator["exponent"] = json!(self.within(1.0, 1.7));
            let given = if self.chance(0.5) { "volume" } else { "gas_volume" };
            accumulator[given] = json!(self.scale(0.1e-3, 1e-3));
            accumulators.insert((*name).to_owned(), accumulator);
        }
        let volume = if wanted.compressible || self.chance(0.5) { self.within(20e-6, 100e-6) } else { 0.0 };
        json!({ "pressure": pressure, "volume": volume, "accumulators": accumulators })
    }

    // Nothing, a throttle, a line, or both.
    fn way(&mut self, wanted: Wanted) -> Value {
        let mut way = json!({});
        let choice = self.pick(4);
        if choice % 2 == 1 {
            way["throttle"] = json!(self.scale(1e7, 3e9));
        }
        if choice >= 2 {
            let inertia = if wanted.inertance { ["plug", "developed", "none"][self.pick(3)] } else { "none" };
            way["line"] =
                json!({ "length": self.within(0.2, 3.0), "bore": self.within(0.006, 0.014), "inertia": inertia });
        }
        way
    }
}

/// The car seen in a mirror: left and right exchanged.
pub(crate) fn mirrored(car: &Value) -> Value {
    let mut other = car.clone();
    for key in ["cg_offset", "roll_pitch_product"] {
        let value = car["body"].get(key).and_then(Value::as_f64).unwrap_or(0.0);
        other["body"][key] = json!(-value);
    }
    for axle in ["front", "rear"] {
        if let (Some(left), Some(right)) = (car[axle].get("left"), car[axle].get("right")) {
            other[axle]["left"] = right.clone();
            other[axle]["right"] = left.clone();
        }
    }
    if let Some(circuits) = car.get("circuits").and_then(Value::as_object) {
        for (name, circuit) in circuits {
            let mut circuit = circuit.clone();
            let chambers = circuit["chambers"].as_object().unwrap();
            circuit["chambers"] = chambers.iter().map(|(key, way)| (swapped(key), way.clone())).collect();
            other["circuits"][swapped(name)] = circuit;
        }
    }
    other
}

fn swapped(name: &str) -> String {
    if name.contains("left") { name.replace("left", "right") } else { name.replace("right", "left") }
}
