//! One number or one load varied: the states it goes through.

use ndarray::Array2;
use serde::{Deserialize, Serialize};

use crate::axes::CORNERS;
use crate::error::{Error, Result, Violation, refuse};
use crate::spec::nearest;
use crate::statics::{Condition, OperatingPoint};
use crate::vehicle::Vehicle;

/// Keywords of [`Condition`] that a sweep takes, beside any path of the vehicle.
const KEYWORDS: [(&str, &str); 18] = [
    ("lateral", "m/s^2"),
    ("longitudinal", "m/s^2"),
    ("vertical", "m/s^2"),
    ("temperature", "K"),
    ("side_slope", "rad"),
    ("grade", "rad"),
    ("downforce.front", "N"),
    ("downforce.rear", "N"),
    ("heights.front_left", "m"),
    ("heights.front_right", "m"),
    ("heights.rear_left", "m"),
    ("heights.rear_right", "m"),
    ("heights.twist", "m"),
    ("spring_seat.front_left", "m"),
    ("spring_seat.front_right", "m"),
    ("spring_seat.rear_left", "m"),
    ("spring_seat.rear_right", "m"),
    ("payload.mass", "kg"),
];

/// States along a sweep, values as rows. Where a state does not settle its row is NaN and `status` says why.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct States {
    /// What is varied: a keyword of the condition or a path of the vehicle.
    pub path: String,
    /// Unit of the values.
    pub unit: String,
    /// Values [SI].
    pub values: Vec<f64>,
    /// Names of the circuits.
    pub circuits: Vec<String>,
    /// Heave [m], pitch [rad], roll [rad] (values × 3).
    pub attitude: Array2<f64>,
    /// Suspension deflections (values × 4) [m].
    pub deflection: Array2<f64>,
    /// Tyre loads (values × 4) [N].
    pub tyre_load: Array2<f64>,
    /// Pressures (values × circuits) [Pa].
    pub pressure: Array2<f64>,
    /// Gas volumes (values × circuits) [m³].
    pub gas_volume: Array2<f64>,
    /// Share of the lateral load transfer that the front axle takes (values); NaN without any.
    pub front_transfer: Vec<f64>,
    /// (FR + RL)/ΣF of the tyre loads (values).
    pub cross_weight: Vec<f64>,
    /// Roll per lateral acceleration at each state (values) [rad per m/s²].
    pub roll_gradient: Vec<f64>,
    /// Pitch per longitudinal acceleration at each state, nose down positive (values) [rad per m/s²].
    pub pitch_gradient: Vec<f64>,
    /// Pressure per lateral acceleration at each state (values × circuits) [Pa per m/s²].
    pub pressure_per_lateral: Array2<f64>,
    /// Names of the limits that are passed, at each value.
    pub passed: Vec<Vec<String>>,
    /// `solved`, or the name of the error, at each value.
    pub status: Vec<String>,
}

/// The vehicle and the condition with one of their numbers set.
pub(crate) fn varied(car: &Vehicle, base: &Condition, path: &str, value: f64) -> Result<(Vehicle, Condition)> {
    let mut condition = base.clone();
    let corner = |name: &str| CORNERS.iter().position(|corner| corner.name() == name);
    let place = match path.split_once('.') {
        None => match path {
            "lateral" => Some(&mut condition.lateral),
            "longitudinal" => Some(&mut condition.longitudinal),
            "vertical" => Some(&mut condition.vertical),
            "side_slope" => Some(&mut condition.side_slope),
            "grade" => Some(&mut condition.grade),
            "temperature" if car.value(path).is_ok() => {
                condition.temperature = Some(value);
                return Ok((car.clone(), condition));
            }
            _ => None,
        },
        Some(("downforce", "front")) => Some(&mut condition.downforce[0]),
        Some(("downforce", "rear")) => Some(&mut condition.downforce[1]),
        Some(("heights", "twist")) => {
            // h [1, −1, −1, 1]
            condition.heights = [value, -value, -value, value];
            return Ok((car.clone(), condition));
        }
        Some(("heights", name)) => corner(name).map(|i| &mut condition.heights[i]),
        Some(("spring_seat", name)) => corner(name).map(|i| &mut condition.spring_seat[i]),
        Some(("payload", "mass")) => {
            if condition.payload.is_empty() {
                condition.payload.push(Default::default());
            }
            Some(&mut condition.payload[0].mass)
        }
        Some(("oil", name)) => Some(condition.oil.entry(name.to_owned()).or_default()),
        Some(("pressure", name)) => Some(condition.pressure.entry(name.to_owned()).or_default()),
        Some(_) => None,
    };
    match place {
        Some(place) => {
            *place = value;
            Ok((car.clone(), condition))
        }
        None => match car.with_values([(path, value)]) {
            Ok(car) => Ok((car, condition)),
            Err(Error::InvalidInput { mut violations }) => {
                for violation in violations.iter_mut().filter(|violation| violation.rule == "no such path") {
                    let near = nearest(path, KEYWORDS.iter().map(|(name, _)| *name));
                    if near.starts_with("did you mean") {
                        violation.hint = near;
                    }
                }
                Err(Error::InvalidInput { violations })
            }
            Err(other) => Err(other),
        },
    }
}

/// Unit of what is varied.
pub(crate) fn unit_of(car: &Vehicle, path: &str) -> String {
    if let Some((_, unit)) = KEYWORDS.iter().find(|(name, _)| *name == path) {
        return (*unit).to_owned();
    }
    match path.split_once('.') {
        Some(("oil", _)) => "m^3".into(),
        Some(("pressure", _)) => "Pa".into(),
        _ => car.parameters().into_iter().find(|p| p.path == path).map_or_else(String::new, |p| p.unit.to_owned()),
    }
}

/// All that is wrong with the values, before anything is computed.
pub(crate) fn check(car: &Vehicle, base: &Condition, path: &str, values: &[f64]) -> Result<()> {
    let mut violations: Vec<Violation> = Vec::new();
    for &value in values {
        let wrong = varied(car, base, path, value).and_then(|(car, condition)| condition.check(&car));
        if let Err(Error::InvalidInput { violations: wrong }) = wrong {
            for violation in wrong {
                if !violations.contains(&violation) {
                    violations.push(violation);
                }
            }
        }
    }
    refuse(violations)
}

impl Vehicle {
    /// The states that a number or a load goes through, each solved from the one before.
    ///
    /// `path` is a path of the vehicle or a keyword: `lateral`, `longitudinal`, `vertical`, `temperature`, `side_slope`,
    /// `grade`, `downforce.front`, `heights.front_left`, `heights.twist` (h [1, −1, −1, 1]), `spring_seat.front_left`,
    /// `payload.mass` (of the first), `oil.<circuit>`, `pressure.<circuit>` and the like.
    ///
    /// # Errors
    /// [`Error::InvalidInput`] for an unknown path or a value out of its bounds; nothing is computed then.
    pub fn states(&self, path: &str, values: &[f64], base: &Condition) -> Result<States> {
        check(self, base, path, values)?;
        let circuits: Vec<String> = self.circuits().into_iter().map(str::to_owned).collect();
        let blank = |columns: usize| Array2::from_elem((values.len(), columns), f64::NAN);
        let mut states = States {
            path: path.to_owned(),
            unit: unit_of(self, path),
            values: values.to_vec(),
            attitude: blank(3),
            deflection: blank(4),
            tyre_load: blank(4),
            pressure: blank(circuits.len()),
            gas_volume: blank(circuits.len()),
            front_transfer: vec![f64::NAN; values.len()],
            cross_weight: vec![f64::NAN; values.len()],
            roll_gradient: vec![f64::NAN; values.len()],
            pitch_gradient: vec![f64::NAN; values.len()],
            pressure_per_lateral: blank(circuits.len()),
            passed: vec![Vec::new(); values.len()],
            status: vec![String::new(); values.len()],
            circuits,
        };
        let mut last: Option<OperatingPoint> = None;
        for (row, &value) in values.iter().enumerate() {
            let (car, condition) = varied(self, base, path, value)?;
            match car.settle_near(&condition, last.as_ref()) {
                Ok(point) => {
                    states.record(row, &point);
                    last = Some(point);
                }
                Err(error) => states.status[row] = error.name().to_owned(),
            }
        }
        Ok(states)
    }
}

impl States {
    fn record(&mut self, row: usize, point: &OperatingPoint) {
        let fill = |array: &mut Array2<f64>, values: &[f64]| {
            for (column, &value) in values.iter().enumerate() {
                array[(row, column)] = value;
            }
        };
        fill(&mut self.attitude, &point.attitude);
        fill(&mut self.deflection, point.deflection.as_array());
        fill(&mut self.tyre_load, point.tyre_load.as_array());
        fill(&mut self.pressure, &point.pressure);
        fill(&mut self.gas_volume, &point.gas_volume);
        if let Some([lateral, longitudinal]) = point.load_slopes() {
            self.roll_gradient[row] = lateral.unknowns[2];
            self.pitch_gradient[row] = longitudinal.unknowns[1];
            fill(&mut self.pressure_per_lateral, &lateral.pressure);
        }
        self.front_transfer[row] = point.front_transfer();
        self.cross_weight[row] = point.cross_weight();
        let passed = point.limits.iter().filter(|limit| limit.is_passed());
        self.passed[row] = passed.map(|limit| limit.name.clone()).collect();
        self.status[row] = "solved".into();
    }
}
