//! `block-mask-late`: a mask comes after the etch that it is to limit.

use crate::diag::Severity;
use crate::flow::Action;
use super::frame::context::{is_removal, target};
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "block-mask-late",
    severity: Severity::Error,
    needs: Needs::Order,
    thresholds: &[],
    yields_to: &[],
    page: include_str!("../../docs/rules/block-mask-late.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for (index, step) in context.steps() {
        let Action::Mask { material, .. } = step.action else { continue };
        let mut later = context.steps().skip(index + 1).take_while(|(_, step)| {
            !matches!(step.action, Action::Strip { material: stripped, .. } if stripped == material)
        });
        // A mask may as well spare its sites from a clean's chemistry.
        let limits_any = later
            .any(|(_, step)| is_removal(step) || matches!(step.action, Action::Clean { .. }));
        if limits_any {
            continue;
        }
        let removal = |(_, step): &(usize, &crate::flow::Step)| is_removal(step) && target(step) != Some(material);
        let before = context.steps().take(index).filter(removal).last();
        let after = || context.steps().skip(index + 1).find(removal);
        let Some((etch, _)) = before.or_else(after) else { continue };
        let message = format!(
            "the mask limits nothing: {} is done {} it is there",
            context.graph.label(etch),
            if etch < index { "before" } else { "when no longer" },
        );
        findings.add(
            Found::on_step(context, index, message)
                .help(context.order_help(index, "put the mask before the etch that it is to limit")),
        );
    }
}
