//! `line-undercut`: a removal undercuts a line or digs below it.

use crate::diag::Severity;
use super::frame::context::is_removal;
use super::frame::shape::{Look, empty_below, undercut};
use super::frame::{Context, Findings, Found, Needs, Rule, Threshold};

pub static RULE: Rule = Rule {
    name: "line-undercut",
    severity: Severity::Error,
    needs: Needs::Section,
    thresholds: &[
        Threshold { key: "warning_share", default: 0.1, meaning: "undercut of one side over the line width from which it is a warning" },
        Threshold { key: "error_share", default: 0.2, meaning: "undercut of one side over the line width from which it is an error" },
        Threshold { key: "budget_nm", default: 20.0, meaning: "recess below the line bottom that is of no consequence, nm" },
    ],
    yields_to: &[],
    page: include_str!("../../docs/rules/line-undercut.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    let (warning, error) = (findings.threshold("warning_share"), findings.threshold("error_share"));
    let budget_nm = findings.threshold("budget_nm");
    for moment in context.moments().filter(|m| is_removal(m.step)) {
        let (before, after) = (&moment.before.section, &moment.after.section);
        let (was, is) = (Look::at(before), Look::at(after));
        for line in &after.drawn.lines {
            let width = line.bottom_x[1] - line.bottom_x[0];
            let (own, place) = undercut(&is, line);
            if own <= undercut(&was, line).0 || own < warning * width {
                continue;
            }
            let severity = if own >= error * width { Severity::Error } else { Severity::Warning };
            let message = format!(
                "the line is undercut by {own:.1} nm, {:.0} % of its width",
                100.0 * own / width,
            );
            findings.add(
                Found::on_step(context, moment.index, message)
                    .severity(severity)
                    .help("remove less, or take a more directional etch")
                    .at_place(moment.cell, place)
                    .fact("undercut", own),
            );
        }
        let (depth, place) = empty_below(after);
        if depth > budget_nm && depth > empty_below(before).0 {
            let message = format!(
                "the recess goes {depth:.1} nm below the line bottom; {budget_nm:.0} nm are allowed"
            );
            findings.add(
                Found::on_step(context, moment.index, message)
                    .severity(Severity::Warning)
                    .help("etch less deep, or until a stop")
                    .at_place(moment.cell, place)
                    .fact("recess", depth),
            );
        }
    }
}
