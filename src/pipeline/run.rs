//! Runs a flow and judges it: grow, measure, hold against rules and limits.

use std::sync::Arc;

use super::corners::Corners;
use super::refine::{Levels, refine};
use crate::diag::{Diagnostic, Severity};
use crate::flow::{Against, Flow, Variant};
use crate::graph::Graph;
use crate::measure::MeasureError;
use crate::measure::{Fineness, Measured, Traces, Wanted};
use crate::num::tolerance::ACCURACY;
use crate::report::{FindingReport, FlowReport};
use crate::rules::{self, Finding};
use crate::sim::{CellTrace, SimError, Simulator};
use crate::verdict;

/// What is asked of a run.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Options {
    /// Accuracy wanted (`--accuracy`).
    pub accuracy: f64,
    /// Whether splits are judged too.
    pub splits: bool,
    /// Whether the corners of the tolerances are judged too.
    pub corners: bool,
}

impl Default for Options {
    fn default() -> Self {
        Self { accuracy: ACCURACY, splits: false, corners: false }
    }
}

/// Why a run could not end.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum RunError {
    /// The flow asks for what cannot be; a message about its text.
    #[error("{}", .0.message)]
    Unusable(Diagnostic),
    /// A check of the program on itself failed; no figure can be trusted.
    #[error("{0}")]
    Internal(String),
}

impl From<SimError> for RunError {
    fn from(error: SimError) -> Self {
        match error.diagnostic() {
            Some(diagnostic) => Self::Unusable(diagnostic),
            None => Self::Internal(error.to_string()),
        }
    }
}

impl From<MeasureError> for RunError {
    fn from(error: MeasureError) -> Self {
        match error {
            MeasureError::Sim(error) => error.into(),
            error => Self::Internal(error.to_string()),
        }
    }
}

/// One variant, grown at two resolutions.
#[derive(Debug, Clone)]
pub struct Run {
    /// Which variant, by its index in [`Flow::variants`].
    pub variant: usize,
    /// Its cells, coarse.
    pub coarse: Vec<CellTrace>,
    /// The same at half the facet.
    pub fine: Vec<CellTrace>,
}

/// A judged flow, with the sections that it was judged by.
#[derive(Debug, Clone)]
pub struct Judged {
    /// The report.
    pub report: FlowReport,
    /// The judged variants first, then those that limits refer to.
    pub runs: Vec<Run>,
}

/// Told of cell-steps done out of all known so far.
pub type Progress<'a> = dyn Fn(usize, usize) + Sync + 'a;

/// Variants to judge, by index: the unsplit flow, and on demand the splits that are not merely
/// references.
fn judged_variants(flow: &Flow, splits: bool) -> Vec<usize> {
    let references = references(flow);
    let count = if splits { flow.variants.len() } else { 1 };
    (0..count).filter(|at| *at == 0 || !references.contains(at)).collect()
}

/// Splits that limits refer to, by index, each once.
pub(super) fn references(flow: &Flow) -> Vec<usize> {
    let split = |against: &Option<Against>| match against {
        Some(Against::Split(at)) => Some(*at),
        _ => None,
    };
    let mut all: Vec<_> = flow.limits.iter().filter_map(|limit| split(&limit.against)).collect();
    all.sort_unstable();
    all.dedup();
    all
}

/// Grows the variants that a judgement needs, without judging.
///
/// # Errors
/// See [`RunError`].
pub fn trace(flow: &Flow, options: &Options, progress: &Progress) -> Result<Vec<Run>, RunError> {
    let simulator = Simulator::new(Arc::clone(&flow.library));
    let runs = grow_all(flow, options, &simulator, progress)?.0;
    Ok(runs)
}

fn grow_all(
    flow: &Flow,
    options: &Options,
    simulator: &Simulator,
    progress: &Progress,
) -> Result<(Vec<Run>, Levels), RunError> {
    let judged = judged_variants(flow, options.splits);
    let more = references(flow).into_iter().filter(|at| !judged.contains(at));
    let wanted: Vec<_> = judged.iter().copied().chain(more).collect();
    refine(flow, &wanted, options.accuracy, simulator, progress)
}

/// Runs a flow and judges it.
///
/// # Errors
/// See [`RunError`].
pub fn judge(flow: &Flow, options: &Options, progress: &Progress) -> Result<Judged, RunError> {
    let simulator = Simulator::new(Arc::clone(&flow.library));
    let (runs, levels) = grow_all(flow, options, &simulator, progress)?;
    let judged = judged_variants(flow, options.splits);
    let mut report = FlowReport::of(flow);
    let mut findings = Vec::new();
    let grow = |variant: &Variant, fineness: Fineness| {
        let grain = match fineness {
            Fineness::Coarse => levels.coarse,
            Fineness::Fine => levels.fine,
        };
        simulator.run(variant, &grain, &|_, _| ())
    };
    let wanted =
        Wanted { electrical: true, closing_space: false, field_accuracy: options.accuracy / 2.0 };
    for (place, &index) in judged.iter().enumerate() {
        let variant = &flow.variants[index];
        let mut traces: Vec<_> = runs.iter().map(Run::traces).collect();
        traces.swap(0, place);
        let measured = Measured::of(flow, &traces, &wanted, &grow)?;
        let sites = measured.site_figures()?;
        let graph = Graph::of(flow, variant);
        let cells = &runs[place].fine;
        let context = rules::Context::new(flow, variant, &graph, cells, &sites);
        let limits = verdict::judge(flow, variant, &measured);
        let mut found = rules::check(&context);
        if options.corners {
            let corners = Corners {
                flow,
                variant: index,
                simulator: &simulator,
                grain: levels.coarse,
                field_accuracy: wanted.field_accuracy,
            };
            let broken = corners.broken(&limits, &found)?;
            found.extend(rules::corner_fails(&context, &broken));
        }
        findings.extend(found);
        report.limits.extend(limits);
        report.nets.extend(measured.net_reports());
        report.sites.extend(sites);
    }
    report.findings = finished(flow, &judged, findings, options.corners);
    let failing = |f: &FindingReport| f.severity == Severity::Error && !f.waived;
    report.verdict = verdict::overall(report.findings.iter().any(failing), &report.limits);
    Ok(Judged { report, runs })
}

impl Run {
    fn traces(&self) -> Traces<'_> {
        Traces { variant: self.variant, coarse: &self.coarse, fine: &self.fine }
    }
}

fn finished(
    flow: &Flow,
    judged: &[usize],
    findings: Vec<Finding>,
    corners: bool,
) -> Vec<FindingReport> {
    let finished = rules::finish(flow, judged, corners, findings);
    finished.iter().map(|finding| FindingReport::of(flow, finding)).collect()
}
