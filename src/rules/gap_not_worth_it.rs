//! `gap-not-worth-it`: a void takes little of the space or of the line height.

use crate::diag::Severity;
use super::frame::{Context, Findings, Found, Needs, Rule, Threshold};

pub static RULE: Rule = Rule {
    name: "gap-not-worth-it",
    severity: Severity::Note,
    needs: Needs::Section,
    thresholds: &[
        Threshold { key: "least_share", default: 0.2, meaning: "void area over the space below which the gap gains little" },
        Threshold { key: "least_height_share", default: 0.5, meaning: "void height over line height below which the gap gains little" },
    ],
    yields_to: &["seal-that-fills"],
    page: include_str!("../../docs/rules/gap-not-worth-it.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    let (least_share, least_height) =
        (findings.threshold("least_share"), findings.threshold("least_height_share"));
    for cell in context.cells {
        let end = &cell.stages[cell.stages.len() - 1];
        for space in 0..end.states.len() {
            let voids = super::frame::shape::voids_of(&end.section, space);
            let bounds = voids.iter().filter_map(|void| void.bounds());
            let height = bounds.map(|b| b.max.z.min(end.section.drawn.line_top) - b.min.z.max(0.0));
            let Some(height) = height.reduce(f64::max) else { continue };
            let share = super::frame::shape::void_share(&end.section, space);
            let height_share = height / end.section.drawn.line_top;
            if share >= least_share && height_share >= least_height {
                continue;
            }
            let message = format!(
                "the void takes {:.0} % of the space and {:.0} % of the line height: little is gained",
                100.0 * share,
                100.0 * height_share.max(0.0),
            );
            let closing = (1..cell.stages.len()).rev().find(|&at| {
                cell.stages[at].states[space] != cell.stages[at - 1].states[space]
            });
            let found = match closing.and_then(|at| cell.stages[at].step) {
                Some(step) => Found::on_step(context, step, message),
                None => Found::on_wafer(context, message),
            };
            findings.add(
                found
                    .help("etch deeper, line thinner, seal leaner, or leave this space solid")
                    .in_space(cell, space),
            );
        }
    }
}
