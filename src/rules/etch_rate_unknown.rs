//! `etch-rate-unknown`: a removal meets a material for which its process has no rate.

use crate::diag::Severity;
use crate::flow::Action;
use crate::library::ASSUMED_RATE;
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "etch-rate-unknown",
    severity: Severity::Warning,
    needs: Needs::Material,
    thresholds: &[],
    yields_to: &[],
    page: include_str!("../../docs/rules/etch-rate-unknown.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for (index, step) in context.steps() {
        let removes = matches!(
            step.action,
            Action::Etch { .. }
                | Action::EtchUntil { .. }
                | Action::Strip { .. }
                | Action::Convert { .. }
        );
        if !removes {
            continue;
        }
        let process = &step.action.process().process;
        let mut unknown: Vec<&str> = context
            .moments()
            .filter(|moment| moment.index == index)
            .flat_map(|moment| moment.met())
            .map(|exposure| context.material(exposure.material))
            .filter(|material| process.rate_of(material).is_none())
            .map(|material| material.name.as_str())
            .collect();
        unknown.sort_unstable();
        unknown.dedup();
        if unknown.is_empty() {
            continue;
        }
        let message = format!(
            "{} has no rate for {}; {ASSUMED_RATE} is assumed",
            process.name,
            unknown.join(", "),
        );
        let help = "give the rate under `rates` in a library file";
        findings.add(Found::on_step(context, index, message).help(help));
    }
}
