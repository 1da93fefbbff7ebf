//! CSV of `check` (RFC 4180): one line a figure.

use super::Report;
use super::figures::json_unit;
use super::rows::rows;

impl Report {
    /// Columns flow, split, place, state, quantity, unit, value, low, high; shares are fractions
    /// of one, as in the JSON; low and high bound the numerical error.
    pub fn csv(&self) -> String {
        let mut text = String::from("flow,split,place,state,quantity,unit,value,low,high\n");
        for run in &self.runs {
            for row in rows(run) {
                let figure = row.figure;
                let numbers = [figure.value, figure.low, figure.high].map(|x| x.to_string());
                let words = [
                    run.flow.as_str(),
                    row.split.unwrap_or_default(),
                    row.place,
                    row.state.map_or("", |state| state.name()),
                    row.quantity,
                    json_unit(row.dimension),
                ];
                let cells: Vec<_> = words
                    .into_iter()
                    .chain(numbers.iter().map(String::as_str))
                    .map(quoted)
                    .collect();
                text.push_str(&cells.join(","));
                text.push('\n');
            }
        }
        text
    }
}

/// A cell, in quotes where it must be.
pub(super) fn quoted(cell: &str) -> String {
    if cell.contains([',', '"', '\n', '\r']) {
        format!("\"{}\"", cell.replace('"', "\"\""))
    } else {
        cell.to_owned()
    }
}
