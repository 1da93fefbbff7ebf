//! `cap-too-tight`: the cap's class or thickness does not let the products of a release pass.

use crate::diag::Severity;
use super::frame::ways::{Obstacle, kept};
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "cap-too-tight",
    severity: Severity::Error,
    needs: Needs::Material,
    thresholds: &[],
    yields_to: &["release-blocked", "release-before-roof"],
    page: include_str!("../../docs/rules/cap-too-tight.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for kept in kept(context) {
        let (message, weight) = match kept.obstacle {
            Obstacle::Tight { material } => (
                format!(
                    "{} cannot leave: {} over it lets too little pass",
                    context.name(kept.material),
                    context.name(material),
                ),
                0.0,
            ),
            Obstacle::Thick { material, thickness_nm, up_to_nm } => (
                format!(
                    "{} cannot leave: {thickness_nm:.1} nm of {} lie over it, which lets pass up \
                     to {up_to_nm:.0} nm",
                    context.name(kept.material),
                    context.name(material),
                ),
                thickness_nm,
            ),
            Obstacle::Unknown { material } => {
                let material = context.material(material);
                findings.want(&material.name, "passes", material.passes);
                continue;
            }
            Obstacle::Hermetic { .. } | Obstacle::NoWay => continue,
        };
        findings.add(
            Found::on_step(context, kept.release, message)
                .help("take a thinner or more permeable cap, or draw openings along the line")
                .at_place(kept.cell, kept.place)
                .fact(format!("{:?}", kept.material), weight),
        );
    }
}
