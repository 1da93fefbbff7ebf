//! One self-contained page: verdict, sections to step through, limits, findings, sources.
//!
//! Nothing is fetched: style, script and pictures are in the page. Equal pictures are kept once.

mod bars;
mod order;
mod tables;
mod viewer;

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

/// Words that go with a flow: what it makes a reader careful about, where its numbers come from.
#[derive(Debug, Clone, Default)]
pub struct Reading {
    /// Cautions for hazardous steps.
    pub cautions: Vec<String>,
    /// Material or process, and the source of its numbers.
    pub sources: Vec<(String, String)>,
}

/// The whole page.
pub fn page(flow: &Flow, report: &FlowReport, grown: &[Grown], reading: &Reading) -> String {
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
                    (footing(reading))
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

fn footing(reading: &Reading) -> Markup {
    html! {
        section aria-labelledby="cautions" {
            h2 #cautions { "Cautions" }
            ul {
                li { "A planning aid: not a recipe, not a qualification. Figures are estimates for drafting and review; the site's own qualification decides." }
                @for caution in &reading.cautions { li { (caution) } }
            }
        }
        section aria-labelledby="sources" {
            h2 #sources { "Sources" }
            details {
                summary { "Where the library's numbers come from" }
                table {
                    @for (name, source) in &reading.sources {
                        tr { th scope="row" { (name) } td { (source) } }
                    }
                }
            }
        }
    }
}
