//! Tables of sensitivities, sorted by effect.

use super::{Table, fixed};
use crate::axes::MOTION_NAMES;
use crate::sensitivities::Sensitivities;

/// Effects below this many per cent per per cent are left out of tables.
const SMALL: f64 = 5e-4;

impl Sensitivities {
    /// What moves a mode, the largest effect first: per cent of frequency and of damping ratio per per cent of the
    /// number, and the change per unit.
    pub fn table(&self, row: usize) -> Table {
        let modes = &self.modes;
        let mut table = Table::new(
            format!(
                "What moves {} ({} Hz, {} % damping)",
                modes.label[row],
                fixed(modes.frequency[row], 3),
                fixed(100.0 * modes.damping_ratio[row], 1)
            ),
            &["path", "frequency %/%", "damping %/%", "value", "unit", "Hz per unit", "damping % per unit"],
        );
        let (frequency, damping) = (self.relative_frequency(), self.relative_damping_ratio());
        let effect = |path: usize| frequency[(row, path)].abs().max(damping[(row, path)].abs());
        let mut order: Vec<usize> = (0..self.paths.len()).filter(|&path| effect(path) >= SMALL).collect();
        order.sort_by(|&a, &b| effect(b).total_cmp(&effect(a)));
        for path in order {
            table.row([
                self.paths[path].clone(),
                fixed(frequency[(row, path)], 3),
                fixed(damping[(row, path)], 3),
                format!("{:.5e}", self.values[path]),
                self.units[path].clone(),
                format!("{:.3e}", self.frequency[(row, path)]),
                format!("{:.3e}", 100.0 * self.damping_ratio[(row, path)]),
            ]);
        }
        if self.repeated[row] {
            table = table.note("the pole is equal to another's: only the sum of equal poles has a gradient");
        }
        self.noted(table)
    }

    /// What moves the stiffness and damping of the four motions, the largest effect first.
    pub fn motion_table(&self) -> Table {
        let columns: Vec<String> = ["stiffness", "damping"]
            .iter()
            .flat_map(|what| MOTION_NAMES.map(|name| format!("{name} {what} %/%")))
            .collect();
        let columns: Vec<&str> = ["path"].into_iter().chain(columns.iter().map(String::as_str)).collect();
        let mut table = Table::new("What moves the four motions", &columns);
        let effects = |path: usize| -> Vec<f64> {
            let part =
                |derivative: f64, value: f64| if value == 0.0 { 0.0 } else { derivative * self.values[path] / value };
            let stiffness = (0..4).map(|i| part(self.stiffness[(i, i, path)], self.stiffness_value[(i, i)]));
            stiffness.chain((0..4).map(|i| part(self.damping[(i, i, path)], self.damping_value[(i, i)]))).collect()
        };
        let largest = |path: usize| effects(path).into_iter().map(f64::abs).fold(0.0, f64::max);
        let mut order: Vec<usize> = (0..self.paths.len()).filter(|&path| largest(path) >= SMALL).collect();
        order.sort_by(|&a, &b| largest(b).total_cmp(&largest(a)));
        for path in order {
            let cells = effects(path).into_iter().map(|effect| fixed(effect, 3));
            table.row([self.paths[path].clone()].into_iter().chain(cells));
        }
        self.noted(table)
    }

    fn noted(&self, table: Table) -> Table {
        let table = table.note("%/%: per cent of the result per per cent of the number; below 0.0005 left out");
        if self.excluded.is_empty() {
            table
        } else {
            table.note(format!("at zero, where a change would alter the coordinates: {}", self.excluded.join(", ")))
        }
    }
}
