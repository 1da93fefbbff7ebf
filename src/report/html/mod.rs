//! One self-contained page: verdict, sections to step through, limits, findings, sources.
//!
//! Nothing is fetched: style, script and pictures are in the page. Equal pictures are kept once.

mod bars;
mod order;
mod tables;
mod viewer;

use std::collections::BTreeMap;

use maud::{DOCTYPE, Markup, PreEscaped, html};

use super::FlowReport;
use crate::flow::Flow;
use crate::sim::CellTrace;
use crate::verdict::Verdict;

const STYLE: &str = include_str!("style.css");
const SCRIPT: &str = include_str!("script.js");

/// One variant with its grown cells.
#[derive(Debug, Clone, Copy)]
pub struct Grown<'a> {
    /// Which variant, by its index in [`Flow::variants`].
    pub variant: usize,
    /// Its cells.
    pub cells: &'a [CellTrace],
}

/// The whole page.
pub fn page(flow: &Flow, report: &FlowReport, grown: &[Grown]) -> String {
    let body = html! {
        (heading(report))
        main {
            (viewer::section(flow, report, grown))
            (bars::limits(report))
            (tables::sites(report))
            (tables::nets(report))
            (tables::findings(flow, report))
            (order::section(flow))
            (cautions(report))
            (sources(flow, grown))
        }
    };
    document(&report.flow, &body, Some(SCRIPT))
}

/// A page that needs nothing but itself.
pub(crate) fn document(title: &str, body: &Markup, script: Option<&str>) -> String {
    let markup = html! {
        (DOCTYPE)
        html lang="en" {
            head {
                meta charset="utf-8";
                meta name="viewport" content="width=device-width, initial-scale=1";
                title { (title) " – gapwright" }
                style { (PreEscaped(STYLE)) }
            }
            body {
                (body)
                @if let Some(script) = script { script { (PreEscaped(script)) } }
            }
        }
    };
    markup.into_string()
}

fn heading(report: &FlowReport) -> Markup {
    let class = match report.verdict {
        Verdict::Pass => "good",
        Verdict::Fail => "bad",
        Verdict::Undecided => "doubtful",
    };
    html! {
        header {
            p.verdict.(class) role="status" { (report.verdict.word()) }
            h1 { (report.flow) }
            @if let Some(title) = &report.title { p.title { (title) } }
            p.faint { code { (report.file) } " · " (report.summary()) }
            @if !report.unjudged_splits().is_empty() {
                p.faint {
                    "Splits not judged (" code { "--splits" } " judges them): "
                    (report.unjudged_splits().join(", "))
                }
            }
        }
    }
}

fn cautions(report: &FlowReport) -> Markup {
    html! {
        section aria-labelledby="cautions" {
            h2 #cautions { "Cautions" }
            ul {
                li {
                    "A planning aid: not a recipe, not a qualification. Figures are estimates for "
                    "drafting and review; the site's own qualification decides."
                }
                @for caution in &report.cautions { li { (caution) } }
            }
        }
    }
}

/// Where the numbers of the materials and processes of the flow come from.
fn sources(flow: &Flow, grown: &[Grown]) -> Markup {
    let mut rows = BTreeMap::new();
    for cell in grown.iter().flat_map(|grown| grown.cells) {
        for body in cell.stages.iter().flat_map(|stage| &stage.section.bodies) {
            let material = flow.library.material(body.material);
            rows.insert(&material.name, &material.source);
        }
    }
    for step in grown.iter().flat_map(|grown| &flow.variants[grown.variant].steps) {
        let process = &step.action.process().process;
        rows.insert(&process.name, &process.source);
    }
    html! {
        section aria-labelledby="sources" {
            h2 #sources { "Sources" }
            details {
                summary { "Where the library's numbers come from" }
                div.scroll tabindex="0" role="group" aria-labelledby="sources" {
                    table {
                        @for (name, source) in &rows {
                            tr { th scope="row" { (name) } td { (source) } }
                        }
                    }
                }
            }
        }
    }
}
