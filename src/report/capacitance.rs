//! The answer of `field`: Maxwell's matrix with its bounds, as JSON and as a table.

use std::fmt::Write as _;

use serde::Serialize;

use crate::field::{Capacitance, Matrix};

/// Version of the JSON form.
const SCHEMA: u32 = 1;

/// A solved section, serialised as `field` answers.
#[derive(Debug, Serialize)]
pub struct CapacitanceReport<'a> {
    schema: u32,
    electrodes: &'a [String],
    matrix_af_per_um: Bounded<'a>,
    converged: bool,
    triangles: usize,
}

#[derive(Debug, Serialize)]
struct Bounded<'a> {
    values: &'a Matrix,
    low: &'a Matrix,
    high: &'a Matrix,
}

impl<'a> CapacitanceReport<'a> {
    /// The report of a solved section.
    pub fn new(electrodes: &'a [String], solved: &'a Capacitance) -> Self {
        Self {
            schema: SCHEMA,
            electrodes,
            matrix_af_per_um: Bounded {
                values: &solved.value,
                low: &solved.low,
                high: &solved.high,
            },
            converged: solved.converged,
            triangles: solved.triangles,
        }
    }

    /// As JSON, with a line end.
    pub fn json(&self) -> String {
        let mut text = serde_json::to_string_pretty(self).unwrap_or_default();
        text.push('\n');
        text
    }

    /// As a table for people.
    pub fn text(&self) -> String {
        let cell = |i: usize, j: usize| {
            let value = self.matrix_af_per_um.values[i][j];
            let half = 0.5 * (self.matrix_af_per_um.high[i][j] - self.matrix_af_per_um.low[i][j]);
            // What rounds to nothing has no sign.
            let value = if value.abs() < 5e-4 { 0.0 } else { value };
            format!("{value:.3} ± {half:.3}")
        };
        let n = self.electrodes.len();
        let wide = |text: &str| text.chars().count();
        let first = self.electrodes.iter().map(|name| wide(name)).max().unwrap_or(0);
        let width = |j: usize| {
            (0..n).map(|i| wide(&cell(i, j))).max().unwrap_or(0).max(wide(&self.electrodes[j]))
        };
        let widths: Vec<usize> = (0..n).map(width).collect();
        let mut text =
            String::from("Capacitance matrix (Maxwell), aF/um, proven to lie within ±\n\n");
        let _ = write!(text, "{:first$}", "");
        for (name, width) in self.electrodes.iter().zip(&widths) {
            let _ = write!(text, "  {name:>width$}");
        }
        for (i, name) in self.electrodes.iter().enumerate() {
            let _ = write!(text, "\n{name:first$}");
            for (j, width) in widths.iter().enumerate() {
                let _ = write!(text, "  {:>width$}", cell(i, j));
            }
        }
        let _ = write!(text, "\n\n{} triangles", self.triangles);
        text.push_str(if self.converged {
            "\n"
        } else {
            "; the wanted accuracy was not reached\n"
        });
        text
    }
}
