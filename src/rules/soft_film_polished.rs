//! `soft-film-polished`: a polish meets a film that is too soft for it.

use crate::diag::Severity;
use crate::sim::Event;
use super::frame::context::is_polish;
use super::frame::shape::top;
use super::frame::{Context, Findings, Found, Needs, Rule, Threshold};

pub static RULE: Rule = Rule {
    name: "soft-film-polished",
    severity: Severity::Warning,
    needs: Needs::Material,
    thresholds: &[
        Threshold { key: "softest_gpa", default: 5.0, meaning: "Young's modulus below which a film is not polished directly, GPa" },
    ],
    yields_to: &["polish-without-overburden"],
    page: include_str!("../../docs/rules/soft-film-polished.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    let softest = findings.threshold("softest_gpa");
    for moment in context.moments().filter(|m| is_polish(m.step)) {
        let plane = moment.after.events.iter().find_map(|event| match event {
            Event::Planed { z_nm, surface_nm } if surface_nm > z_nm => Some(*z_nm),
            _ => None,
        });
        let Some(plane) = plane else { continue };
        for body in &moment.before.section.bodies {
            let material = context.material(body.material);
            if top(&body.region).is_none_or(|top| top <= plane) {
                continue;
            }
            let modulus =
                findings.want(&material.name, "youngs_modulus_gpa", material.youngs_modulus_gpa);
            let Some(modulus) = modulus.filter(|modulus| modulus.value < softest) else { continue };
            let message = format!(
                "{} of {} GPa is polished directly: it tears and dishes",
                material.name, modulus.value,
            );
            findings.add(
                Found::on_step(context, moment.index, message)
                    .help("stop in a harder film above it")
                    .in_space(moment.cell, 0)
                    .fact(&material.name, 0.0),
            );
        }
    }
}
