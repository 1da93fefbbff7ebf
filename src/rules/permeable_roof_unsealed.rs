//! `permeable-roof-unsealed`: a void has a way out through materials that let moisture pass.

use crate::diag::Severity;
use crate::flow::State;
use crate::sim::CellTrace;
use super::frame::context::{is_wet, site_of};
use super::frame::shape::space_of;
use super::frame::ways::breathes;
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "permeable-roof-unsealed",
    severity: Severity::Error,
    needs: Needs::Order,
    thresholds: &[],
    yields_to: &[],
    page: include_str!("../../docs/rules/permeable-roof-unsealed.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for cell in context.cells {
        let wet = |&(index, step): &(usize, _)| is_wet(step) && cell.stages[index + 1].acts;
        let judged = context.steps().filter(wet).map(|(index, _)| (index, Some(index)));
        let judged: Vec<_> = judged.chain([(context.variant.steps.len(), None)]).collect();
        for (stage, step) in judged {
            if judge(context, findings, cell, stage, step) {
                break;
            }
        }
    }
}

/// Judges the voids of one stage; whether any breathes.
fn judge(
    context: &Context<'_>,
    findings: &mut Findings<'_>,
    cell: &CellTrace,
    stage: usize,
    step: Option<usize>,
) -> bool {
    let section = &cell.stages[stage].section;
    let mut any = false;
    for void in &section.voids {
        let space = space_of(section, void);
        let hermetic = cell.stages[stage].states[space] == State::Hermetic;
        if hermetic || context.open_by_limit(site_of(cell, space)) {
            continue;
        }
        let Some(through) = breathes(context, section, void) else { continue };
        any = true;
        let last = closing_step(cell, space, stage);
        let words = match step {
            Some(_) => "a liquid comes while moisture can reach the void",
            None => "at the end moisture can still reach the void",
        };
        let message = format!("{words} through {}", context.name(through));
        let found = match step.or(last) {
            Some(step) => Found::on_step(context, step, message),
            None => Found::on_wafer(context, message),
        };
        findings.add(
            found
                .help("cover it with a hermetic film of some 10 nm first")
                .in_space(cell, space),
        );
    }
    any
}

/// The step that shut the space that holds the void.
fn closing_step(cell: &CellTrace, space: usize, stage: usize) -> Option<usize> {
    (1..=stage).rev().find_map(|at| {
        let closed = cell.stages[at].states[space] != cell.stages[at - 1].states[space];
        closed.then_some(cell.stages[at].step).flatten()
    })
}
