//! Tables for people: text for terminals, HTML for notebooks, units in the headings.

mod frequency;
mod modes;
mod motions;
mod sensitivities;
mod studies;
mod vehicle;

use std::fmt;

use serde::{Deserialize, Serialize};

/// The caution that goes with results.
pub const CAUTION: &str = "For engineering judgement, not a release to the road: prove a vehicle with changed suspension by test, \
under local rules and by qualified people. Pressurised accumulators can injure; charge and service them by their maker's instructions.";

/// A table with a title, headings that carry the units, and notes below.
#[derive(Clone, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct Table {
    /// Title.
    pub title: String,
    /// Headings.
    pub columns: Vec<String>,
    /// Rows of cells.
    pub rows: Vec<Vec<String>>,
    /// Notes below the table.
    pub notes: Vec<String>,
}

/// Several tables that belong together.
#[derive(Clone, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct Tables(pub Vec<Table>);

impl Table {
    fn new(title: impl Into<String>, columns: &[&str]) -> Self {
        Self {
            title: title.into(),
            columns: columns.iter().map(ToString::to_string).collect(),
            rows: Vec::new(),
            notes: Vec::new(),
        }
    }

    fn row(&mut self, cells: impl IntoIterator<Item = String>) {
        self.rows.push(cells.into_iter().collect());
    }

    fn note(mut self, note: impl Into<String>) -> Self {
        self.notes.push(note.into());
        self
    }

    // Numbers stand to the right, text to the left.
    fn is_numeric(&self, column: usize) -> bool {
        let number = |cell: &String| {
            cell.chars().next().is_none_or(|first| first.is_ascii_digit() || matches!(first, '-' | '–'))
                || cell == AT_INFINITY
        };
        column > 0 && self.rows.iter().filter_map(|row| row.get(column)).all(number)
    }

    /// The table as HTML.
    pub fn to_html(&self) -> String {
        let sides: Vec<&str> =
            (0..self.columns.len()).map(|column| if self.is_numeric(column) { "right" } else { "left" }).collect();
        let mut html =
            format!("<table><caption style=\"text-align:left\">{}</caption><thead><tr>", escape(&self.title));
        for (place, column) in self.columns.iter().enumerate() {
            html.push_str(&format!("<th style=\"text-align:{}\">{}</th>", sides[place], escape(column)));
        }
        html.push_str("</tr></thead><tbody>");
        for row in &self.rows {
            html.push_str("<tr>");
            for (place, cell) in row.iter().enumerate() {
                html.push_str(&format!("<td style=\"text-align:{}\">{}</td>", sides[place], escape(cell)));
            }
            html.push_str("</tr>");
        }
        html.push_str("</tbody></table>");
        for note in &self.notes {
            html.push_str(&format!("<p>{}</p>", escape(note)));
        }
        html
    }
}

impl Tables {
    /// The tables as HTML, one below the other.
    pub fn to_html(&self) -> String {
        self.0.iter().map(Table::to_html).collect()
    }
}

fn escape(text: &str) -> String {
    text.replace('&', "&amp;").replace('<', "&lt;").replace('>', "&gt;").replace('"', "&quot;")
}

impl fmt::Display for Table {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let count = |text: &str| text.chars().count();
        let width: Vec<usize> = (0..self.columns.len())
            .map(|place| {
                let cells = self.rows.iter().filter_map(|row| row.get(place)).map(|cell| count(cell));
                cells.chain([count(&self.columns[place])]).max().unwrap_or(0)
            })
            .collect();
        let right: Vec<bool> = (0..self.columns.len()).map(|column| self.is_numeric(column)).collect();
        let line = |cells: &[String]| {
            let mut text = String::new();
            for (place, cell) in cells.iter().enumerate() {
                let pad = " ".repeat(width[place].saturating_sub(count(cell)));
                if place > 0 {
                    text.push_str("  ");
                }
                text.push_str(&if right[place] { format!("{pad}{cell}") } else { format!("{cell}{pad}") });
            }
            text.trim_end().to_owned()
        };
        writeln!(f, "{}", self.title)?;
        writeln!(f, "{}", line(&self.columns))?;
        writeln!(f, "{}", "─".repeat(width.iter().sum::<usize>() + 2 * width.len().saturating_sub(1)))?;
        for row in &self.rows {
            writeln!(f, "{}", line(row))?;
        }
        for note in &self.notes {
            writeln!(f, "  {note}")?;
        }
        Ok(())
    }
}

impl fmt::Display for Tables {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        for (place, table) in self.0.iter().enumerate() {
            if place > 0 {
                writeln!(f)?;
            }
            write!(f, "{table}")?;
        }
        Ok(())
    }
}

const AT_INFINITY: &str = "at infinity";

/// A number with a fixed number of decimals and no negative zero; what is not finite in words.
fn fixed(value: f64, decimals: usize) -> String {
    if value.is_infinite() {
        return AT_INFINITY.into();
    }
    let text = format!("{value:.decimals$}");
    match text.strip_prefix('-') {
        Some(digits) if digits.chars().all(|c| matches!(c, '0' | '.')) => digits.to_owned(),
        _ => text,
    }
}

fn percent(share: f64) -> String {
    fixed(100.0 * share, 1)
}

fn degrees(angle: f64) -> f64 {
    angle.to_degrees()
}

/// N·m per rad as N·m per degree.
fn per_degree(rate: f64) -> f64 {
    rate.to_radians()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn text_and_html_show_the_same_cells() {
        let mut table = Table::new("A <b>", &["name", "rate N/mm"]);
        table.row(["front".into(), fixed(-0.0001, 2)]);
        let table = table.note("note");
        let text = table.to_string();
        assert!(text.contains("front       0.00"), "{text}");
        assert!(table.to_html().contains("A &lt;b&gt;"));
        assert!(table.to_html().contains("<td style=\"text-align:right\">0.00</td>"));
    }
}
