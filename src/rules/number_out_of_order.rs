//! `number-out-of-order`: operation numbers do not rise.

use crate::diag::Severity;
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "number-out-of-order",
    severity: Severity::Warning,
    needs: Needs::Order,
    thresholds: &[],
    yields_to: &[],
    page: include_str!("../../docs/rules/number-out-of-order.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    let steps = &context.variant.steps;
    for index in 1..steps.len() {
        let (before, own) = (&steps[index - 1], &steps[index]);
        if own.op <= before.op {
            let message = format!(
                "operation {} stands after {}; the order of the text is the order of the process",
                own.op_text, before.op_text,
            );
            let help = "renumber it, or move it to where its number says";
            findings.add(Found::on_step(context, index, message).help(help));
        }
    }
}
