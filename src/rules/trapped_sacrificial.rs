//! `trapped-sacrificial`: a sacrificial region has no way out.

use crate::diag::Severity;
use super::frame::ways::{Obstacle, kept};
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "trapped-sacrificial",
    severity: Severity::Error,
    needs: Needs::Section,
    thresholds: &[],
    yields_to: &["release-blocked", "cap-too-tight", "release-before-roof"],
    page: include_str!("../../docs/rules/trapped-sacrificial.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for kept in kept(context) {
        if kept.obstacle != Obstacle::NoWay {
            continue;
        }
        let message = format!(
            "{:.0} nm² of {} stay: no way leads from there to the ambient",
            kept.area_nm2,
            context.name(kept.material),
        );
        findings.add(
            Found::on_step(context, kept.release, message)
                .help("open a way, or let the gas out before the region is shut in")
                .at_place(kept.cell, kept.place)
                .fact(format!("{:?}", kept.material), kept.area_nm2),
        );
    }
}
