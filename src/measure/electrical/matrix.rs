//! Couplings and totals out of Maxwell matrices, bounds carried along.

use super::conductors::{Conductors, Electrode};
use crate::field::Capacitance;
use crate::measure::reading::Missing;
use crate::measure::{Figure, MatrixFigures};

/// The electrodes that a figure is of: all of a line, or those that answer to one name.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Terminals {
    /// Of the middle line.
    pub line: Vec<usize>,
    /// Of its left neighbour.
    pub left: Vec<usize>,
    /// Of its right neighbour.
    pub right: Vec<usize>,
    /// Planes, bulk, next level.
    pub ground: Option<usize>,
}

impl Terminals {
    /// The terminals of all electrodes of the lines, or of those of one name.
    pub fn of(conductors: &Conductors, between: Option<&str>) -> Result<Self, Missing> {
        let electrodes = conductors.electrodes.iter().enumerate();
        let on = |line: i64| match between {
            Some(name) => {
                conductors.aliases.get(&(line, name.to_owned())).copied().into_iter().collect()
            }
            None => electrodes
                .clone()
                .filter(|(_, e)| matches!(e, Electrode::Line { offset, .. } if *offset == line))
                .map(|(at, _)| at)
                .collect::<Vec<_>>(),
        };
        let ground = electrodes.clone().find(|(_, e)| **e == Electrode::Ground).map(|(at, _)| at);
        let terminals = Self { line: on(0), left: on(-1), right: on(1), ground };
        if terminals.line.is_empty() {
            return Err(Missing::NoSuchElectrode);
        }
        Ok(terminals)
    }

    /// Middle line to its left neighbour, aF/µm.
    pub fn left(&self, c: &Capacitance) -> Figure {
        coupling(c, &self.line, &self.left)
    }

    /// Middle line to its right neighbour, aF/µm.
    pub fn right(&self, c: &Capacitance) -> Figure {
        coupling(c, &self.line, &self.right)
    }

    /// Middle line to both neighbours, aF/µm.
    pub fn coupling(&self, c: &Capacitance) -> Figure {
        plus(self.left(c), self.right(c))
    }

    /// Middle line to planes, bulk and next level, aF/µm.
    pub fn ground(&self, c: &Capacitance) -> Option<Figure> {
        Some(coupling(c, &self.line, &[self.ground?]))
    }

    /// Middle line to everything, aF/µm.
    pub fn total(&self, c: &Capacitance) -> Figure {
        sum(c, &self.line, &self.line)
    }
}

/// Sum of the entries of some rows and columns.
fn sum(c: &Capacitance, rows: &[usize], columns: &[usize]) -> Figure {
    let over = |matrix: &[Vec<f64>]| -> f64 {
        rows.iter().flat_map(|i| columns.iter().map(move |j| matrix[*i][*j])).sum()
    };
    Figure { value: over(&c.value), low: over(&c.low), high: over(&c.high) }
}

/// Minus that sum: how much charge one volt on the columns draws onto the rows.
fn coupling(c: &Capacitance, rows: &[usize], columns: &[usize]) -> Figure {
    sum(c, rows, columns).map(|entry| 0.0 - entry)
}

fn plus(a: Figure, b: Figure) -> Figure {
    Figure { value: a.value + b.value, low: a.low + b.low, high: a.high + b.high }
}

/// A figure over another; both positive.
pub(super) fn ratio(a: Figure, b: Figure) -> Figure {
    Figure { value: a.value / b.value, low: a.low / b.high, high: a.high / b.low }
}

/// What a figure lost against a reference: 1 − a/b.
pub(super) fn loss(a: Figure, reference: Figure) -> Figure {
    ratio(a, reference).map(|ratio| 1.0 - ratio)
}

/// A figure with its bounds moved out by `error`.
pub(super) fn widened(figure: Figure, error: f64) -> Figure {
    Figure { value: figure.value, low: figure.low - error, high: figure.high + error }
}

/// The whole matrix, bounds moved out by the difference to a coarse one of the same electrodes.
pub(super) fn matrix(
    conductors: &Conductors,
    fine: &Capacitance,
    growth: impl Fn(usize, usize) -> f64,
) -> MatrixFigures {
    let moved = |matrix: &[Vec<f64>], sign: f64| {
        let row = |(i, row): (usize, &Vec<f64>)| {
            row.iter().enumerate().map(|(j, entry)| entry + sign * growth(i, j)).collect()
        };
        matrix.iter().enumerate().map(row).collect()
    };
    MatrixFigures {
        electrodes: conductors.electrodes.iter().map(Electrode::label).collect(),
        values: fine.value.clone(),
        low: moved(&fine.low, -1.0),
        high: moved(&fine.high, 1.0),
    }
}
