//! `barrier-after-metal`: a metal that needs a barrier is placed before it.

use crate::diag::Severity;
use crate::flow::Action;
use crate::library::Kind;
use super::frame::context::added;
use super::frame::metal::bare_contacts;
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "barrier-after-metal",
    severity: Severity::Error,
    needs: Needs::Order,
    thresholds: &[],
    yields_to: &[],
    page: include_str!("../../docs/rules/barrier-after-metal.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for contact in bare_contacts(context) {
        let Some(index) = contact.step else { continue };
        let step = &context.variant.steps[index];
        if added(step) != Some(contact.metal) {
            continue;
        }
        let later = context.steps().skip(index + 1).find(|(_, step)| match step.action {
            Action::Deposit { material, .. } => {
                let material = context.material(material);
                material.kind == Kind::Conductor && material.copper_barrier.counts()
            }
            _ => false,
        });
        let Some((barrier, _)) = later else { continue };
        let message = format!(
            "{} comes before its barrier, {}",
            context.name(contact.metal),
            context.graph.label(barrier),
        );
        findings.add(
            Found::on_step(context, index, message)
                .help(context.order_help(index, "put the barrier first"))
                .at_place(contact.cell, contact.place)
                .fact("barrier", contact.length_nm),
        );
    }
}
