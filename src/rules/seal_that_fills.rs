//! `seal-that-fills`: a seal leaves a space solid, or nearly so.

use crate::diag::Severity;
use crate::flow::{Action, Role, State};
use super::frame::context::site_of;
use super::frame::shape::{drawn_width, void_share};
use super::frame::{Context, Findings, Found, Needs, Rule, Threshold};

pub static RULE: Rule = Rule {
    name: "seal-that-fills",
    severity: Severity::Warning,
    needs: Needs::Material,
    thresholds: &[
        Threshold { key: "least_share", default: 0.1, meaning: "void area over the drawn space below which a seal has filled it" },
    ],
    yields_to: &[],
    page: include_str!("../../docs/rules/seal-that-fills.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    let least = findings.threshold("least_share");
    for moment in context.moments() {
        let Action::Deposit { role: Role::Seal, thickness, .. } = moment.step.action else {
            continue;
        };
        for space in moment.spaces() {
            // A wide space fills from its floor; it is not closed from its sides.
            let sides_meet = drawn_width(&moment.before.section, space) <= 2.0 * thickness.nominal.nm();
            let closed = moment.before.states[space] == State::Open
                && moment.after.states[space] != State::Open
                && sides_meet;
            if !closed || context.solid_by_limit(site_of(moment.cell, space)) {
                continue;
            }
            let share = void_share(&moment.after.section, space);
            if share >= least {
                continue;
            }
            let message = if share == 0.0 {
                "the seal fills the space: no void is left".to_owned()
            } else {
                format!("the seal all but fills the space: the void is {:.0} % of it", 100.0 * share)
            };
            findings.add(
                Found::on_step(context, moment.index, message)
                    .help("take a leaner process (higher sticking), or a thinner liner; a limit `solid` says it is meant")
                    .in_space(moment.cell, space),
            );
        }
    }
}
