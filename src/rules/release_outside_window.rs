//! `release-outside-window`: a release is cooler or hotter than the decomposition window.

use crate::diag::Severity;
use crate::flow::Action;
use crate::library::{Ambient, Kind};
use super::frame::{Context, Findings, Found, Needs, Rule, Threshold};

pub static RULE: Rule = Rule {
    name: "release-outside-window",
    severity: Severity::Error,
    needs: Needs::Material,
    thresholds: &[
        Threshold { key: "lower_share", default: 0.2, meaning: "share of the window, from below, in which decomposition takes hours and leaves residue" },
    ],
    yields_to: &[],
    page: include_str!("../../docs/rules/release-outside-window.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    const REACTIVE: &[Ambient] = &[
        Ambient::Plasma,
        Ambient::OxygenPlasma,
        Ambient::HydrogenPlasma,
        Ambient::Ozone,
        Ambient::Wet,
    ];
    let lower_share = findings.threshold("lower_share");
    for (index, step) in context.steps() {
        let Action::Release { material, temperature, process, .. } = &step.action else { continue };
        let material = context.material(*material);
        // Chemistry, not heat, takes the material away.
        if material.kind != Kind::Sacrificial || process.process.meets(REACTIVE) {
            continue;
        }
        let Some([low, high]) = findings.want(&material.name, "leaves_at_c", material.leaves_at_c)
        else {
            continue;
        };
        let at = temperature.nominal.celsius();
        let window = format!("{} leaves from {low:.0} to {high:.0} °C", material.name);
        let found = if at < low || at > high {
            Found::on_step(context, index, format!("{window}; the release is at {at:.0} °C"))
                .help("release inside the window")
        } else if at < low + lower_share * (high - low) {
            let message = format!("{window}; at {at:.0} °C it takes hours and leaves residue");
            Found::on_step(context, index, message)
                .severity(Severity::Warning)
                .help("release hotter, if the other materials stand it")
        } else {
            continue;
        };
        findings.add(found);
    }
}
