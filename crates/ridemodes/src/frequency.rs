//! Frequency response of the linear system.
//!
//! At each frequency the equations (K + sC + s²M) u = (G + sG_c) r + f + … are solved as they stand, in coordinates of
//! their own units: symmetric, with iterative refinement, so that sharp resonances of the oil and nearly equal poles
//! cost no digits. No polynomials and no modal sums.

use nalgebra::{DMatrix, DVector};
use ndarray::Array3;
use num_complex::Complex64;
use serde::{Deserialize, Serialize};

use crate::axes::{CORNER_NAMES, MECHANICAL_NAMES, MOTION_NAMES, MOTIONS};
use crate::error::{Error, Result};
use crate::numerics::SymmetricFactor;
use crate::system::LinearSystem;

/// Responses e^{j2πft} of outputs to inputs (outputs × inputs × frequencies).
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct FrequencyResponse {
    /// Frequencies [Hz].
    pub frequency: Vec<f64>,
    /// Names of the outputs.
    pub outputs: Vec<String>,
    /// Units of the outputs.
    pub output_units: Vec<String>,
    /// Names of the inputs.
    pub inputs: Vec<String>,
    /// Units of the inputs.
    pub input_units: Vec<String>,
    /// Response of each output to each input (outputs × inputs × frequencies).
    pub response: Array3<Complex64>,
}

/// What answers: rows over the coordinates, times powers of s.
struct Output {
    name: String,
    unit: &'static str,
    /// Factors of 1, s and s² on the coordinates.
    rows: [DVector<f64>; 3],
    /// Input that takes part by itself, with its factors of 1 and s: the road under a tyre, the volume put into a node.
    direct: Option<(usize, f64, f64)>,
}

impl LinearSystem {
    /// Response to the road under each wheel, to force and moments on the body, and to volume put into the nodes, at
    /// frequencies in Hz.
    ///
    /// Outputs are body accelerations (z, pitch, roll), accelerations of the seats (longitudinal, lateral, vertical, no
    /// tilt of gravity), deflections, changes of tyre load (compression positive), pressures of the nodes and flows of
    /// the lines.
    ///
    /// # Errors
    /// [`Error::Singular`] at an undamped resonance.
    pub fn frequency_response(&self, frequency: &[f64]) -> Result<FrequencyResponse> {
        let outputs = self.outputs();
        let inputs: Vec<(String, &'static str)> = CORNER_NAMES
            .iter()
            .map(|name| (format!("road.{name}"), "m"))
            .chain(
                MECHANICAL_NAMES[..3]
                    .iter()
                    .zip(["N", "N*m", "N*m"])
                    .map(|(name, unit)| (format!("body.{name}"), unit)),
            )
            .chain(self.pressures.iter().map(|node| (format!("volume.{}", node.name), "m^3")))
            .collect();
        let n = self.coordinates().len();
        let (road, road_damping) = (self.road_stiffness(), self.road_damping());
        let mut response = Array3::zeros((outputs.len(), inputs.len(), frequency.len()));
        let kept = self.flowing();
        for (place, &f) in frequency.iter().enumerate() {
            let s = Complex64::new(0.0, 2.0 * std::f64::consts::PI * f);
            // Loads on the coordinates for each input.
            let mut loads = DMatrix::from_element(n, inputs.len(), Complex64::ZERO);
            for column in 0..4 {
                for row in 0..n {
                    loads[(row, column)] = s * road_damping[(row, column)] + road[(row, column)];
                }
            }
            for column in 0..3 {
                loads[(column, 4 + column)] = Complex64::from(1.0);
            }
            for (column, node) in self.pressures.iter().enumerate() {
                // −Wᵀ C_n⁻¹ V
                for row in 0..n {
                    loads[(row, 7 + column)] = Complex64::from(-node.inflow[row] / node.compliance);
                }
            }
            let moved = self.solve_at(s, &loads, &kept).ok_or_else(|| Error::Singular {
                matrix: format!("dynamic stiffness at {f} Hz"),
                motion: "an undamped resonance".into(),
            })?;
            for (row, output) in outputs.iter().enumerate() {
                for column in 0..inputs.len() {
                    let own = moved.column(column);
                    let mut value = Complex64::ZERO;
                    for (power, factors) in output.rows.iter().enumerate() {
                        let sum: Complex64 = factors.iter().zip(own.iter()).map(|(g, u)| u * *g).sum();
                        value += sum * s.powu(power as u32);
                    }
                    match output.direct {
                        Some((input, rate, damping)) if input == column => value += s * damping + rate,
                        _ => {}
                    }
                    response[(row, column, place)] = value;
                }
            }
        }
        Ok(FrequencyResponse {
            frequency: frequency.to_vec(),
            output_units: outputs.iter().map(|output| output.unit.to_owned()).collect(),
            outputs: outputs.into_iter().map(|output| output.name).collect(),
            input_units: inputs.iter().map(|(_, unit)| (*unit).to_owned()).collect(),
            inputs: inputs.into_iter().map(|(name, _)| name).collect(),
            response,
        })
    }

    /// Frequencies between two bounds that place themselves: even in the logarithm, with more about every pole, so that
    /// no resonance is stepped over [Hz].
    ///
    /// # Errors
    /// As [`modes`](Self::modes).
    pub fn frequency_grid(&self, least: f64, most: f64) -> Result<Vec<f64>> {
        let modes = self.modes()?;
        let mut grid: Vec<f64> = (0..=200).map(|k| least * (most / least).powf(f64::from(k) / 200.0)).collect();
        for pole in modes.pole.iter().filter(|pole| pole.im > 0.0) {
            let (centre, width) = (pole.im, pole.re.abs().max(1e-6 * pole.im));
            // Half-power points lie at ± the width; further ones spread out.
            for k in -12..=12 {
                let k = f64::from(k);
                let f = (centre + 0.25 * width * k * (1.0 + 0.1 * k * k)) / (2.0 * std::f64::consts::PI);
                if f > least && f < most {
                    grid.push(f);
                }
            }
        }
        grid.sort_by(f64::total_cmp);
        grid.dedup_by(|a, b| (*a - *b).abs() <= 1e-12 * *b);
        Ok(grid)
    }

    fn outputs(&self) -> Vec<Output> {
        let n = self.coordinates().len();
        let zero = || DVector::zeros(n);
        let plain = |name: String, unit, rows| Output { name, unit, rows, direct: None };
        let mut all = Vec::new();
        for (i, name) in MECHANICAL_NAMES[..3].iter().enumerate() {
            let mut row = zero();
            row[i] = 1.0;
            let unit = if i == 0 { "m/s^2" } else { "rad/s^2" };
            all.push(plain(format!("body_acceleration.{name}"), unit, [zero(), zero(), row]));
        }
        for (name, [x, y, h]) in self.point().seats() {
            // z̈ − xθ̈ + yφ̈; longitudinal hθ̈, lateral −hφ̈
            for (axis, factors) in [("x", [0.0, h, 0.0]), ("y", [0.0, 0.0, -h]), ("z", [1.0, -x, y])] {
                let mut row = zero();
                row.rows_mut(0, 3).copy_from_slice(&factors);
                all.push(plain(format!("seat_acceleration.{name}.{axis}"), "m/s^2", [zero(), zero(), row]));
            }
        }
        let deflection = self.deflection();
        for (i, name) in CORNER_NAMES.iter().enumerate() {
            let row = DVector::from_iterator(n, deflection.row(i).iter().copied());
            all.push(plain(format!("deflection.{name}"), "m", [row, zero(), zero()]));
        }
        let (road, road_damping) = (self.road_stiffness(), self.road_damping());
        for (i, name) in CORNER_NAMES.iter().enumerate() {
            // k_t (r − w) + c_t (ṙ − ẇ)
            let (rate, damping) = (road[(3 + i, i)], road_damping[(3 + i, i)]);
            let (mut first, mut second) = (zero(), zero());
            first[3 + i] = -rate;
            second[3 + i] = -damping;
            let mut output = plain(format!("tyre_load.{name}"), "N", [first, second, zero()]);
            output.direct = Some((i, rate, damping));
            all.push(output);
        }
        for (i, node) in self.pressures.iter().enumerate() {
            let row = DVector::from_fn(n, |j, _| node.inflow[j] / node.compliance);
            let mut output = plain(format!("pressure.{}", node.name), "Pa", [row, zero(), zero()]);
            output.direct = Some((7 + i, 1.0 / node.compliance, 0.0));
            all.push(output);
        }
        for (i, name) in self.coordinates().iter().enumerate().filter(|(i, _)| self.volumes().contains(i)) {
            let mut row = zero();
            row[i] = 1.0;
            all.push(plain(format!("flow.{name}"), "m^3/s", [zero(), row, zero()]));
        }
        all
    }

    // Coordinates that take part: a circulation that nothing resists or accelerates does not.
    fn flowing(&self) -> Vec<usize> {
        let moves = |i: usize| self.mass[(i, i)] != 0.0 || self.damping[(i, i)] != 0.0 || self.stiffness[(i, i)] != 0.0;
        (0..self.coordinates().len()).filter(|&i| moves(i)).collect()
    }

    // Scaled to terms of size 1, factorised without pivoting, refined; pivoted where that does not come to rounding.
    fn solve_at(&self, s: Complex64, loads: &DMatrix<Complex64>, kept: &[usize]) -> Option<DMatrix<Complex64>> {
        let size = s.norm();
        let n = kept.len();
        let (mass, damping, mut stiffness) = (&self.mass, &self.damping, self.stiffness.clone());
        if size == 0.0 {
            // At rest a circulation carries nothing: it is held where its resistance holds it.
            for (free, shape) in &self.circulations {
                let shape = DVector::from_column_slice(shape);
                let mut held = damping * &shape;
                if held.amax() == 0.0 {
                    held[*free] = 1.0;
                }
                let weight = self.stiffness.diagonal().amax() / held.amax().powi(2);
                stiffness += &held * held.transpose() * weight;
            }
        }
        let unit: Vec<f64> = kept
            .iter()
            .map(|&i| {
                let square = size * (size * mass[(i, i)] + damping[(i, i)]) + stiffness[(i, i)].abs();
                if square > 0.0 { 1.0 / square.sqrt() } else { 1.0 }
            })
            .collect();
        let dynamic = DMatrix::from_fn(n, n, |a, b| {
            let (i, j) = (kept[a], kept[b]);
            (s * (s * mass[(i, j)] + damping[(i, j)]) + stiffness[(i, j)]) * (unit[a] * unit[b])
        });
        let factor = SymmetricFactor::new(dynamic.clone());
        let mut pivoted = None;
        let mut moved = DMatrix::from_element(self.coordinates().len(), loads.ncols(), Complex64::ZERO);
        for column in 0..loads.ncols() {
            let right = DVector::from_fn(n, |a, _| loads[(kept[a], column)] * unit[a]);
            if right.norm() == 0.0 {
                continue;
            }
            let mut x = factor.solve(&right);
            x += factor.solve(&(&right - &dynamic * &x));
            let residual = |x: &DVector<Complex64>| (&right - &dynamic * x).norm() / (right.norm() + x.norm());
            if !x.iter().all(|entry| entry.is_finite()) || residual(&x) > 1e-15 * n as f64 {
                let factor = pivoted.get_or_insert_with(|| dynamic.clone().lu());
                x = factor.solve(&right)?;
                let correction = factor.solve(&(&right - &dynamic * &x))?;
                x += correction;
            }
            if !x.iter().all(|entry| entry.is_finite()) {
                return None;
            }
            for (a, &i) in kept.iter().enumerate() {
                moved[(i, column)] = x[a] * unit[a];
            }
        }
        Some(moved)
    }
}

impl FrequencyResponse {
    /// The responses to the road in heave, pitch, roll and warp of the ground (in place of the four wheels): the sum over
    /// the wheels along each pattern.
    pub fn in_motions(&self) -> Self {
        let (outputs, _, frequencies) = self.response.dim();
        let mut motions = self.clone();
        for (m, pattern) in MOTIONS.iter().enumerate() {
            motions.inputs[m] = format!("road.{}", MOTION_NAMES[m]);
            for i in 0..outputs {
                for k in 0..frequencies {
                    motions.response[(i, m, k)] = (0..4).map(|w| self.response[(i, w, k)] * pattern[w]).sum();
                }
            }
        }
        motions
    }
}
