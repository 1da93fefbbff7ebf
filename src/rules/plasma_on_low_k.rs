//! `plasma-on-low-k`: an oxygen plasma meets an exposed low-k film.

use crate::diag::Severity;
use crate::library::Ambient;
use super::frame::context::target;
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "plasma-on-low-k",
    severity: Severity::Warning,
    needs: Needs::Material,
    thresholds: &[],
    yields_to: &[],
    page: include_str!("../../docs/rules/plasma-on-low-k.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for moment in context.moments().filter(|m| m.process().meets(&[Ambient::OxygenPlasma])) {
        for exposure in moment.exposed() {
            let material = context.material(exposure.material);
            if material.family != "low-k" || target(moment.step) == Some(exposure.material) {
                continue;
            }
            let message = format!(
                "{} is exposed to the oxygen plasma of {}: its permittivity rises",
                material.name,
                moment.process().name,
            );
            findings.add(
                Found::on_step(context, moment.index, message)
                    .help("take a hydrogen ash, cover the film, or `convert` it and count the damage")
                    .at_exposure(moment.cell, exposure)
                    .fact(&material.name, exposure.length_nm),
            );
        }
    }
}
