//! `hf-on-oxide`: hydrofluoric acid meets a silica-like film that is not its target.

use crate::diag::Severity;
use crate::library::{Ambient, MaterialId, Passes};
use crate::sim::Exposure;
use super::frame::context::target;
use super::frame::shape::Look;
use super::frame::{Context, Findings, Found, Moment, Needs, Rule, Threshold};

pub static RULE: Rule = Rule {
    name: "hf-on-oxide",
    severity: Severity::Error,
    needs: Needs::Material,
    thresholds: &[
        Threshold { key: "silica_like_rate", default: 0.5, meaning: "removal rate, relative to the target's, from which a dielectric counts as silica-like" },
    ],
    yields_to: &[],
    page: include_str!("../../docs/rules/hf-on-oxide.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    let least = findings.threshold("silica_like_rate");
    for moment in context.moments().filter(|m| m.process().meets(&[Ambient::Hf])) {
        let target = target(moment.step);
        let silica_like = |id: MaterialId| {
            let material = context.material(id);
            let process = moment.process();
            let own = target.and_then(|id| process.rate_of(context.material(id)));
            let rate = process.rate_of(material);
            Some(id) != target
                && !material.kind.conducts()
                && (material.family == "oxide"
                    || own.zip(rate).is_some_and(|(own, rate)| rate.value >= least * own.value))
        };
        for exposure in &moment.met() {
            if silica_like(exposure.material) {
                let message = format!(
                    "{} is exposed to hydrofluoric acid and is not its target",
                    context.name(exposure.material),
                );
                findings.add(report(context, &moment, exposure, message));
            } else if context.material(exposure.material).passes == Some(Passes::Open) {
                for beneath in beneath(&moment, exposure.material).into_iter().filter(|&m| silica_like(m)) {
                    let message = format!(
                        "hydrofluoric acid reaches {} through porous {}",
                        context.name(beneath),
                        context.name(exposure.material),
                    );
                    findings.add(report(context, &moment, exposure, message));
                }
            }
        }
    }
}

fn report(context: &Context<'_>, moment: &Moment<'_>, exposure: &Exposure, message: String) -> Found {
    Found::on_step(context, moment.index, message)
        .help("cover it, or take a removal without hydrofluoric acid")
        .at_exposure(moment.cell, exposure)
        .fact(context.name(exposure.material), exposure.length_nm)
}

/// What bodies of a porous material touch.
fn beneath(moment: &Moment<'_>, porous: MaterialId) -> Vec<MaterialId> {
    let section = &moment.before.section;
    let look = Look::at(section);
    let bodies = section.bodies.iter().filter(|body| body.material == porous);
    let mut touched: Vec<_> = bodies
        .flat_map(|body| look.contacts(&body.region))
        .filter_map(|contact| contact.body.map(|body| body.material))
        .collect();
    touched.sort();
    touched.dedup();
    touched
}
