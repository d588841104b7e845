//! Tables of modes.

use super::{Table, fixed, percent};
use crate::modes::Modes;

impl Modes {
    /// The modes for people: the seven mechanical ones first, then oil, then relaxation.
    pub fn table(&self) -> Table {
        let mut table = Table::new(
            format!("Modes ({})", self.kind.name()),
            &["mode", "frequency Hz", "damping %", "heave %", "pitch %", "roll %", "warp %", "oil %"],
        );
        for row in self.reading_order() {
            let mark = if self.unclear[row] { " ~" } else { "" };
            let mut cells = vec![
                format!("{}{mark}", self.label[row]),
                fixed(self.frequency[row], 3),
                fixed(100.0 * self.damping_ratio[row], 1),
            ];
            cells.extend(self.motion_share.row(row).iter().map(|&share| percent(share)));
            table.row(cells);
        }
        let mut table = table.note("heave to oil: share of the mode's kinetic energy");
        if self.unclear.iter().any(|&unclear| unclear) {
            table = table.note("~ near tie: the motions are mixed so evenly that labels could be exchanged");
        }
        self.assumptions.iter().fold(table, |table, assumption| table.note(assumption.clone()))
    }

    /// Where a mode's strain energy and dissipation are, the largest first; parts below 0.1 % are left out.
    pub fn energy_table(&self, row: usize) -> Table {
        let mut table = Table::new(
            format!("Energy of {} ({} Hz)", self.label[row], fixed(self.frequency[row], 3)),
            &["element", "strain %", "dissipation %"],
        );
        let (strain, dissipation) = (self.strain.row(row), self.dissipation.row(row));
        let mut order: Vec<usize> =
            (0..self.elements.len()).filter(|&i| strain[i] >= 1e-3 || dissipation[i] >= 1e-3).collect();
        order.sort_by(|&a, &b| (strain[b] + dissipation[b]).total_cmp(&(strain[a] + dissipation[a])));
        for i in order {
            table.row([self.elements[i].clone(), percent(strain[i]), percent(dissipation[i])]);
        }
        table
    }
}
