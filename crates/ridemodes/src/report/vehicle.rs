//! Tables of the vehicle and its operating point.

use super::{Table, Tables, degrees, fixed, percent};
use crate::axes::{CORNER_NAMES, CORNERS};
use crate::error::Result;
use crate::statics::{Condition, Limit, OperatingPoint};
use crate::vehicle::Vehicle;

impl Vehicle {
    /// Every number with its path, value and unit.
    pub fn table(&self) -> Table {
        let name = self.name().unwrap_or("vehicle");
        let mut table = Table::new(format!("Vehicle {name}"), &["path", "value", "unit", "meaning"]);
        for parameter in self.parameters() {
            table.row([
                parameter.path,
                significant(parameter.value),
                parameter.unit.to_owned(),
                parameter.meaning.trim_end_matches('.').to_owned(),
            ]);
        }
        if let Some(description) = self.description() {
            table = table.note(description);
        }
        if !self.settings().is_empty() {
            table = table.note(format!("settings: {}", self.settings().join(", ")));
        }
        table
    }
}

fn significant(value: f64) -> String {
    if value != 0.0 && !(1e-3..1e6).contains(&value.abs()) {
        format!("{value:.4e}")
    } else {
        format!("{value:.6}").trim_end_matches('0').trim_end_matches('.').to_owned()
    }
}

impl Vehicle {
    /// Attitude, tyre loads, pressures and passed limits of each load case of the file.
    pub fn case_table(&self) -> Table {
        let cases: Vec<(String, Result<OperatingPoint>)> =
            self.cases().into_iter().map(|name| (name.to_owned(), self.settle_case(name))).collect();
        state_table("Load cases", "case", cases)
    }

    /// The state each single fault leaves the vehicle in, the worst first.
    pub fn fault_table(&self, base: &Condition) -> Table {
        let states = self.fault_states(base).into_iter().map(|(fault, state)| (fault.name(), state)).collect();
        state_table("Faults, the worst first", "fault", states).note(
            "changed, damaged or pressurised parts can injure: judge by test, under local rules, by qualified people",
        )
    }
}

fn state_table(title: &str, what: &str, states: Vec<(String, Result<OperatingPoint>)>) -> Table {
    let columns = [
        what,
        "heave mm",
        "pitch deg",
        "roll deg",
        "most bump mm",
        "most rebound mm",
        "least tyre N",
        "bar abs",
        "passed",
    ];
    let mut table = Table::new(title, &columns);
    for (name, state) in states {
        let point = match state {
            Ok(point) => point,
            Err(error) => {
                let mut cells = vec![name];
                cells.extend((0..7).map(|_| "–".to_owned()));
                cells.push(error.name().to_owned());
                table.row(cells);
                continue;
            }
        };
        let extreme =
            |values: &[f64; 4], pick: fn(f64, f64) -> f64| values.iter().copied().reduce(pick).unwrap_or(f64::NAN);
        let (delta, load) = (point.deflection.as_array(), point.tyre_load.as_array());
        let pressures: Vec<String> = point.pressure.iter().map(|p| fixed(p / 1e5, 1)).collect();
        let passed: Vec<&str> =
            point.limits.iter().filter(|limit| limit.is_passed()).map(|limit| limit.name.as_str()).collect();
        table.row([
            name,
            fixed(1e3 * point.attitude[0], 1),
            fixed(degrees(point.attitude[1]), 2),
            fixed(degrees(point.attitude[2]), 2),
            fixed(1e3 * extreme(delta, f64::max), 1),
            fixed(1e3 * extreme(delta, f64::min), 1),
            fixed(extreme(load, f64::min), 0),
            if pressures.is_empty() { "–".into() } else { pressures.join(" ") },
            if passed.is_empty() { "–".into() } else { passed.join(", ") },
        ]);
    }
    table
}

impl OperatingPoint {
    /// Corner loads and circuits, for people.
    pub fn tables(&self) -> Tables {
        let mut tables = vec![self.corner_table()];
        tables.extend(self.travel_table());
        if !self.circuits.is_empty() {
            tables.push(self.circuit_table());
        }
        tables.extend([self.slow_line_table(), self.closed_off_table(), self.limit_table()].into_iter().flatten());
        Tables(tables)
    }

    /// What carries each corner.
    pub fn corner_table(&self) -> Table {
        let mut table = Table::new(
            format!("Static loads {}", self.condition.words()),
            &[
                "corner",
                "tyre N",
                "sprung N",
                "oil N",
                "spring N (at wheel)",
                "stop N",
                "oil %",
                "force N (in spring)",
                "deflection mm",
            ],
        );
        for corner in CORNERS {
            table.row([
                CORNER_NAMES[corner.index()].replace('_', " "),
                fixed(self.tyre_load[corner], 0),
                fixed(self.corner_load[corner], 0),
                fixed(self.oil_load[corner], 0),
                fixed(self.spring_load[corner], 0),
                fixed(0.0 + self.stop_load[corner], 0),
                percent(self.oil_load[corner] / self.corner_load[corner]),
                fixed(self.spring_preload[corner], 0),
                fixed(1e3 * self.deflection[corner], 1),
            ]);
        }
        let mut table = table.note(format!(
            "heave {} mm, pitch {} deg, roll {} deg from the design height; {} °C",
            fixed(1e3 * self.attitude[0], 1),
            fixed(degrees(self.attitude[1]), 2),
            fixed(degrees(self.attitude[2]), 2),
            fixed(self.temperature - 273.15, 1)
        ));
        if *self.friction.as_array() != [0.0; 4] {
            let bands: Vec<String> = CORNERS
                .iter()
                .map(|&corner| {
                    format!(
                        "{} ± {} N",
                        CORNER_NAMES[corner.index()].replace('_', " "),
                        fixed(self.friction[corner], 0)
                    )
                })
                .collect();
            table = table.note(format!("dry friction holds each corner within its band: {}", bands.join(", ")));
        }
        for warning in &self.warnings {
            table = table.note(format!("warning: {warning}"));
        }
        table
    }

    /// Travel used and left at each corner; none without stops and strokes, and at the design condition.
    pub fn travel_table(&self) -> Option<Table> {
        let mut table = Table::new(
            "Travel used and left",
            &["corner", "deflection mm", "bump stop left mm", "rebound stop left mm", "piston mm", "stroke left mm"],
        );
        let mut any = false;
        for corner in CORNERS {
            let name = corner.name();
            let mut margin = |key: &str| {
                let limit = self.limits.iter().find(|limit| limit.name == format!("{name}.{key}"));
                any |= limit.is_some();
                limit.map_or_else(|| "–".to_owned(), |limit| fixed(1e3 * limit.margin, 1))
            };
            let (bump, rebound, stroke) = (margin("bump_stop"), margin("rebound_stop"), margin("stroke"));
            let piston = self.piston_travel[corner];
            table.row([
                name.replace('_', " "),
                fixed(1e3 * self.deflection[corner], 1),
                bump,
                rebound,
                if piston.is_nan() { "–".into() } else { fixed(1e3 * piston, 1) },
                stroke,
            ]);
        }
        let table = table.note("stops and pistons in their own travel; less than zero: beyond");
        (any && !self.condition.is_design()).then_some(table)
    }

    /// Lines that only balance slowly; none, no table.
    pub fn slow_line_table(&self) -> Option<Table> {
        let mut table = Table::new("Slow lines", &["line", "resistance bar·s/L", "time constant s"]);
        for line in &self.slow_lines {
            table.row([line.name.clone(), fixed(line.resistance * 1e-8, 2), fixed(line.time_constant, 3)]);
        }
        let table =
            table.note("open for a standing vehicle, shut for coupling, motions and undamped modes; wheels held");
        (!self.slow_lines.is_empty()).then_some(table)
    }

    /// Limits that are passed; none, no table.
    pub fn limit_table(&self) -> Option<Table> {
        let mut table = Table::new("Limits passed", &["limit", "value", "bound", "unit"]);
        let passed: Vec<&Limit> = self.limits.iter().filter(|limit| limit.is_passed()).collect();
        for limit in &passed {
            table.row([
                limit.name.clone(),
                format!("{:.4e}", limit.value),
                format!("{:.4e}", limit.limit),
                limit.unit.clone(),
            ]);
        }
        (!passed.is_empty()).then_some(table)
    }

    /// What closed lines have cut off; none, no table.
    pub fn closed_off_table(&self) -> Option<Table> {
        let mut table = Table::new(
            "Oil behind closed lines",
            &["closed", "oil at", "accumulators", "bar abs", "bar gauge", "gives cm³/bar"],
        );
        let list = |names: &[String]| if names.is_empty() { "–".to_owned() } else { names.join(", ") };
        for part in &self.closed_off {
            table.row([
                list(&part.lines),
                match part.nodes.as_slice() {
                    [first, rest @ ..] if !rest.is_empty() => format!("{first} and {} more nodes", rest.len()),
                    nodes => list(nodes),
                },
                list(&part.accumulators),
                fixed(part.pressure / 1e5, 2),
                fixed((part.pressure - self.atmosphere) / 1e5, 2),
                fixed(part.compliance * 1e11, 4),
            ]);
        }
        let table = table.note(
            "oil without an accumulator is trapped: it holds with its own compressibility and the swell of hoses",
        );
        (!self.closed_off.is_empty()).then_some(table)
    }

    /// Pressure and gas of each circuit.
    pub fn circuit_table(&self) -> Table {
        let mut table = Table::new(
            "Accumulators",
            &["accumulator", "bar abs", "bar gauge", "gas cm³", "empty of oil cm³", "empty below bar abs"],
        );
        for state in &self.accumulators {
            table.row([
                state.name.clone(),
                fixed(state.pressure / 1e5, 2),
                fixed((state.pressure - self.atmosphere) / 1e5, 2),
                fixed(1e6 * state.gas_volume, 1),
                fixed(1e6 * state.full_volume, 1),
                fixed(state.empty_pressure / 1e5, 2),
            ]);
        }
        table
    }
}
