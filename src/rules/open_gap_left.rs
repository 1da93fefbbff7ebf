//! `open-gap-left`: a space that was emptied is open when the flow ends.

use crate::diag::Severity;
use super::frame::gaps::{Judged, open_gaps};
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "open-gap-left",
    severity: Severity::Error,
    needs: Needs::Order,
    thresholds: &[],
    yields_to: &["release-before-roof"],
    page: include_str!("../../docs/rules/open-gap-left.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for gap in open_gaps(context) {
        let (Judged::Left, Some(emptied), None) = (gap.judged, gap.emptied_by, gap.sealed_by)
        else {
            continue;
        };
        findings.add(
            Found::on_step(context, emptied, "the space that this empties is open when the flow ends")
                .help("close it with a seal, or write a limit `open` for it")
                .in_space(gap.cell, gap.space),
        );
    }
}
