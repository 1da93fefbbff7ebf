//! A comparison as tables of words: what text, Markdown and HTML lay out each in its way.

use super::words::place;
use super::{Change, Comparison, Written};

/// One table.
pub(super) struct Table {
    /// Its title.
    pub title: &'static str,
    /// Names of its columns.
    pub head: &'static [&'static str],
    /// Its rows.
    pub rows: Vec<Vec<Cell>>,
}

/// One cell.
pub(super) enum Cell {
    /// Words.
    Words(String),
    /// What stands, or could stand, in a flow.
    Code(String),
}

impl Cell {
    fn words(text: impl Into<String>) -> Self {
        Self::Words(text.into())
    }

    fn statement(written: Option<&Written>) -> Self {
        Self::Code(written.map(|written| written.text.clone()).unwrap_or_default())
    }
}

/// What differs, as tables; those without rows are left out.
pub(super) fn tables(comparison: &Comparison) -> Vec<Table> {
    let all = [
        statements(comparison),
        library(comparison),
        limits(comparison),
        states(comparison),
        findings(comparison),
        figures(comparison),
    ];
    all.into_iter().filter(|table| !table.rows.is_empty()).collect()
}

fn statements(comparison: &Comparison) -> Table {
    let rows = comparison.statements.iter().map(|change| {
        vec![
            Cell::words(change.edit.word()),
            Cell::words(change.place()),
            Cell::statement(change.before.as_ref()),
            Cell::statement(change.after.as_ref()),
        ]
    });
    Table { title: "Text", head: &["edit", "where", "before", "after"], rows: rows.collect() }
}

fn library(comparison: &Comparison) -> Table {
    let said = |text: &Option<String>| Cell::words(text.clone().unwrap_or_default());
    let rows = comparison.library.iter().map(|change| {
        vec![
            Cell::words(&change.entry),
            Cell::words(&change.key),
            said(&change.before),
            said(&change.after),
        ]
    });
    Table { title: "Library", head: &["entry", "key", "before", "after"], rows: rows.collect() }
}

fn limits(comparison: &Comparison) -> Table {
    let news = comparison.limits.iter().filter(|change| change.change.is_news());
    let rows = news.filter_map(|change| {
        let limit = change.limit()?;
        let [before, after] = change.cells();
        Some(vec![
            Cell::Code(limit.text.clone()),
            Cell::words(limit.place()),
            Cell::words(before),
            Cell::words(after),
        ])
    });
    let head = &["limit", "where", "before", "after"];
    Table { title: "Limits whose verdict changed", head, rows: rows.collect() }
}

fn states(comparison: &Comparison) -> Table {
    let news = comparison.states.iter().filter(|change| change.change.is_news());
    let rows = news.map(|change| {
        let state = |state: Option<crate::flow::State>, absent: Change| match state {
            Some(state) => state.name(),
            None if change.change == absent => "–",
            None => "cannot tell",
        };
        vec![
            Cell::words(place(&change.site, change.split.as_deref())),
            Cell::words(state(change.before, Change::New)),
            Cell::words(state(change.after, Change::Gone)),
        ]
    });
    let head = &["space", "before", "after"];
    Table { title: "Spaces whose state changed", head, rows: rows.collect() }
}

fn findings(comparison: &Comparison) -> Table {
    let news = comparison.findings.iter().filter(|change| change.change.is_news());
    let rows = news.filter_map(|change| {
        let finding = change.finding()?;
        Some(vec![
            Cell::words(change.word()),
            Cell::words(finding.word()),
            Cell::words(&finding.rule),
            Cell::words(finding.place()),
            Cell::words(&finding.message),
        ])
    });
    let head = &["change", "severity", "rule", "where", "what"];
    Table { title: "Findings that came or went", head, rows: rows.collect() }
}

fn figures(comparison: &Comparison) -> Table {
    let news = comparison.figures.iter().filter(|change| change.change.is_news());
    let rows = news.map(|change| {
        let [before, after, difference] = change.cells();
        let mut row = vec![Cell::words(change.place()), Cell::words(&change.quantity)];
        let relative = change.relative().unwrap_or_default();
        row.extend([before, after, difference, relative].map(Cell::Words));
        row
    });
    let head = &["where", "figure", "before", "after", "change", "relative"];
    Table { title: "Figures that changed", head, rows: rows.collect() }
}
