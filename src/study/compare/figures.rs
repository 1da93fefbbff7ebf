//! Figures and states, before and after.

use super::paired::paired;
use super::{Change, FigureChange, StateChange};
use crate::measure::{Figure, SiteFigures};
use crate::num::tolerance::SAME_FIGURE;
use crate::report::FlowReport;
use crate::report::figures::json_unit;
use crate::report::rows::{Row, rows};

/// Every figure of either report.
pub(super) fn changes(before: &FlowReport, after: &FlowReport) -> Vec<FigureChange> {
    let (old, new) = (rows(before), rows(after));
    let pairs = paired(&old, &new, |row| (row.split, row.place, row.quantity));
    let change = |(before, after)| {
        let row: &Row = Option::or(after, before)?;
        let figure = |row: Option<&Row>| row.map(|row| row.figure);
        let (before, after) = (figure(before), figure(after));
        Some(FigureChange {
            split: row.split.map(str::to_owned),
            place: row.place.to_owned(),
            quantity: row.quantity.to_owned(),
            unit: json_unit(row.dimension).to_owned(),
            dimension: row.dimension,
            change: Change::of(before.as_ref(), after.as_ref(), compare),
            before,
            after,
            difference: before.zip(after).map(|(before, after)| difference(before, after)),
        })
    };
    pairs.into_iter().filter_map(change).collect()
}

/// After less before; the errors add.
fn difference(before: Figure, after: Figure) -> Figure {
    Figure {
        value: after.value - before.value,
        low: after.low - before.high,
        high: after.high - before.low,
    }
}

fn compare(before: &Figure, after: &Figure) -> Change {
    let rounding = SAME_FIGURE * before.value.abs().max(after.value.abs());
    let difference = difference(*before, *after);
    if difference.value.abs() <= rounding {
        Change::Same
    } else if difference.low > 0.0 || difference.high < 0.0 {
        Change::Changed
    } else {
        Change::WithinError
    }
}

/// The state of every space of either report.
pub(super) fn states(before: &FlowReport, after: &FlowReport) -> Vec<StateChange> {
    let pairs =
        paired(&before.sites, &after.sites, |site| (site.split.as_deref(), site.site.as_str()));
    let change = |(before, after)| {
        let site: &SiteFigures = Option::or(after, before)?;
        let same = |before: &SiteFigures, after: &SiteFigures| {
            if before.state == after.state { Change::Same } else { Change::Changed }
        };
        Some(StateChange {
            split: site.split.clone(),
            site: site.site.clone(),
            change: Change::of(before, after, same),
            before: before.and_then(|site| site.state),
            after: after.and_then(|site| site.state),
        })
    };
    pairs.into_iter().filter_map(change).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn noise_is_not_called_change() {
        let change = |a: (f64, f64), b: (f64, f64)| {
            compare(&Figure::within(a.0, a.1), &Figure::within(b.0, b.1))
        };
        assert_eq!(change((10.0, 0.5), (10.8, 0.4)), Change::WithinError);
        assert_eq!(change((10.0, 0.5), (11.0, 0.4)), Change::Changed);
        assert_eq!(change((10.0, 0.0), (10.0, 0.0)), Change::Same);
        assert_eq!(change((10.0, 0.0), (10.0 + 1e-12, 0.0)), Change::Same);
        assert_eq!(change((10.0, 0.0), (10.01, 0.0)), Change::Changed);
        let both = difference(Figure::within(10.0, 0.5), Figure::within(11.0, 0.4));
        assert!((both.value - 1.0).abs() < 1e-12 && (both.high - 1.9).abs() < 1e-12);
    }
}
