//! `polish-without-overburden`: a polish finds nothing that was added since the last one.

use crate::diag::Severity;
use crate::flow::Action;
use crate::sim::Event;
use super::frame::context::is_polish;
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "polish-without-overburden",
    severity: Severity::Warning,
    needs: Needs::Order,
    thresholds: &[],
    yields_to: &["open-gap-polished", "space-not-sealed", "via-before-seal"],
    page: include_str!("../../docs/rules/polish-without-overburden.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    let mut overburden = !context.variant.wafer.over.is_empty();
    for (index, step) in context.steps() {
        if !is_polish(step) {
            let adds = matches!(
                step.action,
                Action::Deposit { .. } | Action::Fill { .. } | Action::Via { .. }
            );
            overburden |= adds;
            continue;
        }
        let untouched = |cell: &crate::sim::CellTrace| {
            cell.stages[index + 1].events.iter().any(|event| matches!(event, Event::NoEffect))
        };
        let above = context.cells.iter().all(untouched);
        if !overburden || above {
            let message = if overburden {
                "the plane lies above the surface: the polish takes nothing off"
            } else {
                "nothing was added since the last polish"
            };
            let advice = "lower the plane, or put the film that it levels first";
            findings.add(
                Found::on_step(context, index, message).help(context.order_help(index, advice)),
            );
        }
        overburden = false;
    }
}
