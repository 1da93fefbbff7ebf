//! `open-gap-polished`: a space that was emptied meets a polish open.

use crate::diag::Severity;
use super::frame::gaps::{Judged, open_gaps};
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "open-gap-polished",
    severity: Severity::Error,
    needs: Needs::Order,
    thresholds: &[],
    yields_to: &["release-before-roof"],
    page: include_str!("../../docs/rules/open-gap-polished.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for gap in open_gaps(context) {
        let (Judged::Polished(step), Some(emptied), None) =
            (gap.judged, gap.emptied_by, gap.sealed_by)
        else {
            continue;
        };
        let message = format!(
            "the polish meets a space still open since {}: slurry gets in and stays",
            context.graph.label(emptied),
        );
        findings.add(
            Found::on_step(context, step, message)
                .help(context.order_help(step, "close the space first, or write a limit `open`"))
                .in_space(gap.cell, gap.space),
        );
    }
}
