//! `void-near-next-level`: little solid lies between a void and the surface on which the next level stands.

use crate::diag::Severity;
use super::frame::roofs::{Roof, roofs};
use super::frame::{Context, Findings, Found, Needs, Rule, Threshold};

pub static RULE: Rule = Rule {
    name: "void-near-next-level",
    severity: Severity::Warning,
    needs: Needs::Section,
    thresholds: &[
        Threshold { key: "minimum_nm", default: 10.0, meaning: "least solid between void and finished surface, nm" },
    ],
    yields_to: &[],
    page: include_str!("../../docs/rules/void-near-next-level.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    if context.flow.next_level.is_none() {
        return;
    }
    let minimum = findings.threshold("minimum_nm");
    for &Roof { cell, space, above_nm, surface_step, .. } in roofs(context) {
        if above_nm >= minimum {
            continue;
        }
        let message = format!(
            "the next level stands {above_nm:.1} nm above a void; {minimum:.0} nm are wanted"
        );
        let found = match surface_step {
            Some(step) => Found::on_step(context, step, message),
            None => Found::on_wafer(context, message),
        };
        findings.add(
            found
                .help("cap it: an etch of the next level goes some nanometres into this surface")
                .in_space(cell, space),
        );
    }
}
