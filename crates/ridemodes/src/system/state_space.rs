//! The system as ẋ = A x + B u, y = C x + D u.

use nalgebra::DMatrix;
use serde::{Deserialize, Serialize};

use super::LinearSystem;
use crate::axes::{CORNER_NAMES, MECHANICAL_NAMES};
use crate::error::{Error, Result};

/// Matrices of the state space and the names of what they act on.
///
/// Inputs are the road heights [m] and the road velocities [m/s] under the four wheels. A response to a
/// road needs both: the velocity acts through the tyres' damping.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct StateSpace {
    /// State matrix.
    pub a: DMatrix<f64>,
    /// Input matrix.
    pub b: DMatrix<f64>,
    /// Output matrix.
    pub c: DMatrix<f64>,
    /// Feedthrough.
    pub d: DMatrix<f64>,
    /// Names of the states.
    pub states: Vec<String>,
    /// Names of the inputs.
    pub inputs: Vec<String>,
    /// Names of the outputs.
    pub outputs: Vec<String>,
    /// Units of the outputs.
    pub output_units: Vec<String>,
}

impl LinearSystem {
    /// The state space; its eigenvalues are the poles of [`modes`](Self::modes) and their conjugates,
    /// and no others.
    ///
    /// States are coordinates and their rates, first-order coordinates without rate. Outputs are body
    /// accelerations (z, pitch, roll), deflections, changes of tyre load (compression positive) and
    /// pressure rises of the nodes.
    pub fn state_space(&self) -> Result<StateSpace> {
        let split = self.canonical()?;
        let (loops, first_loops) = (split.second_loops, split.first_loops);
        let (ns, nf) = (split.second_names.len(), split.first_names.len());
        let (np, nz) = (ns - loops, nf - first_loops);
        let size = split.states();
        let singular = |matrix: &str| Error::Singular { matrix: matrix.into(), motion: "no inverse".into() };
        let mass = super::canonical::scaled_cholesky(&split.mass).ok_or_else(|| singular("mass"))?;
        // ζ̇ = −C_ff⁻¹ (C_fs η̇ + K_fs η + K_ff ζ), over the states [η, η̇, ζ]
        let mut first_rate = DMatrix::zeros(nf, size);
        if nf > 0 {
            let factor = super::canonical::scaled_cholesky(&split.c_ff).ok_or_else(|| singular("damping"))?;
            let mut right = DMatrix::zeros(nf, size);
            right.view_mut((0, 0), (nf, np)).copy_from(&split.k_sf.transpose().columns(loops, np));
            right.view_mut((0, np), (nf, ns)).copy_from(&split.c_sf.transpose());
            right.view_mut((0, np + ns), (nf, nz)).copy_from(&split.k_ff.columns(first_loops, nz));
            first_rate = -factor.solve(&right);
        }
        // M η̈ = −K η − C η̇ − K_sf ζ − C_sf ζ̇ + forces of the road
        let mut force = DMatrix::zeros(ns, size);
        force.view_mut((0, 0), (ns, np)).copy_from(&split.k_ss.columns(loops, np));
        force.view_mut((0, np), (ns, ns)).copy_from(&split.c_ss);
        force.view_mut((0, np + ns), (ns, nz)).copy_from(&split.k_sf.columns(first_loops, nz));
        force += &split.c_sf * &first_rate;
        let acceleration = -mass.solve(&force);
        let mut a = DMatrix::zeros(size, size);
        for i in 0..np {
            a[(i, np + loops + i)] = 1.0;
        }
        a.view_mut((np, 0), (ns, size)).copy_from(&acceleration);
        a.view_mut((np + ns, 0), (nz, size)).copy_from(&first_rate.rows(first_loops, nz));

        let (road, road_damping) = (self.road_stiffness(), self.road_damping());
        let mut drive = DMatrix::zeros(ns, 8);
        drive.columns_mut(0, 4).copy_from(&(split.second.transpose() * &road));
        drive.columns_mut(4, 4).copy_from(&(split.second.transpose() * &road_damping));
        let driven = mass.solve(&drive);
        let mut b = DMatrix::zeros(size, 8);
        b.view_mut((np, 0), (ns, 8)).copy_from(&driven);

        // u = second η + first ζ, u̇ of the mechanical coordinates = second η̇
        let n = self.coordinates.len();
        let mut position = DMatrix::zeros(n, size);
        position.columns_mut(0, np).copy_from(&split.second.columns(loops, np));
        position.columns_mut(np + ns, nz).copy_from(&split.first.columns(first_loops, nz));
        let mut rate = DMatrix::zeros(n, size);
        rate.columns_mut(np, ns).copy_from(&split.second);

        let mut outputs: Vec<String> = Vec::new();
        let mut output_units: Vec<String> = Vec::new();
        let pressures = self.pressures.len();
        let rows = 11 + pressures;
        let mut c = DMatrix::zeros(rows, size);
        let mut d = DMatrix::zeros(rows, 8);
        let accelerations = &split.second * &acceleration;
        let driven = &split.second * &driven;
        for i in 0..3 {
            c.row_mut(i).copy_from(&accelerations.row(i));
            d.row_mut(i).copy_from(&driven.row(i));
            outputs.push(format!("body_acceleration.{}", MECHANICAL_NAMES[i]));
            output_units.push(if i == 0 { "m/s^2" } else { "rad/s^2" }.into());
        }
        c.rows_mut(3, 4).copy_from(&(self.deflection() * &position));
        for name in CORNER_NAMES {
            outputs.push(format!("deflection.{name}"));
            output_units.push("m".into());
        }
        // Tyre force k_t (r − w) + c_t (ṙ − ẇ)
        let tyres = road.transpose() * &position + road_damping.transpose() * &rate;
        c.rows_mut(7, 4).copy_from(&-tyres);
        for i in 0..4 {
            d[(7 + i, i)] = road[(3 + i, i)];
            d[(7 + i, 4 + i)] = road_damping[(3 + i, i)];
            outputs.push(format!("tyre_load.{}", CORNER_NAMES[i]));
            output_units.push("N".into());
        }
        if pressures > 0 {
            c.rows_mut(11, pressures).copy_from(&(self.pressure() * &position));
        }
        for name in self.pressure_names() {
            outputs.push(format!("pressure.{name}"));
            output_units.push("Pa".into());
        }
        let name = |&index: &usize| self.coordinates[index].clone();
        let mut states: Vec<String> = split.second_names[loops..].iter().map(name).collect();
        states.extend(split.second_names.iter().map(|index| format!("{}.rate", name(index))));
        states.extend(split.first_names[first_loops..].iter().map(name));
        let inputs = CORNER_NAMES
            .iter()
            .map(|name| format!("road.{name}"))
            .chain(CORNER_NAMES.iter().map(|name| format!("road_rate.{name}")))
            .collect();
        Ok(StateSpace { a, b, c, d, states, inputs, outputs, output_units })
    }
}
