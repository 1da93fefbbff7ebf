//! `topography`: the finished surface stands at different heights over narrow and wide spaces.

use crate::diag::Severity;
use super::frame::context::site_of;
use super::frame::shape::surface_height;
use super::frame::{Context, Findings, Found, Needs, Rule, Threshold};

pub static RULE: Rule = Rule {
    name: "topography",
    severity: Severity::Warning,
    needs: Needs::Section,
    thresholds: &[
        Threshold { key: "budget_nm", default: 100.0, meaning: "height difference that the next polish or exposure takes, nm" },
    ],
    yields_to: &["space-not-sealed"],
    page: include_str!("../../docs/rules/topography.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    let budget = findings.threshold("budget_nm");
    let mut heights: Vec<(f64, &crate::sim::CellTrace, usize)> = Vec::new();
    for cell in context.cells {
        let section = &cell.stages[cell.stages.len() - 1].section;
        for space in 0..=section.drawn.lines.len() {
            if context.open_by_limit(site_of(cell, space)) {
                continue;
            }
            let middle = super::frame::shape::middle_of(section, space);
            heights.push((surface_height(section, middle), cell, space));
        }
    }
    let lowest = heights.iter().min_by(|a, b| a.0.total_cmp(&b.0));
    let highest = heights.iter().max_by(|a, b| a.0.total_cmp(&b.0));
    let (Some(&(low, cell, space)), Some(&(high, high_cell, high_space))) = (lowest, highest) else {
        return;
    };
    let last = context.variant.steps.len().checked_sub(1);
    let Some(last) = last.filter(|_| high - low > budget) else { return };
    let message = format!(
        "the surface stands {:.0} nm lower at {} than at {}; {budget:.0} nm are allowed",
        high - low,
        site_of(cell, space).label(),
        site_of(high_cell, high_space).label(),
    );
    findings.add(
        Found::on_step(context, last, message)
            .help("fill wide spaces and polish, or keep the etch out of them")
            .in_space(cell, space),
    );
}
