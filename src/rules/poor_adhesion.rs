//! `poor-adhesion`: a film lies on a material to which it is marked to adhere poorly.

use crate::diag::Severity;
use crate::library::Material;
use super::frame::context::added;
use super::frame::{Context, Findings, Found, Needs, Rule, Threshold};

pub static RULE: Rule = Rule {
    name: "poor-adhesion",
    severity: Severity::Warning,
    needs: Needs::Material,
    thresholds: &[
        Threshold { key: "least_nm", default: 1.0, meaning: "length of contact below which it is of no consequence, nm" },
    ],
    yields_to: &[],
    page: include_str!("../../docs/rules/poor-adhesion.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    let least = findings.threshold("least_nm");
    for moment in context.moments() {
        let Some(film) = added(moment.step).map(|id| context.material(id)) else { continue };
        for exposure in moment.exposed().iter().filter(|e| e.length_nm > least) {
            let under = context.material(exposure.material);
            let grows = moment.process().growth_on(under) > 0.0;
            if !(grows && (marks(film, under) || marks(under, film))) {
                continue;
            }
            let message = format!("{} adheres poorly to {}", film.name, under.name);
            findings.add(
                Found::on_step(context, moment.index, message)
                    .help("put a film between them to which both adhere")
                    .at_exposure(moment.cell, exposure)
                    .fact(&under.name, exposure.length_nm),
            );
        }
    }
}

fn marks(one: &Material, other: &Material) -> bool {
    one.poor_adhesion_to.iter().any(|to| *to == other.name || *to == other.family)
}
