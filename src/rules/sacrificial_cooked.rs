//! `sacrificial-cooked`: a sacrificial material comes near its onset before its release.

use crate::diag::Severity;
use crate::library::Kind;
use super::frame::context::{added, target, temperature_c};
use super::frame::{Context, Findings, Found, Needs, Rule, Threshold};

pub static RULE: Rule = Rule {
    name: "sacrificial-cooked",
    severity: Severity::Error,
    needs: Needs::Material,
    thresholds: &[
        Threshold { key: "margin_c", default: 20.0, meaning: "distance from the onset of decomposition that a step must keep, °C" },
    ],
    yields_to: &[],
    page: include_str!("../../docs/rules/sacrificial-cooked.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    let margin_c = findings.threshold("margin_c");
    for moment in context.moments() {
        let Some(step_c) = temperature_c(moment.step) else { continue };
        let mut there: Vec<_> =
            moment.before.section.bodies.iter().map(|body| body.material).collect();
        there.extend(added(moment.step));
        there.sort();
        there.dedup();
        for id in there {
            let material = context.material(id);
            if material.kind != Kind::Sacrificial || target(moment.step) == Some(id) {
                continue;
            }
            // What chemistry takes away has a highest temperature like any other material.
            if material.leaves_at_c.is_none() && material.highest_temperature_c.is_some() {
                continue;
            }
            let window = findings.want(&material.name, "leaves_at_c", material.leaves_at_c);
            let Some([onset, _]) = window else { continue };
            if step_c <= onset - margin_c {
                continue;
            }
            let message = format!(
                "{} starts to leave at {onset:.0} °C and is still there at {step_c:.0} °C",
                material.name,
            );
            findings.add(
                Found::on_step(context, moment.index, message)
                    .help(format!("stay below {:.0} °C until {} is released", onset - margin_c, material.name))
                    .in_space(moment.cell, 0)
                    .fact(&material.name, 0.0),
            );
        }
    }
}
