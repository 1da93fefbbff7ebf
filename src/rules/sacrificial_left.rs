//! `sacrificial-left`: a sacrificial material or a resist is never removed.

use crate::diag::Severity;
use crate::library::Kind;
use crate::sim::Origin;
use super::frame::context::target;
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "sacrificial-left",
    severity: Severity::Error,
    needs: Needs::Order,
    thresholds: &[],
    yields_to: &["resist-cooked", "block-mask-buried"],
    page: include_str!("../../docs/rules/sacrificial-left.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for cell in context.cells {
        let end = &cell.stages[cell.stages.len() - 1];
        for body in &end.section.bodies {
            let material = context.material(body.material);
            let leaves = matches!(material.kind, Kind::Sacrificial | Kind::Resist);
            let removed = context.steps().any(|(_, step)| target(step) == Some(body.material));
            let Some(bounds) = body.region.bounds().filter(|_| leaves && !removed) else {
                continue;
            };
            let message = format!("{} is there at the end: no step removes it", material.name);
            let found = match body.origin {
                Origin::Step(step) => Found::on_step(context, step, message),
                _ => Found::on_wafer(context, message),
            };
            findings.add(
                found
                    .help(format!("release or strip {}, or take a material that may stay", material.name))
                    .at_place(cell, (bounds.min + bounds.max) * 0.5),
            );
        }
    }
}
