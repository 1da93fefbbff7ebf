//! `metal-left-uncapped`: a drifting metal that a polish or a via leaves bare meets something else than its film.

use crate::diag::Severity;
use crate::flow::Action;
use crate::library::MaterialId;
use crate::sim::CellTrace;
use super::frame::context::{added, is_polish};
use super::frame::metal::bare_at_end;
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "metal-left-uncapped",
    severity: Severity::Error,
    needs: Needs::Order,
    thresholds: &[],
    yields_to: &[],
    page: include_str!("../../docs/rules/metal-left-uncapped.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for cell in context.cells {
        for (index, step) in context.steps().filter(|(at, _)| cell.stages[at + 1].acts) {
            let bared = match step.action {
                Action::Via { material, .. } => vec![material],
                _ if is_polish(step) => bared_by(context, cell, index),
                _ => continue,
            };
            for metal in bared.into_iter().filter(|&m| context.material(m).needs_barrier) {
                judge(context, findings, cell, index, metal);
            }
        }
    }
}

/// Metals that a polish bared: the next step finds them exposed, the polish did not.
fn bared_by(context: &Context<'_>, cell: &CellTrace, index: usize) -> Vec<MaterialId> {
    let before: Vec<_> = cell.stages[index + 1].exposed_before.iter().map(|e| e.material).collect();
    let next = cell.stages[index + 2..].iter().find(|stage| stage.acts);
    let after: Vec<_> = match next {
        Some(stage) => stage.exposed_before.iter().map(|e| e.material).collect(),
        None => bare_at_end(context, cell).into_iter().map(|(metal, _)| metal).collect(),
    };
    after.into_iter().filter(|metal| !before.contains(metal)).collect()
}

/// Follows bare metal from the step after the one that bared it.
fn judge(
    context: &Context<'_>,
    findings: &mut Findings<'_>,
    cell: &CellTrace,
    bared: usize,
    metal: MaterialId,
) {
    let name = context.name(metal);
    let later = context.steps().skip(bared + 1).filter(|(at, _)| cell.stages[at + 1].acts);
    for (index, step) in later {
        if matches!(step.action, Action::Clean { .. }) || is_polish(step) {
            continue;
        }
        if added(step).is_none() {
            let message = format!(
                "{name} bared by {} meets {} without a film over it",
                context.graph.label(bared),
                context.graph.label(index),
            );
            let advice = format!("cap it right after {}", context.graph.op(bared));
            findings.add(
                Found::on_step(context, bared, message)
                    .help(context.order_help(bared, &advice))
                    .in_space(cell, 0)
                    .fact("met", 0.0),
            );
        }
        return;
    }
    findings.add(
        Found::on_step(context, bared, format!("{name} is bare when the flow ends"))
            .help("cover it with a film that holds it, a nitride or carbonitride cap")
            .in_space(cell, 0)
            .fact("left", 0.0),
    );
}
