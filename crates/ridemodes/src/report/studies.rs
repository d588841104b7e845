//! Tables of sweeps and of decoupling.

use super::{Table, fixed, percent};
use crate::decoupling::Decoupling;
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
