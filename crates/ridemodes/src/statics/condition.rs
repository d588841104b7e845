//! What the vehicle stands under.

use std::collections::BTreeMap;

use serde::{Deserialize, Serialize};

use crate::axes::CORNERS;
use crate::error::{Result, Violation, refuse};
use crate::spec::{Slot, nearest};
use crate::units::STANDARD_GRAVITY;
use crate::vehicle::{Quantity, Vehicle};

/// A point mass carried by the body.
#[derive(Clone, Copy, Debug, Default, PartialEq, Serialize, Deserialize)]
pub struct Payload {
    /// Mass [kg].
    pub mass: f64,
    /// Ahead of the body's centre of gravity [m].
    pub x: f64,
    /// To the left of the body's centre of gravity [m].
    pub y: f64,
    /// Above the body's centre of gravity [m].
    pub z: f64,
}

/// Something that has failed. It changes the data the state is solved from.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub enum Fault {
    /// A line of the circuit has burst: its oil is at the pressure of the air.
    Burst(String),
    /// The accumulator has lost its charge: oil fills it, and nothing gives.
    LostPrecharge(String),
    /// The way (a port, an accumulator's, a line; by its path) is shut.
    Closed(String),
    /// The oil carries this much entrained air, volume per volume at the atmosphere.
    Air(f64),
    /// Years of service without a check of the charge, at each accumulator's yearly loss.
    Years(f64),
}

impl Fault {
    /// The fault in words.
    pub fn name(&self) -> String {
        match self {
            Self::Burst(circuit) => format!("burst line in {circuit}"),
            Self::LostPrecharge(accumulator) => format!("lost precharge of {accumulator}"),
            Self::Closed(way) => format!("{way} closed"),
            Self::Air(fraction) => format!("{} % air in the oil", 100.0 * fraction),
            Self::Years(years) => format!("{years} years of permeation"),
        }
    }
}

/// What the vehicle stands under; by default the design condition.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
pub struct Condition {
    /// Acceleration to the left [m/s²].
    pub lateral: f64,
    /// Acceleration forward [m/s²].
    pub longitudinal: f64,
    /// Acceleration upwards, added to gravity [m/s²].
    pub vertical: f64,
    /// Temperature of gas and oil; `None` for that of the design condition [K].
    pub temperature: Option<f64>,
    /// Point masses carried.
    pub payload: Vec<Payload>,
    /// Height of the ground under each wheel [m].
    pub heights: [f64; 4],
    /// Aerodynamic load front and rear, downwards [N].
    pub downforce: [f64; 2],
    /// Slope of the ground across, left side higher [rad].
    pub side_slope: f64,
    /// Slope of the ground ahead, uphill [rad].
    pub grade: f64,
    /// Lift of the spring seats, which compresses the springs [m of spring travel].
    pub spring_seat: [f64; 4],
    /// Oil volume added to circuits by name; springs are held, the height follows [m³].
    pub oil: BTreeMap<String, f64>,
    /// Pressure that circuits are brought to; springs are held, height and oil volume follow [Pa].
    pub pressure: BTreeMap<String, f64>,
    /// Whether every circuit is levelled: its chambers hold their design volume, the oil that takes is found.
    pub levelled: bool,
    /// What has failed.
    pub faults: Vec<Fault>,
    /// Whether the gas exchanges no heat on the way from the standing vehicle (without accelerations, heights and
    /// aerodynamic load) to this state.
    pub fast: bool,
}

impl Condition {
    /// The standing vehicle that a fast state starts from.
    pub(crate) fn standing(&self) -> Self {
        Self {
            lateral: 0.0,
            longitudinal: 0.0,
            vertical: 0.0,
            heights: [0.0; 4],
            downforce: [0.0; 2],
            side_slope: 0.0,
            grade: 0.0,
            fast: false,
            ..self.clone()
        }
    }

    /// Part of the way from the design condition; pressures and charges are the solver's to ramp.
    pub(crate) fn part(&self, share: f64, design_temperature: f64) -> Self {
        let mut part = self.clone();
        for value in
            [&mut part.lateral, &mut part.longitudinal, &mut part.vertical, &mut part.side_slope, &mut part.grade]
                .into_iter()
                .chain(part.heights.iter_mut())
                .chain(part.downforce.iter_mut())
                .chain(part.spring_seat.iter_mut())
                .chain(part.oil.values_mut())
                .chain(part.payload.iter_mut().map(|payload| &mut payload.mass))
        {
            *value *= share;
        }
        part.temperature =
            self.temperature.map(|temperature| design_temperature + share * (temperature - design_temperature));
        part
    }

    /// Lateral acceleration with the ground's slope [m/s²].
    pub(crate) fn across(&self) -> f64 {
        self.lateral + STANDARD_GRAVITY * self.side_slope.sin()
    }

    /// Longitudinal acceleration with the ground's slope [m/s²].
    pub(crate) fn ahead(&self) -> f64 {
        self.longitudinal + STANDARD_GRAVITY * self.grade.sin()
    }

    /// Weight per mass [m/s²].
    pub(crate) fn weight(&self) -> f64 {
        STANDARD_GRAVITY * self.side_slope.cos() * self.grade.cos() + self.vertical
    }

    /// Every number and name is one that a state can be solved for, or all that is wrong.
    pub(crate) fn check(&self, vehicle: &Vehicle) -> Result<()> {
        let mut violations = Vec::new();
        let mut bounded = |path: String, value: f64, unit: &'static str, [least, most]: [f64; 2]| {
            if !(value >= least && value <= most) {
                let rule = format!("must be at least {least} and at most {most}");
                violations.push(Violation::new(path, value.to_string(), rule).unit(unit));
            }
        };
        bounded("lateral".into(), self.lateral, "m/s^2", [-100.0, 100.0]);
        bounded("longitudinal".into(), self.longitudinal, "m/s^2", [-100.0, 100.0]);
        bounded("vertical".into(), self.vertical, "m/s^2", [-500.0, 500.0]);
        bounded("side_slope".into(), self.side_slope, "rad", [-1.5, 1.5]);
        bounded("grade".into(), self.grade, "rad", [-1.5, 1.5]);
        if let Some(temperature) = self.temperature {
            bounded("temperature".into(), temperature, "K", [200.0, 450.0]);
        }
        for corner in CORNERS {
            bounded(format!("heights.{}", corner.name()), self.heights[corner.index()], "m", [-2.0, 2.0]);
            bounded(format!("spring_seat.{}", corner.name()), self.spring_seat[corner.index()], "m", [-2.0, 2.0]);
        }
        for (axle, load) in ["front", "rear"].iter().zip(self.downforce) {
            bounded(format!("downforce.{axle}"), load, "N", [-1e6, 1e6]);
        }
        for (place, payload) in self.payload.iter().enumerate() {
            bounded(format!("payload.{place}.mass"), payload.mass, "kg", [0.0, 1e5]);
            for (name, value) in [("x", payload.x), ("y", payload.y), ("z", payload.z)] {
                bounded(format!("payload.{place}.{name}"), value, "m", [-50.0, 50.0]);
            }
        }
        for (circuit, volume) in &self.oil {
            bounded(format!("oil.{circuit}"), *volume, "m^3", [-1.0, 1.0]);
        }
        for (circuit, pressure) in &self.pressure {
            bounded(format!("pressure.{circuit}"), *pressure, "Pa", [1e3, 1e9]);
        }
        for fault in &self.faults {
            match fault {
                Fault::Air(fraction) => bounded("fault.air".into(), *fraction, "1", [0.0, 0.5]),
                Fault::Years(years) => bounded("fault.years".into(), *years, "1", [0.0, 1000.0]),
                _ => {}
            }
        }
        violations.extend(self.unknown_names(vehicle));
        if self.levelled && !self.pressure.is_empty() {
            violations.push(
                Violation::new("pressure", "", "stands beside levelled")
                    .hint("levelling finds the pressures; give one"),
            );
        }
        refuse(violations)
    }

    fn unknown_names(&self, vehicle: &Vehicle) -> Vec<Violation> {
        let circuits = vehicle.circuits();
        let network = &vehicle.structure().network;
        let accumulators: Vec<&str> = network.accumulators.iter().map(|one| short(&one.name)).collect();
        let ways: Vec<&str> = network.ways.iter().map(|way| &*way.name).collect();
        let mut named: Vec<(String, &str, &[&str], &str)> = Vec::new();
        for circuit in self.oil.keys() {
            named.push((format!("oil.{circuit}"), circuit, &circuits, "no such circuit"));
        }
        for circuit in self.pressure.keys() {
            named.push((format!("pressure.{circuit}"), circuit, &circuits, "no such circuit"));
        }
        for fault in &self.faults {
            match fault {
                Fault::Burst(circuit) => named.push(("fault.burst".into(), circuit, &circuits, "no such circuit")),
                Fault::LostPrecharge(one) => {
                    named.push(("fault.lost_precharge".into(), short(one), &accumulators, "no such accumulator"));
                }
                Fault::Closed(way) => named.push(("fault.closed".into(), way, &ways, "no such way")),
                Fault::Air(_) | Fault::Years(_) => {}
            }
        }
        named
            .into_iter()
            .filter(|(_, name, known, _)| !known.contains(name))
            .map(|(path, name, known, rule)| {
                let hint = if known.is_empty() { "there is none".into() } else { nearest(name, known.iter().copied()) };
                Violation::new(path, format!("\"{name}\""), rule).hint(hint)
            })
            .collect()
    }

    /// The vehicle with the numbers that faults change, and the share of its charge each accumulator keeps.
    pub(crate) fn faulty(&self, vehicle: &Vehicle) -> Result<(Vehicle, Vec<f64>)> {
        let network = &vehicle.structure().network;
        let mut charge = vec![1.0; network.accumulators.len()];
        let mut car = vehicle.clone();
        for fault in &self.faults {
            match fault {
                Fault::Burst(_) => {}
                Fault::LostPrecharge(name) => {
                    for (share, one) in charge.iter_mut().zip(&network.accumulators) {
                        if short(&one.name) == short(name) {
                            *share = 0.0;
                        }
                    }
                }
                Fault::Closed(way) => {
                    car = car.with_flag(&format!("{way}.closed"))?;
                }
                Fault::Air(fraction) => car = car.with_values([("oil.air_fraction", Quantity::Number(*fraction))])?,
                Fault::Years(years) => {
                    for (share, one) in charge.iter_mut().zip(&network.accumulators) {
                        *share *= (1.0 - vehicle.numbers()[one.yearly_loss.0]).powf(*years);
                    }
                }
            }
        }
        Ok((car, charge))
    }

    /// Pressures that circuits are held at, by name.
    pub(crate) fn held(&self, atmosphere: f64) -> BTreeMap<&str, f64> {
        let mut held: BTreeMap<&str, f64> =
            self.pressure.iter().map(|(name, pressure)| (name.as_str(), *pressure)).collect();
        for fault in &self.faults {
            if let Fault::Burst(circuit) = fault {
                held.insert(circuit, atmosphere);
            }
        }
        held
    }

    /// Whether a line of the circuit has burst.
    pub(crate) fn is_burst(&self, circuit: &str) -> bool {
        self.faults.iter().any(|fault| matches!(fault, Fault::Burst(name) if name == circuit))
    }

    /// A load case of the file.
    pub(crate) fn of_case(vehicle: &Vehicle, name: &str) -> Result<Self> {
        let cases = &vehicle.spec().cases.0;
        let Some(case) = cases.get(name) else {
            let hint = if cases.is_empty() {
                "the file has none".to_owned()
            } else {
                nearest(name, cases.keys().map(String::as_str))
            };
            return refuse(vec![Violation::new(format!("cases.{name}"), "", "no such load case").hint(hint)])
                .map(|()| Self::default());
        };
        let value = |slot: Slot| vehicle.numbers()[slot.0];
        Ok(Self {
            lateral: value(case.lateral),
            longitudinal: value(case.longitudinal),
            vertical: value(case.vertical),
            temperature: case.temperature.map(value),
            payload: case
                .payload
                .0
                .values()
                .map(|one| Payload { mass: value(one.mass), x: value(one.x), y: value(one.y), z: value(one.z) })
                .collect(),
            heights: [case.front_left, case.front_right, case.rear_left, case.rear_right].map(value),
            downforce: [case.downforce_front, case.downforce_rear].map(value),
            side_slope: value(case.side_slope),
            grade: value(case.grade),
            fast: value(case.fast.0) == 1.0,
            ..Self::default()
        })
    }

    /// The condition in words, for headings.
    pub(crate) fn words(&self) -> String {
        if self.is_design() {
            return "at the design condition".into();
        }
        let mut words = Vec::new();
        for (name, value, unit) in [
            ("lateral", self.lateral, "m/s²"),
            ("longitudinal", self.longitudinal, "m/s²"),
            ("vertical", self.vertical, "m/s²"),
            ("side slope", self.side_slope.to_degrees(), "deg"),
            ("grade", self.grade.to_degrees(), "deg"),
        ] {
            if value != 0.0 {
                words.push(format!("{name} {value:.3} {unit}"));
            }
        }
        if let Some(temperature) = self.temperature {
            words.push(format!("{:.1} °C", temperature - 273.15));
        }
        let mass: f64 = self.payload.iter().map(|payload| payload.mass).sum();
        if mass != 0.0 {
            words.push(format!("{mass:.0} kg payload"));
        }
        if self.heights != [0.0; 4] {
            words.push(format!("ground {} mm", self.heights.map(|h| format!("{:.1}", 1e3 * h)).join(" ")));
        }
        if self.downforce != [0.0; 2] {
            words.push(format!("downforce {} N", self.downforce.map(|load| format!("{load:.0}")).join(" ")));
        }
        if self.spring_seat != [0.0; 4] {
            words.push("spring seats moved".into());
        }
        words.extend(self.oil.iter().map(|(name, volume)| format!("{:.1} cm³ added to {name}", 1e6 * volume)));
        words.extend(self.pressure.iter().map(|(name, pressure)| format!("{name} at {:.2} bar abs", pressure / 1e5)));
        if self.levelled {
            words.push("levelled".into());
        }
        words.extend(self.faults.iter().map(Fault::name));
        if self.fast {
            words.push("fast".into());
        }
        format!("under {}", words.join(", "))
    }

    /// Whether nothing departs from the design condition.
    pub(crate) fn is_design(&self) -> bool {
        *self == Self::default() || *self == Self { fast: true, ..Self::default() }
    }
}

/// An accumulator's name as people say it, `left.main` of `circuits.left.accumulators.main`.
pub(crate) fn short(name: &str) -> &str {
    name.strip_prefix("circuits.").unwrap_or(name)
}
