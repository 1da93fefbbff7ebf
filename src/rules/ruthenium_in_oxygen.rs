//! `ruthenium-in-oxygen`: ruthenium is exposed to an oxygen plasma or ozone.

use crate::diag::Severity;
use crate::library::Ambient;
use super::frame::metal::exposed_with_vias;
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "ruthenium-in-oxygen",
    severity: Severity::Error,
    needs: Needs::Material,
    thresholds: &[],
    yields_to: &[],
    page: include_str!("../../docs/rules/ruthenium-in-oxygen.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    const OXYGEN: &[Ambient] = &[Ambient::OxygenPlasma, Ambient::Ozone];
    for moment in context.moments().filter(|m| m.process().meets(OXYGEN)) {
        let exposed = exposed_with_vias(context, &moment);
        for exposure in exposed.iter().filter(|e| context.name(e.material) == "Ru") {
            let message = format!(
                "bare Ru meets {}: it leaves as volatile, toxic RuO4",
                moment.process().name,
            );
            findings.add(
                Found::on_step(context, moment.index, message)
                    .help("cover Ru first, or take a process without oxygen plasma or ozone")
                    .at_exposure(moment.cell, exposure)
                    .fact("Ru", exposure.length_nm),
            );
        }
    }
}
