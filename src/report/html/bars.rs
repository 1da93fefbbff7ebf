//! Limits with their margins as bars: how far inside, or outside, each figure lies.

use maud::{Markup, html};

use crate::flow::{Dimension, Quantity};
use crate::report::figures::{amount, figure};
use crate::report::{FlowReport, LimitReport};

/// One row a limit; the bar is the margin over the limit's own size, full at the whole of it.
pub(super) fn limits(report: &FlowReport) -> Markup {
    html! {
        @if !report.limits.is_empty() {
            section aria-labelledby="limits" {
                h2 #limits { "Limits" }
                div.scroll {
                    table {
                        thead { tr { @for name in ["", "limit", "where", "figure", "margin", ""] { th scope="col" { (name) } } } }
                        tbody { @for limit in &report.limits { (row(limit)) } }
                    }
                }
            }
        }
    }
}

fn row(limit: &LimitReport) -> Markup {
    let (class, word) = match limit.holds {
        Some(true) => ("good", "holds"),
        Some(false) => ("bad", "broken"),
        None => ("doubtful", "cannot tell"),
    };
    let dimension = dimension(limit);
    let place = match (&limit.site, &limit.split) {
        (Some(site), Some(split)) => format!("{site} in {split}"),
        (Some(one), None) | (None, Some(one)) => one.clone(),
        (None, None) => String::new(),
    };
    let value = match (limit.state, limit.value) {
        (Some(state), _) => state.name().to_owned(),
        (None, Some(value)) => figure(value, dimension),
        (None, None) => "–".to_owned(),
    };
    html! {
        tr {
            td { span.word.(class) { (word) } }
            th scope="row" { code { (limit.text) } }
            td { (place) }
            td { (value) }
            td { (limit.margin.map_or(String::new(), |margin| amount(margin, dimension))) }
            td { (bar(limit)) @if let Some(note) = &limit.note { " " span.faint { (note) } } }
        }
    }
}

fn bar(limit: &LimitReport) -> Markup {
    let (Some(margin), Some(value)) = (limit.margin, limit.value) else { return html! {} };
    let bound = if limit.text.contains("<=") { value.value + margin } else { value.value - margin };
    let share =
        if bound == 0.0 { margin.signum() } else { (margin / bound.abs()).clamp(-1.0, 1.0) };
    let class = if share < 0.0 { "bad" } else { "good" };
    let start = if share < 0.0 { 50.0 * (1.0 + share) } else { 50.0 };
    html! {
        svg.bar viewBox="0 0 100 10" width="120" height="12" role="img"
            aria-label={ "margin " (format!("{:.0}", 100.0 * share)) " percent of the limit" } {
            rect.(class) x=(format!("{start:.1}")) y="1" width=(format!("{:.1}", 50.0 * share.abs())) height="8" {}
            line x1="50" x2="50" y1="0" y2="10" {}
        }
    }
}

/// The dimension of the quantity that a limit names.
fn dimension(limit: &LimitReport) -> Dimension {
    let name = limit.text.split_whitespace().next().unwrap_or_default();
    let quantity = Quantity::ALL.iter().find(|quantity| quantity.name() == name);
    quantity.map_or(Dimension::One, |quantity| quantity.dimension())
}
