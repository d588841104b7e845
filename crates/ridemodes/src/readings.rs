//! What a chassis engineer reads off a state: gradients, load transfer, twist, limits of grip, wheel rates over travel.

use ndarray::Array2;
use serde::{Deserialize, Serialize};

use crate::axes::MOTIONS;
use crate::error::{Error, Result};
use crate::states::varied;
use crate::statics::{Condition, Fault, OperatingPoint};
use crate::units::STANDARD_GRAVITY;
use crate::vehicle::Vehicle;

/// Readings about a state, of slow (isothermal, slow lines open) or fast (no heat exchange) changes.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct Readings {
    /// Whether the changes are fast.
    pub fast: bool,
    /// Names of the circuits.
    pub circuits: Vec<String>,
    /// Roll per lateral acceleration, tyres and the leaned body's weight included [rad per m/s²].
    pub roll_gradient: f64,
    /// Pitch per deceleration in braking, nose down positive [rad per m/s²].
    pub braking_gradient: f64,
    /// Pitch per acceleration in drive, nose up positive [rad per m/s²].
    pub driving_gradient: f64,
    /// Front share of the lateral load transfer.
    pub front_transfer: f64,
    /// Change of each tyre load per ground twist h·[1, −1, −1, 1] [N/m].
    pub load_per_twist: [f64; 4],
    /// Change of tyre loads (rows) per height of the ground under each wheel (columns) (4 × 4) [N/m].
    pub load_per_height: Array2<f64>,
    /// Ground twist h at which the first wheel lifts; NaN if none does within a metre [m].
    pub twist_at_lift: f64,
    /// Lateral acceleration at which the first wheel lifts; NaN if none does below 30 m/s² [m/s²].
    pub lateral_at_lift: f64,
    /// Slope across at which the first wheel lifts; NaN if none does below 1.2 rad [rad].
    pub slope_at_lift: f64,
    /// Cross weight (FR + RL)/ΣF of the tyre loads.
    pub cross_weight: f64,
    /// All that the tyres carry, as a mass [kg].
    pub mass: f64,
    /// Change of each pressure per lateral acceleration [Pa per m/s²].
    pub pressure_per_lateral: Vec<f64>,
    /// Change of each pressure per deceleration in braking [Pa per m/s²].
    pub pressure_per_braking: Vec<f64>,
    /// Lift of the body at 5 m/s² of lateral acceleration, from the rod areas and hardening gas [m].
    pub lift_in_corner: f64,
    /// Undamped frequency of the front and the rear sprung mass alone on its axle, tyres in series [Hz].
    pub ride_frequency: [f64; 2],
}

/// Forces and rates of the suspension over its travel in heave, pitch, roll, warp and at the front and rear left wheel.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct WheelRates {
    /// Travel of each wheel of the pattern, bump positive [m].
    pub travel: Vec<f64>,
    /// Force per wheel along the pattern (6 × travels) [N].
    pub force: Array2<f64>,
    /// Tangent rate per wheel along the pattern (6 × travels) [N/m].
    pub rate: Array2<f64>,
    /// Whether the gas exchanges no heat from the design height on.
    pub fast: bool,
}

/// Names of the rows of [`WheelRates`].
pub const PATTERN_NAMES: [&str; 6] = ["heave", "pitch", "roll", "warp", "front left", "rear left"];

// Half the step of a central difference: small against what bends the curves, large against rounding.
const STEP: f64 = 0.02; // m/s²
const HEIGHT: f64 = 2e-4; // m

impl Vehicle {
    /// Readings about the state under a condition.
    ///
    /// Gradients are central differences over ± 0.02 m/s² and ± 0.2 mm about it.
    ///
    /// # Errors
    /// As [`settle_under`](Self::settle_under).
    pub fn readings(&self, base: &Condition) -> Result<Readings> {
        let here = self.settle_under(base)?;
        let at = |path: &str, value: f64| -> Result<OperatingPoint> {
            let (car, condition) = varied(self, base, path, value)?;
            condition.check(&car)?;
            car.settle_near(&condition, Some(&here))
        };
        let around = |path: &str, value: f64, step: f64| -> Result<[OperatingPoint; 2]> {
            Ok([at(path, value + step)?, at(path, value - step)?])
        };
        let slope = |[above, below]: &[OperatingPoint; 2], step: f64, of: &dyn Fn(&OperatingPoint) -> f64| {
            (of(above) - of(below)) / (2.0 * step)
        };
        let circuits: Vec<String> = self.circuits().into_iter().map(str::to_owned).collect();
        let pressures = |pair: &[OperatingPoint; 2], step: f64| -> Vec<f64> {
            (0..circuits.len()).map(|i| slope(pair, step, &|point| point.pressure[i])).collect()
        };
        let corner = around("lateral", base.lateral, STEP)?;
        // One-sided in longitudinal: links carry other shares in braking than in drive.
        let braking = [at("longitudinal", base.longitudinal)?, at("longitudinal", base.longitudinal - 2.0 * STEP)?];
        let driving = [at("longitudinal", base.longitudinal + 2.0 * STEP)?, at("longitudinal", base.longitudinal)?];
        let [twisted, untwisted] = [1.0, -1.0].map(|sign| {
            let mut condition = base.clone();
            for (height, pattern) in condition.heights.iter_mut().zip(MOTIONS[3]) {
                *height += sign * HEIGHT * pattern;
            }
            self.settle_near(&condition, Some(&here))
        });
        let twist = [twisted?, untwisted?];
        let mut load_per_height = Array2::zeros((4, 4));
        for (wheel, name) in crate::axes::CORNER_NAMES.iter().enumerate() {
            let pair = around(&format!("heights.{name}"), base.heights[wheel], HEIGHT)?;
            for row in 0..4 {
                load_per_height[(row, wheel)] = slope(&pair, HEIGHT, &|point| point.tyre_load.0[row]);
            }
        }
        let transfer: [f64; 4] = std::array::from_fn(|i| slope(&corner, STEP, &|point| point.tyre_load.0[i]));
        let (front, rear) = (transfer[1] - transfer[0], transfer[3] - transfer[2]);
        let lift = at("lateral", base.lateral + 5.0)?.attitude[0] - here.attitude[0];
        let twist_from = |h: f64| -> Result<OperatingPoint> {
            let mut condition = base.clone();
            for (height, pattern) in condition.heights.iter_mut().zip(MOTIONS[3]) {
                *height += h * pattern;
            }
            self.settle_near(&condition, Some(&here))
        };
        Ok(Readings {
            fast: base.fast,
            roll_gradient: slope(&corner, STEP, &|point| point.attitude[2]),
            braking_gradient: -slope(&braking, STEP, &|point| point.attitude[1]),
            driving_gradient: -slope(&driving, STEP, &|point| point.attitude[1]),
            front_transfer: front / (front + rear),
            load_per_twist: std::array::from_fn(|i| slope(&twist, HEIGHT, &|point| point.tyre_load.0[i])),
            load_per_height,
            twist_at_lift: first_lift(&here, &twist_from, 1.0)?,
            lateral_at_lift: first_lift(&here, &|value| at("lateral", base.lateral + value), 30.0)? + base.lateral,
            slope_at_lift: first_lift(&here, &|value| at("side_slope", base.side_slope + value), 1.2)?
                + base.side_slope,
            cross_weight: here.cross_weight(),
            mass: here.tyre_load.as_array().iter().sum::<f64>() / STANDARD_GRAVITY,
            pressure_per_lateral: pressures(&corner, STEP),
            pressure_per_braking: pressures(&braking, STEP).into_iter().map(|slope| -slope).collect(),
            lift_in_corner: lift,
            ride_frequency: here.linear()?.motions()?.ride_frequency,
            circuits,
        })
    }

    /// Every single fault that the layout can have: burst circuits, lost charges, closed ways.
    pub fn faults(&self) -> Vec<Fault> {
        let network = &self.structure().network;
        let bursts = self.circuits().into_iter().map(|name| Fault::Burst(name.to_owned()));
        let lost = network.accumulators.iter().map(|own| Fault::LostPrecharge(own.name.to_string()));
        let ways = network.ways.iter().filter(|way| network.lines[way.lines.start].closed.is_some());
        let closed = ways.map(|way| Fault::Closed(way.name.to_string()));
        bursts.chain(lost).chain(closed).collect()
    }

    /// The state that each single fault leaves the vehicle in, the worst lean first; those that do not settle lead.
    pub fn fault_states(&self, base: &Condition) -> Vec<(Fault, Result<OperatingPoint>)> {
        let mut states: Vec<(Fault, Result<OperatingPoint>)> = self
            .faults()
            .into_iter()
            .map(|fault| {
                let mut condition = base.clone();
                condition.faults.push(fault.clone());
                (fault, self.settle_under(&condition))
            })
            .collect();
        let severity = |state: &Result<OperatingPoint>| match state {
            Err(_) => f64::INFINITY,
            // Roll and pitch at a metre, and heave, all as a height.
            Ok(point) => point.attitude[0].abs() + point.attitude[1].abs() + point.attitude[2].abs(),
        };
        states.sort_by(|a, b| severity(&b.1).total_cmp(&severity(&a.1)));
        states
    }

    /// The vehicle on its conventional parts alone: no oil, no cylinders; springs carry all, at the same height.
    ///
    /// # Errors
    /// [`Error::InvalidInput`] where nothing conventional is left to carry a corner.
    pub fn without_oil(&self) -> Result<Self> {
        let mut tree = self.to_value();
        if let Some(table) = tree.as_object_mut() {
            for key in ["oil", "layout", "circuits", "nodes", "lines", "settings"] {
                table.remove(key);
            }
            for axle in ["front", "rear"] {
                for side in ["both", "left", "right"] {
                    let corner = table.get_mut(axle).and_then(|axle| axle.get_mut(side));
                    if let Some(corner) = corner.and_then(serde_json::Value::as_object_mut) {
                        corner.remove("cylinder");
                    }
                }
            }
        }
        Self::from_value(&tree)
    }

    /// Forces and tangent rates over travel in each of the four motions and at one wheel of each axle, from the design
    /// condition on; oil and gas follow the chambers' volume, slowly or fast.
    ///
    /// # Errors
    /// [`Error::NotConverged`] where oil has nowhere to go.
    pub fn wheel_rates(&self, travel: &[f64], fast: bool) -> Result<WheelRates> {
        let condition = Condition { fast, ..Condition::default() };
        let mut rates = WheelRates {
            travel: travel.to_vec(),
            force: Array2::zeros((6, travel.len())),
            rate: Array2::zeros((6, travel.len())),
            fast,
        };
        let single = |wheel: usize| std::array::from_fn(|i| f64::from(i == wheel));
        let patterns: [[f64; 4]; 6] = [MOTIONS[0], MOTIONS[1], MOTIONS[2], MOTIONS[3], single(0), single(2)];
        let point = self.settle()?;
        for (row, pattern) in patterns.iter().enumerate() {
            let square: f64 = pattern.iter().map(|part| part * part).sum();
            for (column, &s) in travel.iter().enumerate() {
                let (force, slope) = point.forces_along(pattern, s, &condition).ok_or_else(|| Error::NotConverged {
                    what: format!("the pressure at {s} m of {}", PATTERN_NAMES[row]),
                    iterations: 0,
                    residual: f64::NAN,
                    last: vec![s],
                })?;
                rates.force[(row, column)] = force / square;
                rates.rate[(row, column)] = slope / square;
            }
        }
        Ok(rates)
    }
}

// The value at which the first tyre load vanishes: stations outwards, then bisection between two of them.
fn first_lift(here: &OperatingPoint, at: &dyn Fn(f64) -> Result<OperatingPoint>, most: f64) -> Result<f64> {
    let lifts = |point: &Result<OperatingPoint>| match point {
        Ok(point) => point.tyre_load.as_array().contains(&0.0),
        // Beyond the first lift the vehicle may tip over.
        Err(_) => true,
    };
    if here.tyre_load.as_array().contains(&0.0) {
        return Ok(0.0);
    }
    const STATIONS: usize = 24;
    let mut low = 0.0;
    for k in 1..=STATIONS {
        let high = most * k as f64 / STATIONS as f64;
        let point = at(high);
        if let Err(error @ Error::InvalidInput { .. }) = point {
            return Err(error);
        }
        if lifts(&point) {
            let mut high = high;
            for _ in 0..40 {
                let middle = 0.5 * (low + high);
                if lifts(&at(middle)) { high = middle } else { low = middle }
            }
            return Ok(0.5 * (low + high));
        }
        low = high;
    }
    Ok(f64::NAN)
}
