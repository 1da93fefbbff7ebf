//! `via-before-seal`: a via is opened before its level is closed.

use crate::diag::Severity;
use crate::flow::{Action, State};
use super::frame::context::site_of;
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "via-before-seal",
    severity: Severity::Error,
    needs: Needs::Order,
    thresholds: &[],
    yields_to: &[],
    page: include_str!("../../docs/rules/via-before-seal.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for (index, step) in context.steps() {
        if !matches!(step.action, Action::Via { .. }) {
            continue;
        }
        for cell in context.cells {
            for space in 0..cell.stages[0].states.len() {
                let later = cell.stages[index..].iter().any(|s| s.states[space] == State::Open);
                if !later || context.open_by_limit(site_of(cell, space)) {
                    continue;
                }
                let advice = "open vias once every space of the level is closed";
                findings.add(
                    Found::on_step(context, index, "the via is opened before its level is closed")
                        .help(context.order_help(index, advice))
                        .in_space(cell, space),
                );
            }
        }
    }
}
