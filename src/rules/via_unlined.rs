//! `via-unlined`: a via of a metal that drifts has no liner.

use crate::diag::Severity;
use crate::flow::Action;
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "via-unlined",
    severity: Severity::Error,
    needs: Needs::Order,
    thresholds: &[],
    yields_to: &[],
    page: include_str!("../../docs/rules/via-unlined.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for (index, step) in context.steps() {
        let Action::Via { material, liner: None, .. } = step.action else { continue };
        if context.material(material).needs_barrier {
            let message = format!("a via of {} needs a barrier", context.name(material));
            let help = "line it: `in 3 nm TaN`, say";
            findings.add(Found::on_step(context, index, message).help(help));
        }
    }
}
