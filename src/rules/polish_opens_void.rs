//! `polish-opens-void`: a polish cuts a void, or comes too near.

use crate::diag::Severity;
use crate::flow::Action;
use crate::sim::Event;
use super::frame::context::is_polish;
use super::frame::shape::{space_of, top};
use super::frame::{Context, Findings, Found, Needs, Rule, Threshold};

pub static RULE: Rule = Rule {
    name: "polish-opens-void",
    severity: Severity::Error,
    needs: Needs::Section,
    thresholds: &[
        Threshold { key: "margin_nm", default: 10.0, meaning: "distance of the plane from the void below which it is a warning, nm" },
    ],
    yields_to: &[],
    page: include_str!("../../docs/rules/polish-opens-void.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    let margin_nm = findings.threshold("margin_nm");
    for moment in context.moments().filter(|m| is_polish(m.step)) {
        let plane = moment.after.events.iter().find_map(|event| match event {
            Event::Planed { z_nm, surface_nm } if surface_nm > z_nm => Some(*z_nm),
            _ => None,
        });
        let Some(plane) = plane else { continue };
        let line_top = moment.before.section.drawn.line_top;
        for event in &moment.after.events {
            let Event::Opened { space, void } = event else { continue };
            let depth = top(void).map_or(0.0, |top| top - plane);
            let message = format!("the polish opens a void: its plane cuts {depth:.1} nm into it");
            let help = format!("polish to {:.0} nm above lines or higher, or make the void lower", plane - line_top + depth + margin_nm);
            findings.add(
                Found::on_step(context, moment.index, message)
                    .help(help)
                    .in_space(moment.cell, *space),
            );
        }
        let three_sigma_nm = match &moment.step.action {
            Action::Polish { to, .. } => to.offset.three_sigma.nm(),
            _ => 0.0,
        };
        let wanted = margin_nm.max(three_sigma_nm);
        for void in &moment.after.section.voids {
            let Some(margin) = top(void).map(|top| plane - top) else { continue };
            if margin < 0.0 || margin >= wanted {
                continue;
            }
            let space = space_of(&moment.after.section, void);
            let message = format!(
                "the plane passes {margin:.1} nm above a void; {wanted:.0} nm are wanted"
            );
            findings.add(
                Found::on_step(context, moment.index, message)
                    .severity(Severity::Warning)
                    .help("polish less, or make the void lower")
                    .in_space(moment.cell, space),
            );
        }
    }
}
