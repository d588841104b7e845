//! Tables of sweeps and of decoupling.

use super::{Table, fixed, percent};
use crate::decoupling::Decoupling;
use crate::states::States;
use crate::sweep::Sweep;

impl Decoupling {
    /// What each number could do, the smallest change first.
    pub fn table(&self) -> Table {
        let mut table = Table::new(
            format!(
                "Decoupling {} from {} in stiffness (now {} %)",
                self.motions[0],
                self.motions[1],
                percent(self.cross)
            ),
            &["path", "value", "decoupled at", "unit", "change %", "least coupling %", "met at"],
        );
        for remedy in &self.remedies {
            let number = |value: f64| format!("{value:.5e}");
            table.row([
                remedy.path.clone(),
                number(remedy.value),
                remedy.solution.map_or_else(|| "–".into(), number),
                remedy.unit.clone(),
                remedy.solution.map_or_else(|| "–".into(), |value| fixed(100.0 * (value / remedy.value - 1.0), 1)),
                percent(remedy.cross),
                number(remedy.at),
            ]);
        }
        table.note("one number at a time, within its bounds and a thousandth to a thousand times its value; the design height is held")
    }
}

impl States {
    /// The first and the last state, and where limits are passed.
    pub fn table(&self) -> Table {
        let mut table = Table::new(
            format!("States along {} [{}], {} values", self.path, self.unit, self.values.len()),
            &["value", "heave mm", "pitch deg", "roll deg", "FL N", "FR N", "RL N", "RR N", "status"],
        );
        let count = self.values.len();
        let rows: Vec<usize> = match count {
            0..=12 => (0..count).collect(),
            _ => (0..12).map(|k| k * (count - 1) / 11).collect(),
        };
        for row in rows {
            let mut cells = vec![
                format!("{:.4}", self.values[row]),
                fixed(1e3 * self.attitude[(row, 0)], 1),
                fixed(self.attitude[(row, 1)].to_degrees(), 2),
                fixed(self.attitude[(row, 2)].to_degrees(), 2),
            ];
            cells.extend((0..4).map(|i| fixed(self.tyre_load[(row, i)], 0)));
            cells.push(self.status[row].clone());
            table.row(cells);
        }
        let mut first: Vec<(String, f64)> = Vec::new();
        for (row, passed) in self.passed.iter().enumerate() {
            for name in passed {
                if !first.iter().any(|(known, _)| known == name) {
                    first.push((name.clone(), self.values[row]));
                }
            }
        }
        first.into_iter().fold(table, |table, (name, value)| table.note(format!("{name} is passed from {value:.4} on")))
    }
}

impl Sweep {
    /// Frequency and damping of each branch at its ends.
    pub fn table(&self) -> Table {
        let ends = [self.values.first(), self.values.last()]
            .map(|value| value.map_or_else(String::new, |v| format!("{v:.4e}")));
        let headings: Vec<String> =
            ends.iter().flat_map(|end| [format!("Hz at {end}"), format!("damping % at {end}")]).collect();
        let mut columns: Vec<&str> = vec!["branch"];
        columns.extend(headings.iter().map(String::as_str));
        columns.push("least likeness");
        let mut table =
            Table::new(format!("Sweep of {} [{}], {} values", self.path, self.unit, self.values.len()), &columns);
        let last = self.values.len().saturating_sub(1);
        for (branch, label) in self.label.iter().enumerate() {
            let cell = |value: f64, decimals| if value.is_nan() { "–".into() } else { fixed(value, decimals) };
            let at = |place: usize| {
                [cell(self.frequency[(branch, place)], 3), cell(100.0 * self.damping_ratio[(branch, place)], 1)]
            };
            let ends = [0, last].into_iter().flat_map(at);
            table.row([label.clone()].into_iter().chain(ends).chain([fixed(self.likeness[branch], 3)]));
        }
        table.note("branches are followed by shape; –: not there")
    }
}
