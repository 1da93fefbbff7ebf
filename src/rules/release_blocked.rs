//! `release-blocked`: a hermetic film lies between a sacrificial material and its release.

use crate::diag::Severity;
use super::frame::ways::{Obstacle, kept};
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "release-blocked",
    severity: Severity::Error,
    needs: Needs::Order,
    thresholds: &[],
    yields_to: &["release-before-roof"],
    page: include_str!("../../docs/rules/release-blocked.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for kept in kept(context) {
        let Obstacle::Hermetic { material, thickness_nm } = kept.obstacle else { continue };
        let message = format!(
            "{} cannot leave: {thickness_nm:.1} nm of hermetic {} lie over it",
            context.name(kept.material),
            context.name(material),
        );
        let advice = "release before the hermetic film, or draw openings along the line";
        findings.add(
            Found::on_step(context, kept.release, message.clone())
                .help(context.order_help(kept.release, advice))
                .at_place(kept.cell, kept.place)
                .fact(format!("{:?} {:?}", kept.material, material), thickness_nm),
        );
    }
}
