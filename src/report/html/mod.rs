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
    let markup = html! {
        (DOCTYPE)
        html lang="en" {
            head {
                meta charset="utf-8";
                meta name="viewport" content="width=device-width, initial-scale=1";
                title { (report.flow) " – gapwright" }
                style { (PreEscaped(STYLE)) }
            }
            body {
                (heading(report))
                main {
                    (viewer::section(flow, report, grown))
                    (tables::sites(report))
                    (bars::limits(report))
                    (tables::nets(report))
                    (tables::findings(flow, report))
                    (order::section(flow))
                    (cautions(report))
                    (sources(flow, grown))
                }
                script { (PreEscaped(SCRIPT)) }
            }
        }
    };
    markup.into_string()
}

fn heading(report: &FlowReport) -> Markup {
    let (class, word) = match report.verdict {
        Verdict::Pass => ("good", "PASS"),
        Verdict::Fail => ("bad", "FAIL"),
        Verdict::Undecided => ("doubtful", "UNDECIDED"),
    };
    let broken = report.limits.iter().filter(|limit| limit.holds == Some(false)).count();
    let untold = report.limits.iter().filter(|limit| limit.holds.is_none()).count();
    html! {
        header {
            p.verdict.(class) role="status" { (word) }
            h1 { (report.flow) }
            @if let Some(title) = &report.title { p.title { (title) } }
            p.faint {
                (report.file) " · " (report.limits.len()) " limits, " (broken) " broken"
                @if untold > 0 { ", " (untold) " cannot be told" }
                " · " (report.findings.len()) " findings"
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
                table {
                    @for (name, source) in &rows {
                        tr { th scope="row" { (name) } td { (source) } }
                    }
                }
            }
        }
    }
}
