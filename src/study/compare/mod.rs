//! Two flows, or two revisions of one: what changed in the text, and what that did to every
//! figure, limit and finding.
//!
//! Pure functions of two loaded flows and their reports. A figure counts as changed only where
//! the numerical errors of the two do not meet: noise is not called change.

mod figures;
mod findings;
mod html;
mod library;
mod limits;
mod markdown;
mod model;
mod paired;
mod sections;
mod statements;
mod tables;
mod text;
mod words;

pub use model::*;
pub use sections::{Sections, sections};

use crate::flow::Flow;
use crate::report::FlowReport;

/// One of the two that are compared.
#[derive(Debug, Clone, Copy)]
pub struct Judged<'a> {
    /// What it is called: a file, or a file at a revision.
    pub name: &'a str,
    /// The flow.
    pub flow: &'a Flow,
    /// Its report.
    pub report: &'a FlowReport,
}

/// Sets two judged flows side by side.
pub fn compare(before: Judged, after: Judged) -> Comparison {
    let side = |judged: &Judged| Side {
        name: judged.name.to_owned(),
        flow: judged.report.flow.clone(),
        verdict: judged.report.verdict,
        summary: judged.report.summary(),
    };
    Comparison {
        schema: SCHEMA_VERSION,
        tool: format!("gapwright {}", env!("CARGO_PKG_VERSION")),
        before: side(&before),
        after: side(&after),
        statements: statements::changes(&before.flow.source, &after.flow.source),
        library: library::changes(&before.flow.library, &after.flow.library),
        limits: limits::changes(&before.report.limits, &after.report.limits),
        states: figures::states(before.report, after.report),
        figures: figures::changes(before.report, after.report),
        findings: findings::changes(&before.report.findings, &after.report.findings),
    }
}
