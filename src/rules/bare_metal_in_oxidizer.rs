//! `bare-metal-in-oxidizer`: a metal that oxidises is exposed to an oxidising step above its onset.

use crate::diag::Severity;
use crate::library::{Ambient, Kind, Oxidation};
use super::frame::context::temperature_c;
use super::frame::metal::exposed_with_vias;
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "bare-metal-in-oxidizer",
    severity: Severity::Error,
    needs: Needs::Material,
    thresholds: &[],
    yields_to: &["ruthenium-in-oxygen"],
    page: include_str!("../../docs/rules/bare-metal-in-oxidizer.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    const OXIDISING: &[Ambient] = &[Ambient::Oxidizing, Ambient::Ozone, Ambient::OxygenPlasma];
    for moment in context.moments().filter(|m| m.process().meets(OXIDISING)) {
        for exposure in exposed_with_vias(context, &moment) {
            let material = context.material(exposure.material);
            let metal = material.kind == Kind::Conductor && material.family == "metal";
            if !metal || material.oxidizes == Oxidation::None {
                continue;
            }
            let process = &moment.process().name;
            let onset = findings.want(&material.name, "oxidizes_from_c", material.oxidizes_from_c);
            let at = findings.want(process, "temperature_c", temperature_c(moment.step));
            let (Some(onset), Some(at)) = (onset, at) else { continue };
            if at <= onset.value {
                continue;
            }
            let message = format!(
                "bare {} meets an oxidising {process} at {at:.0} °C; it oxidises from {:.0} °C",
                material.name, onset.value,
            );
            findings.add(
                Found::on_step(context, moment.index, message)
                    .help(format!("cover {} first by a film grown without oxygen, a nitride or carbonitride", material.name))
                    .at_exposure(moment.cell, &exposure)
                    .fact(&material.name, exposure.length_nm),
            );
        }
    }
}
