//! `copper-without-barrier`: a metal that drifts touches a dielectric or semiconductor that does not hold it.

use crate::diag::Severity;
use super::frame::metal::bare_contacts;
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "copper-without-barrier",
    severity: Severity::Error,
    needs: Needs::Material,
    thresholds: &[],
    yields_to: &["barrier-after-metal", "bare-metal-in-oxidizer"],
    page: include_str!("../../docs/rules/copper-without-barrier.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for contact in bare_contacts(context) {
        let through = match contact.through {
            Some(conductor) => format!(" through {}, which is no barrier", context.name(conductor)),
            None => String::new(),
        };
        let message = format!(
            "{} touches {}{through}, over {:.1} nm",
            context.name(contact.metal),
            context.name(contact.other),
            contact.length_nm,
        );
        let found = match contact.step {
            Some(step) => Found::on_step(context, step, message),
            None => Found::on_wafer(context, message),
        };
        findings.add(
            found
                .help("put a barrier between them: a liner, a nitride or carbonitride film")
                .at_place(contact.cell, contact.place)
                .fact(format!("{:?} {:?}", contact.metal, contact.other), contact.length_nm),
        );
    }
}
