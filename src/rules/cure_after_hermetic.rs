//! `cure-after-hermetic`: a cure comes after a hermetic film has closed over its material.

use crate::diag::Severity;
use crate::flow::Action;
use crate::graph::is_hermetic;
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "cure-after-hermetic",
    severity: Severity::Error,
    needs: Needs::Order,
    thresholds: &[],
    yields_to: &[],
    page: include_str!("../../docs/rules/cure-after-hermetic.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for (index, step) in context.steps() {
        let Action::Cure { process, .. } = &step.action else { continue };
        let wanted = &process.process.materials;
        let cured = context.steps().take(index).filter_map(|(at, step)| {
            let material = super::frame::context::added(step)?;
            let listed = wanted.contains(&context.material(material).name);
            let by_fill = wanted.is_empty() && matches!(step.action, Action::Fill { .. });
            (listed || by_fill).then_some((at, material))
        });
        let Some((placed, material)) = cured.last() else { continue };
        let shut = context.steps().take(index).skip(placed + 1).find(|(_, step)| match step.action {
            Action::Deposit { material, thickness, .. } => {
                is_hermetic(&context.flow.library, material, thickness)
            }
            _ => false,
        });
        let Some((shut, _)) = shut else { continue };
        let message = format!(
            "{} is cured after {} has shut it in: its gas cannot leave",
            context.name(material),
            context.graph.label(shut),
        );
        findings.add(
            Found::on_step(context, index, message)
                .help(context.order_help(index, "cure before the hermetic film")),
        );
    }
}
