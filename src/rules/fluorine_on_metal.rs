//! `fluorine-on-metal`: fluorine radicals meet a metal or silicon that they remove.

use crate::diag::Severity;
use crate::library::Ambient;
use super::frame::context::target;
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "fluorine-on-metal",
    severity: Severity::Error,
    needs: Needs::Material,
    thresholds: &[],
    yields_to: &[],
    page: include_str!("../../docs/rules/fluorine-on-metal.md"),
    check: Some(check),
};

const ATTACKED: &[&str] = &["W", "Mo", "Ti", "Ta", "TaN", "Si", "polySi"];

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for moment in context.moments().filter(|m| m.process().meets(&[Ambient::Fluorine])) {
        for exposure in &moment.met() {
            let name = context.name(exposure.material);
            if !ATTACKED.contains(&name) || target(moment.step) == Some(exposure.material) {
                continue;
            }
            let message = format!("{name} is exposed to fluorine, which removes it");
            findings.add(
                Found::on_step(context, moment.index, message)
                    .help(format!("cover {name} first, or take another removal"))
                    .at_exposure(moment.cell, exposure)
                    .fact(name, exposure.length_nm),
            );
        }
    }
}
