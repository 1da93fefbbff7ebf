//! `block-mask-buried`: a block mask is still there at a film.

use crate::diag::Severity;
use crate::flow::Action;
use crate::sim::Origin;
use super::frame::context::added;
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "block-mask-buried",
    severity: Severity::Error,
    needs: Needs::Order,
    thresholds: &[],
    yields_to: &[],
    page: include_str!("../../docs/rules/block-mask-buried.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    let mut told = Vec::new();
    for moment in context.moments() {
        let Some(film) = added(moment.step) else { continue };
        for body in &moment.before.section.bodies {
            let Origin::Step(mask) = body.origin else { continue };
            let is_mask = matches!(context.variant.steps[mask].action, Action::Mask { .. });
            let label = moment.cell.cell.sites[0].label();
            if !is_mask || told.contains(&(mask, label)) {
                continue;
            }
            told.push((mask, label));
            let message = format!(
                "{} would bury the mask of {}",
                context.name(film),
                context.graph.label(mask),
            );
            let place = body.region.bounds().map_or_else(Default::default, |b| (b.min + b.max) * 0.5);
            let advice = format!("strip {} first", context.name(body.material));
            findings.add(
                Found::on_step(context, moment.index, message)
                    .help(context.order_help(moment.index, &advice))
                    .at_place(moment.cell, place),
            );
        }
    }
}
