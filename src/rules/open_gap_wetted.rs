//! `open-gap-wetted`: a space that was emptied meets a liquid open.

use crate::diag::Severity;
use super::frame::gaps::{Judged, open_gaps};
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "open-gap-wetted",
    severity: Severity::Error,
    needs: Needs::Order,
    thresholds: &[],
    yields_to: &["release-before-roof"],
    page: include_str!("../../docs/rules/open-gap-wetted.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for gap in open_gaps(context) {
        let (Judged::Wetted(step), Some(emptied), None) =
            (gap.judged, gap.emptied_by, gap.sealed_by)
        else {
            continue;
        };
        let message = format!(
            "the liquid of {} gets into a space still open since {}",
            context.process_name(step),
            context.graph.label(emptied),
        );
        let advice = "clean before the space opens or after it is closed, or take a dry process";
        findings.add(
            Found::on_step(context, step, message)
                .help(context.order_help(step, advice))
                .in_space(gap.cell, gap.space),
        );
    }
}
