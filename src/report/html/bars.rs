//! Limits with their margins as bars: how far inside, or outside, each figure lies.

use maud::{Markup, html};

use crate::report::{FlowReport, LimitReport};

/// One row a limit, those that do not hold first; the bar is the margin over the limit's own size, full at the whole of it.
pub(super) fn limits(report: &FlowReport) -> Markup {
    let mut ordered: Vec<_> = report.limits.iter().collect();
    ordered.sort_by_key(|limit| limit.holds.map_or(1, |holds| if holds { 2 } else { 0 }));
    html! {
        @if !ordered.is_empty() {
            section aria-labelledby="limits" {
                h2 #limits { "Limits" }
                div.scroll tabindex="0" role="group" aria-labelledby="limits" {
                    table {
                        thead { tr { @for name in ["verdict", "limit", "where", "figure", "margin", "of the limit", "note"] { th scope="col" { (name) } } } }
                        tbody { @for limit in &ordered { (row(limit)) } }
                    }
                }
            }
        }
    }
}

fn row(limit: &LimitReport) -> Markup {
    let class = match limit.holds {
        Some(true) => "good",
        Some(false) => "bad",
        None => "doubtful",
    };
    html! {
        tr {
            td { span.word.(class) { (limit.word()) } }
            th scope="row" { code { (limit.text) } }
            td { (limit.place()) }
            td { (limit.shown_value().unwrap_or_else(|| "–".to_owned())) }
            td { (limit.shown_margin().unwrap_or_default()) }
            td { (bar(limit)) }
            td.wide.faint { (limit.note.as_deref().unwrap_or_default()) }
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
