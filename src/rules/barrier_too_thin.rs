//! `barrier-too-thin`: too little barrier is left on a metal that drifts.

use crate::diag::Severity;
use super::frame::barriers::thinnest;
use super::frame::{Context, Findings, Found, Needs, Rule, Threshold};

pub static RULE: Rule = Rule {
    name: "barrier-too-thin",
    severity: Severity::Error,
    needs: Needs::Section,
    thresholds: &[
        Threshold { key: "atomic_layer_nm", default: 1.5, meaning: "least barrier by atomic layers, or by an unknown process, nm" },
        Threshold { key: "plasma_nm", default: 3.0, meaning: "least barrier by plasma or sputtering, nm" },
    ],
    yields_to: &["copper-without-barrier", "bare-metal-in-oxidizer"],
    page: include_str!("../../docs/rules/barrier-too-thin.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    let (atomic_layer, plasma) =
        (findings.threshold("atomic_layer_nm"), findings.threshold("plasma_nm"));
    for thin in thinnest(context, atomic_layer, plasma) {
        let message = format!(
            "{:.1} nm of {} are left on {}; {:.1} nm are wanted",
            thin.thickness_nm,
            context.name(thin.barrier),
            context.name(thin.metal),
            thin.wanted_nm,
        );
        let found = match thin.step {
            Some(step) => Found::on_step(context, step, message),
            None => Found::on_wafer(context, message),
        };
        findings.add(
            found
                .help("start with a thicker barrier, remove less, or add a film that holds the metal")
                .at_place(thin.cell, thin.place)
                .fact(context.name(thin.barrier), -thin.thickness_nm),
        );
    }
}
