//! `surface-sensitive-film`: a film whose growth depends on what is under it grows on mixed materials.

use crate::diag::Severity;
use crate::flow::Action;
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "surface-sensitive-film",
    severity: Severity::Note,
    needs: Needs::Material,
    thresholds: &[],
    yields_to: &[],
    page: include_str!("../../docs/rules/surface-sensitive-film.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for moment in context.moments() {
        if !matches!(moment.step.action, Action::Deposit { .. }) {
            continue;
        }
        let process = moment.process();
        let growth = |id| process.growth_on(context.material(id));
        // Where it does not grow at all it is selective, and meant to be.
        let grown: Vec<_> = moment.exposed().iter().filter(|e| growth(e.material) > 0.0).collect();
        let by_growth = |a: &&&crate::sim::Exposure, b: &&&crate::sim::Exposure| {
            growth(a.material).total_cmp(&growth(b.material))
        };
        let (Some(slow), Some(fast)) =
            (grown.iter().min_by(by_growth), grown.iter().max_by(by_growth))
        else {
            continue;
        };
        let (low, high) = (growth(slow.material), growth(fast.material));
        if low == high {
            continue;
        }
        let message = format!(
            "{} grows {low} times as fast on {} and {high} times on {}",
            process.name,
            context.name(slow.material),
            context.name(fast.material),
        );
        findings.add(
            Found::on_step(context, moment.index, message)
                .help("a thin liner first gives one surface to grow on")
                .in_space(moment.cell, 0),
        );
    }
}
