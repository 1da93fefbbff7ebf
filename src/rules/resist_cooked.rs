//! `resist-cooked`: a resist or a spin-on mask is still there at a film or a hot step.

use crate::diag::Severity;
use crate::flow::Action;
use crate::library::Kind;
use super::frame::context::{target, temperature_c};
use super::frame::metal::masks;
use super::frame::{Context, Findings, Found, Needs, Rule, Threshold};

pub static RULE: Rule = Rule {
    name: "resist-cooked",
    severity: Severity::Error,
    needs: Needs::Order,
    thresholds: &[
        Threshold { key: "resist_up_to_c", default: 130.0, meaning: "highest temperature of a resist or mask whose material says nothing, °C" },
    ],
    yields_to: &["block-mask-buried"],
    page: include_str!("../../docs/rules/resist-cooked.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    let up_to_c = findings.threshold("resist_up_to_c");
    let masks = masks(context);
    for moment in context.moments() {
        let film = matches!(moment.step.action, Action::Deposit { .. });
        for body in &moment.before.section.bodies {
            let material = context.material(body.material);
            let resist = material.kind == Kind::Resist;
            if !(resist || masks.contains(&body.material))
                || target(moment.step) == Some(body.material)
            {
                continue;
            }
            let limit = material.highest_temperature_c.map_or(up_to_c, |c| c.value);
            let hot = temperature_c(moment.step).filter(|&c| c > limit);
            let message = match hot {
                Some(c) => format!(
                    "{} is still there at {c:.0} °C; it stands {limit:.0} °C",
                    material.name
                ),
                None if film && resist => format!("{} is still there at a film", material.name),
                None => continue,
            };
            let place = body.region.bounds().map_or_else(Default::default, |b| (b.min + b.max) * 0.5);
            findings.add(
                Found::on_step(context, moment.index, message)
                    .help(format!("strip {} first", material.name))
                    .at_place(moment.cell, place)
                    .fact(&material.name, 0.0),
            );
        }
    }
}
