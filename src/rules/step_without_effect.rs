//! `step-without-effect`: a step changes nothing at any site.

use crate::diag::Severity;
use crate::flow::Action;
use crate::sim::Event;
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "step-without-effect",
    severity: Severity::Warning,
    needs: Needs::Order,
    thresholds: &[],
    yields_to: &["polish-without-overburden", "open-gap-polished", "release-blocked", "cap-too-tight", "trapped-sacrificial", "block-mask-late"],
    page: include_str!("../../docs/rules/step-without-effect.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for (index, step) in context.steps() {
        let shapes = matches!(
            step.action,
            Action::Deposit { .. }
                | Action::Etch { .. }
                | Action::EtchUntil { .. }
                | Action::Fill { .. }
                | Action::Strip { .. }
                | Action::Release { .. }
                | Action::Polish { .. }
                | Action::PolishUntil { .. }
        );
        let idle = |cell: &crate::sim::CellTrace| {
            let stage = &cell.stages[index + 1];
            !stage.acts || stage.events.iter().any(|event| matches!(event, Event::NoEffect))
        };
        if shapes && context.cells.iter().all(idle) {
            let message = format!("{} changes nothing at any site", context.graph.label(index));
            let help = "take it out, or see what it should have met";
            findings.add(Found::on_step(context, index, message).help(help));
        }
    }
}
