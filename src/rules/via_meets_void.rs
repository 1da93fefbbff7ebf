//! `via-meets-void`: a via, with its overlay and half of its width tolerance, meets a void or a seam.

use crate::diag::Severity;
use crate::sim::Event;
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "via-meets-void",
    severity: Severity::Error,
    needs: Needs::Section,
    thresholds: &[],
    yields_to: &["via-before-seal"],
    page: include_str!("../../docs/rules/via-meets-void.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for moment in context.moments() {
        for event in &moment.after.events {
            let Event::Via { slot, clearance_nm, .. } = event else { continue };
            let Some(bounds) = slot.bounds() else { continue };
            let place = (bounds.min + bounds.max) * 0.5;
            let seam = moment.before.section.seams.iter().flat_map(|seam| &seam.points).any(|p| {
                (bounds.min.x..=bounds.max.x).contains(&p.x)
                    && (bounds.min.z..=bounds.max.z).contains(&p.z)
            });
            let message = match clearance_nm {
                Some(clearance) if *clearance < 0.0 => format!(
                    "at worst overlay and width the via cuts {:.1} nm into a void: its metal fills the gap",
                    -clearance,
                ),
                Some(0.0) => "at worst overlay and width the via touches a void".to_owned(),
                _ if seam => "the via meets a seam, by which its metal can creep".to_owned(),
                _ => continue,
            };
            findings.add(
                Found::on_step(context, moment.index, message)
                    .help("keep the gap away from vias by `only at` or a mask, narrow the via, or tighten the overlay")
                    .at_place(moment.cell, place),
            );
        }
    }
}
