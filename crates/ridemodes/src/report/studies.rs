//! Tables of sweeps and of decoupling.

use super::{Table, fixed, percent};
use crate::decoupling::Decoupling;
use crate::readings::{PATTERN_NAMES, Readings, WheelRates};
use crate::states::States;
use crate::sweep::Sweep;
use crate::units::STANDARD_GRAVITY;

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

impl Readings {
    /// Several readings side by side, e.g. slow, fast and without oil, with the name of each.
    pub fn table(columns: &[(&str, &Self)]) -> Table {
        let mut headings = vec!["reading"];
        headings.extend(columns.iter().map(|(name, _)| *name));
        let mut table = Table::new("Handling readings", &headings);
        let g = STANDARD_GRAVITY;
        let mut line = |name: &str, of: &dyn Fn(&Self) -> String| {
            let cells = columns.iter().map(|(_, readings)| of(readings));
            table.row([name.to_owned()].into_iter().chain(cells));
        };
        line("roll gradient deg/g", &|r| fixed(r.roll_gradient.to_degrees() * g, 3));
        line("pitch in braking deg/g", &|r| fixed(r.braking_gradient.to_degrees() * g, 3));
        line("pitch in drive deg/g", &|r| fixed(r.driving_gradient.to_degrees() * g, 3));
        line("load transfer front %", &|r| percent(r.front_transfer));
        line("tyre load per mm of twist N", &|r| fixed(1e-3 * r.load_per_twist[0], 2));
        line("tyre load per mm of one raised front wheel N", &|r| fixed(1e-3 * r.load_per_height[(0, 0)], 2));
        line("tyre load per mm of one raised rear wheel N", &|r| fixed(1e-3 * r.load_per_height[(2, 2)], 2));
        line("twist at first wheel lift mm", &|r| fixed(1e3 * r.twist_at_lift, 1));
        line("lateral at first wheel lift m/s²", &|r| fixed(r.lateral_at_lift, 2));
        line("side slope at first wheel lift deg", &|r| fixed(r.slope_at_lift.to_degrees(), 1));
        line("cross weight %", &|r| percent(r.cross_weight));
        line("cross weight kg", &|r| fixed(r.cross_weight * r.mass, 1));
        line("lift at 5 m/s² mm", &|r| fixed(1e3 * r.lift_in_corner, 2));
        line("ride frequency front Hz", &|r| fixed(r.ride_frequency[0], 3));
        line("ride frequency rear Hz", &|r| fixed(r.ride_frequency[1], 3));
        let circuits: Vec<String> = columns.first().map_or_else(Vec::new, |(_, readings)| readings.circuits.clone());
        for (i, circuit) in circuits.iter().enumerate() {
            let cell = |values: &[f64]| values.get(i).map_or_else(|| "–".into(), |p| fixed(1e-5 * p * g, 2));
            line(&format!("{circuit} bar per g lateral"), &|r| cell(&r.pressure_per_lateral));
            line(&format!("{circuit} bar per g braking"), &|r| cell(&r.pressure_per_braking));
        }
        table.note("tyres and the leaned body's weight included; the linear ride frequency has the gas by its exponent")
    }
}

impl WheelRates {
    /// Tangent rates over travel.
    pub fn table(&self) -> Table {
        let mut columns = vec!["travel mm".to_owned()];
        columns.extend(PATTERN_NAMES.iter().map(|name| format!("{name} N/mm")));
        let columns: Vec<&str> = columns.iter().map(String::as_str).collect();
        let mut table = Table::new("Wheel rates over travel", &columns);
        for (column, travel) in self.travel.iter().enumerate() {
            let cells = (0..PATTERN_NAMES.len()).map(|row| fixed(1e-3 * self.rate[(row, column)], 2));
            table.row([fixed(1e3 * travel, 1)].into_iter().chain(cells));
        }
        table.note(if self.fast { "gas without heat exchange" } else { "gas at the temperature of its wall" })
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
