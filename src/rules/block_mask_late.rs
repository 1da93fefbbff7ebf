//! `block-mask-late`: a mask comes after the etch that it is to limit.

use crate::diag::Severity;
use crate::flow::Action;
use super::frame::context::is_removal;
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
        let limits_any = later.any(|(_, step)| {
            is_removal(step) || step.action.process().process.ambient.iter().any(|ambient| {
                use crate::library::Ambient::{OxygenPlasma, Plasma};
                matches!(ambient, OxygenPlasma | Plasma)
            })
        });
        let etch = context.steps().take(index).filter(|(_, step)| is_removal(step)).last();
        let Some((etch, _)) = etch.filter(|_| !limits_any) else { continue };
        let message = format!(
            "the mask limits nothing: no etch follows before it goes, and {} is done",
            context.graph.label(etch),
        );
        findings.add(
            Found::on_step(context, index, message)
                .help(context.order_help(index, "put the mask before the etch that it is to limit")),
        );
    }
}
