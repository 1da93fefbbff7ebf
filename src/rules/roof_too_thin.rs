//! `roof-too-thin`: the roof of a void is thin, or weak for its width.

use crate::diag::Severity;
use crate::measure::clamped_stress_mpa;
use super::frame::roofs::{Roof, roofs};
use super::frame::{Context, Findings, Found, Needs, Rule, Threshold};

pub static RULE: Rule = Rule {
    name: "roof-too-thin",
    severity: Severity::Warning,
    needs: Needs::Section,
    thresholds: &[
        Threshold { key: "minimum_nm", default: 10.0, meaning: "least roof of the finished flow, nm" },
        Threshold { key: "pressure_kpa", default: 101.325, meaning: "pressure on the roof, kPa; the void holds process gas, the ambient is air" },
        Threshold { key: "strength_share", default: 0.2, meaning: "share of the roof's strength that the stress may take" },
    ],
    yields_to: &["void-near-next-level", "polish-opens-void"],
    page: include_str!("../../docs/rules/roof-too-thin.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    let minimum = findings.threshold("minimum_nm");
    let (pressure_kpa, share) =
        (findings.threshold("pressure_kpa"), findings.threshold("strength_share"));
    for &Roof { cell, space, thickness_nm, width_nm, material, surface_step, .. } in roofs(context) {
        let strength = material.map(|id| context.material(id));
        let strength = strength.and_then(|m| findings.want(&m.name, "strength_mpa", m.strength_mpa));
        let stress_mpa = clamped_stress_mpa(1e3 * pressure_kpa, width_nm, thickness_nm);
        let message = if thickness_nm < minimum {
            format!("the roof over the void is {thickness_nm:.1} nm thick; {minimum:.0} nm are wanted")
        } else if strength.is_some_and(|strength| stress_mpa > share * strength.value) {
            format!("the roof of {thickness_nm:.1} nm over {width_nm:.0} nm carries {stress_mpa:.0} MPa under {pressure_kpa:.0} kPa (clamped strip)")
        } else {
            continue;
        };
        let found = match surface_step {
            Some(step) => Found::on_step(context, step, message),
            None => Found::on_wafer(context, message),
        };
        findings.add(found.help("seal thicker, polish less, or cap it").in_space(cell, space));
    }
}
