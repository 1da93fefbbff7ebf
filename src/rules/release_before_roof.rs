//! `release-before-roof`: a sacrificial material leaves before what is to bridge it is there.

use crate::diag::Severity;
use crate::flow::{Action, State};
use crate::library::Kind;
use super::frame::context::{added, site_of};
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "release-before-roof",
    severity: Severity::Error,
    needs: Needs::Order,
    thresholds: &[],
    yields_to: &[],
    page: include_str!("../../docs/rules/release-before-roof.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for moment in context.moments() {
        let Action::Release { material, .. } = moment.step.action else { continue };
        let later = &context.variant.steps[moment.index + 1..];
        if context.material(material).kind != Kind::Sacrificial
            || !later.iter().any(|step| added(step).is_some())
        {
            continue;
        }
        for space in moment.spaces() {
            let opened = moment.before.states[space] != State::Open
                && moment.after.states[space] == State::Open;
            if !opened || context.open_by_limit(site_of(moment.cell, space)) {
                continue;
            }
            let message = format!(
                "{} leaves with nothing above it: what is to bridge the space comes later",
                context.name(material),
            );
            findings.add(
                Found::on_step(context, moment.index, message)
                    .help(context.order_help(moment.index, "put a cap that lets the gas pass first"))
                    .in_space(moment.cell, space),
            );
        }
    }
}
