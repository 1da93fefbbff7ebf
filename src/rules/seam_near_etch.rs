//! `seam-near-etch`: an etched or wetted surface comes near a seam.

use crate::diag::Severity;
use super::frame::context::{is_removal, is_wet};
use super::frame::shape::surface_height;
use super::frame::{Context, Findings, Found, Needs, Rule, Threshold};

pub static RULE: Rule = Rule {
    name: "seam-near-etch",
    severity: Severity::Warning,
    needs: Needs::Section,
    thresholds: &[
        Threshold { key: "distance_nm", default: 10.0, meaning: "least distance of a seam from a surface that is etched or wetted, nm" },
    ],
    yields_to: &["via-meets-void", "open-gap-wetted"],
    page: include_str!("../../docs/rules/seam-near-etch.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    let wanted = findings.threshold("distance_nm");
    for moment in context.moments() {
        if !(is_wet(moment.step) || is_removal(moment.step)) {
            continue;
        }
        // An etch comes as near as the surface that it leaves.
        let section = if is_removal(moment.step) { &moment.after.section } else { &moment.before.section };
        for seam in &moment.before.section.seams {
            let grown = moment.cell.stages[seam.step + 1].section.seams.iter();
            let grown = grown.filter(|other| other.step == seam.step);
            let Some(end) = seam.points.last() else { continue };
            // The notch that growth left above a throat ends in its seam in every flow; only a
            // surface that was cut since lies bare over it.
            let full = grown.filter(|other| (other.points[0].x - seam.points[0].x).abs() < 1.0);
            let full = full.filter_map(|other| other.points.last()).map(|p| p.z).reduce(f64::max);
            let notch = surface_height(&moment.cell.stages[seam.step + 1].section, end.x);
            let now = surface_height(section, end.x);
            let cut = now < notch - 0.5 || full.is_some_and(|full| end.z < full - 0.5);
            let distance = now - end.z;
            if !cut || distance >= wanted {
                continue;
            }
            let message = format!(
                "a seam ends {:.1} nm below the surface: what etches or wets it runs down the seam",
                distance.max(0.0),
            );
            findings.add(
                Found::on_step(context, moment.index, message)
                    .help("cap it first, or polish less")
                    .at_place(moment.cell, *end),
            );
        }
    }
}
