//! Tables of frequency responses.

use super::{Table, fixed};
use crate::frequency::FrequencyResponse;

impl FrequencyResponse {
    /// Largest gain of each output to each road input, and the frequency where it is.
    pub fn table(&self) -> Table {
        let mut columns = vec!["output".to_owned(), "unit".to_owned()];
        columns.extend(self.inputs[..4].iter().map(|name| format!("{name} per m at Hz")));
        let columns: Vec<&str> = columns.iter().map(String::as_str).collect();
        let ends = [self.frequency.first(), self.frequency.last()].map(|f| f.copied().unwrap_or(f64::NAN));
        let title = format!(
            "Frequency response, {} frequencies from {} to {} Hz: largest gains",
            self.frequency.len(),
            fixed(ends[0], 3),
            fixed(ends[1], 1)
        );
        let mut table = Table::new(title, &columns);
        for (row, (name, unit)) in self.outputs.iter().zip(&self.output_units).enumerate() {
            let mut cells = vec![name.clone(), unit.clone()];
            for column in 0..4 {
                let gains =
                    self.frequency.iter().enumerate().map(|(k, f)| (self.response[(row, column, k)].norm(), *f));
                let most = gains.fold((0.0, f64::NAN), |best, next| if next.0 > best.0 { next } else { best });
                cells.push(format!("{:.3e} at {}", most.0, fixed(most.1, 2)));
            }
            table.row(cells);
        }
        table
    }
}
