//! Tables of the four motions and of the coupling.

use nalgebra::Matrix4;

use super::{Table, Tables, fixed, per_degree, percent};
use crate::axes::{CORNER_NAMES, MOTION_NAMES};
use crate::corner_motions::{MotionMatrix, Motions, RollStiffness};
use crate::error::Result;
use crate::system::{LinearSystem, StateSpace};

impl Motions {
    /// Everything about the four motions, for people.
    pub fn tables(&self) -> Tables {
        Tables(vec![self.table(), self.cross_table(), self.axle_table()])
    }

    /// Stiffness and damping of each motion, at one wheel.
    pub fn table(&self) -> Table {
        let mut table = Table::new(
            "The four motions: stiffness and damping at one wheel",
            &[
                "motion",
                "springs N/mm",
                "oil N/mm",
                "sum N/mm",
                "oil %",
                "dampers N·s/m",
                "oil N·s/m",
                "sum N·s/m",
                "oil %",
            ],
        );
        for (i, name) in MOTION_NAMES.iter().enumerate() {
            let part = |matrix: &MotionMatrix, unit: f64, decimals: usize| {
                let (a, b, sum) = (matrix.conventional[(i, i)], matrix.oil[(i, i)], matrix.total[(i, i)]);
                let share = if sum > 0.0 { percent(b / sum) } else { "–".into() };
                [fixed(a * unit, decimals), fixed(b * unit, decimals), fixed(sum * unit, decimals), share]
            };
            let mut cells = vec![(*name).to_owned()];
            cells.extend(part(&self.stiffness, 1e-3, 2));
            cells.extend(part(&self.damping, 1.0, 0));
            table.row(cells);
        }
        let mut table = table.note(format!(
            "warp to roll stiffness {}; with the body free, warp is {} N/mm at the wheels, {} N/mm at the ground",
            fixed(self.warp_to_roll, 3),
            fixed(self.warp_free_wheels * 1e-3, 2),
            fixed(self.warp_free_ground * 1e-3, 2)
        ));
        for warning in &self.warnings {
            table = table.note(format!("warning: {warning}"));
        }
        self.assumptions.iter().fold(table, |table, assumption| table.note(assumption.clone()))
    }

    /// Couplings of one motion with another.
    pub fn cross_table(&self) -> Table {
        let mut table = Table::new(
            "Coupling of the motions, K_ij/√(K_ii K_jj) of stiffness and of damping",
            &["motions", "stiffness %", "damping %"],
        );
        for i in 0..4 {
            for j in i + 1..4 {
                table.row([
                    format!("{}–{}", MOTION_NAMES[i], MOTION_NAMES[j]),
                    percent(self.stiffness.cross[(i, j)]),
                    percent(self.damping.cross[(i, j)]),
                ]);
            }
        }
        table.note("zero: decoupled at the wheels; the modes couple through centre of gravity and inertia too")
    }

    /// Roll stiffness, ride frequencies and centres.
    pub fn axle_table(&self) -> Table {
        let mut table = Table::new("Axles", &["", "front", "rear", "total"]);
        let mut rolls = |name: &str, roll: &RollStiffness| {
            let cell = |value: f64| fixed(per_degree(value), 0);
            table.row([format!("roll stiffness N·m/deg, {name}"), cell(roll.front), cell(roll.rear), cell(roll.total)]);
        };
        rolls("springs and bars", &self.roll_conventional);
        rolls("oil", &self.roll_oil);
        rolls("sum", &self.roll);
        let [front, rear] = self.ride_frequency;
        table.row(["ride frequency Hz".into(), fixed(front, 3), fixed(rear, 3), String::new()]);
        for (name, matrix) in [
            ("one raised wheel, wheel sees N/mm", &self.at_wheels),
            ("one raised wheel, ground sees N/mm", &self.at_ground),
        ] {
            table.row([
                name.to_owned(),
                fixed(0.5e-3 * (matrix[(0, 0)] + matrix[(1, 1)]), 2),
                fixed(0.5e-3 * (matrix[(2, 2)] + matrix[(3, 3)]), 2),
                String::new(),
            ]);
        }
        table.note(format!(
            "centres, metres ahead of the centre of gravity: pitch {}, bounce {} (wheels without mass, tyres in series)",
            fixed(self.pitch_centre, 3),
            fixed(self.bounce_centre, 3)
        ))
    }
}

impl LinearSystem {
    /// The quasi-static coupling of the oil, for people.
    ///
    /// # Errors
    /// As [`coupling`](Self::coupling).
    pub fn coupling_table(&self) -> Result<Table> {
        let coupling: Matrix4<f64> = self.coupling()?;
        let mut table = Table::new(
            "Coupling of the oil: force on a wheel against bump per bump of each wheel, N/mm",
            &["force on", "front left", "front right", "rear left", "rear right"],
        );
        for i in 0..4 {
            let mut cells = vec![CORNER_NAMES[i].replace('_', " ")];
            cells.extend((0..4).map(|j| fixed(coupling[(i, j)] * 1e-3, 3)));
            table.row(cells);
        }
        let table = table.note("quasi-static: oil free to flow, gas by its exponent");
        let assumptions = self.point().assumptions(true);
        Ok(assumptions.into_iter().fold(table, Table::note))
    }

    /// The system in words.
    pub fn table(&self) -> Table {
        let mut table = Table::new(
            format!("Linear system, {} coordinates, {} elements", self.coordinates().len(), self.elements().len()),
            &["coordinate", "unit", "mass", "damping", "stiffness"],
        );
        for (i, (name, unit)) in self.coordinates().iter().zip(self.coordinate_units()).enumerate() {
            let cell = |value: f64| format!("{value:.4e}");
            table.row([
                name.clone(),
                unit.to_owned(),
                cell(self.mass()[(i, i)]),
                cell(self.damping()[(i, i)]),
                cell(self.stiffness()[(i, i)]),
            ]);
        }
        let table = table.note(if self.has_gravity() {
            "diagonals, SI; gravity moment of the leaned body taken in, roll about the roll axis"
        } else {
            "diagonals, SI; gravity moment of the leaned body left out (classical seven degrees of freedom)"
        });
        self.point().assumptions(false).into_iter().fold(table, Table::note)
    }
}

impl StateSpace {
    /// The names of states, inputs and outputs.
    pub fn table(&self) -> Table {
        let mut table = Table::new(
            format!(
                "State space, {} states, {} inputs, {} outputs",
                self.states.len(),
                self.inputs.len(),
                self.outputs.len()
            ),
            &["states", "inputs", "outputs", "unit"],
        );
        let cell = |names: &[String], row: usize| names.get(row).cloned().unwrap_or_default();
        for row in 0..self.states.len().max(self.inputs.len()).max(self.outputs.len()) {
            table.row([
                cell(&self.states, row),
                cell(&self.inputs, row),
                cell(&self.outputs, row),
                cell(&self.output_units, row),
            ]);
        }
        table
    }
}
