//! `film-cracks`: a tensile film is thicker than a crack needs to run.

use crate::diag::Severity;
use crate::flow::Action;
use crate::measure::critical_thickness_nm;
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "film-cracks",
    severity: Severity::Warning,
    needs: Needs::Material,
    thresholds: &[],
    yields_to: &[],
    page: include_str!("../../docs/rules/film-cracks.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for (index, step) in context.steps() {
        let Action::Deposit { thickness, material, .. } = step.action else { continue };
        let material = context.material(material);
        let name = &material.name;
        let Some(stress) = findings.want(name, "stress_mpa", material.stress_mpa) else { continue };
        if stress.value <= 0.0 {
            continue;
        }
        let modulus = findings.want(name, "youngs_modulus_gpa", material.youngs_modulus_gpa);
        let poisson = findings.want(name, "poisson_ratio", material.poisson_ratio);
        let energy =
            findings.want(name, "fracture_energy_j_per_m2", material.fracture_energy_j_per_m2);
        let (Some(modulus), Some(poisson), Some(energy)) = (modulus, poisson, energy) else {
            continue;
        };
        let critical_nm = critical_thickness_nm(
            stress.value,
            modulus.value,
            poisson.value,
            energy.value,
        );
        let Some(critical_nm) = critical_nm else { continue };
        if thickness.nominal.nm() > critical_nm {
            let message = format!(
                "{:.0} nm of {name} at {:.0} MPa tension crack: the limit is {critical_nm:.0} nm",
                thickness.nominal.nm(),
                stress.value,
            );
            let help = "take a thinner or less tensile film";
            findings.add(Found::on_step(context, index, message).help(help));
        }
    }
}
