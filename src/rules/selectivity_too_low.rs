//! `selectivity-too-low`: a removal takes too much of an exposed material that is still needed.

use crate::diag::Severity;
use crate::flow::Action;
use crate::library::{ASSUMED_RATE, MaterialId};
use crate::sim::Origin;
use super::frame::context::target;
use super::frame::{Context, Findings, Found, Moment, Needs, Rule, Threshold};

pub static RULE: Rule = Rule {
    name: "selectivity-too-low",
    severity: Severity::Error,
    needs: Needs::Material,
    thresholds: &[
        Threshold { key: "budget_nm", default: 1.0, meaning: "loss of a needed material that is of no consequence, nm" },
        Threshold { key: "warning_below", default: 5.0, meaning: "ratio of the removal rates below which a loss is a warning" },
        Threshold { key: "error_below", default: 2.0, meaning: "ratio of the removal rates below which a loss is an error" },
    ],
    yields_to: &["hf-on-oxide", "fluorine-on-metal"],
    page: include_str!("../../docs/rules/selectivity-too-low.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    let budget_nm = findings.threshold("budget_nm");
    let (warning, error) = (findings.threshold("warning_below"), findings.threshold("error_below"));
    for moment in context.moments() {
        let Some(target) = target(moment.step) else { continue };
        let Some((depth_nm, stop)) = depth(context, &moment) else { continue };
        let process = moment.process();
        let rate = |id: MaterialId| {
            process.rate_of(context.material(id)).map_or(ASSUMED_RATE, |rate| rate.value)
        };
        let own = rate(target);
        for exposure in moment.exposed() {
            let id = exposure.material;
            if id == target || !needed(context, &moment, id) {
                continue;
            }
            let time_nm = match stop {
                Some((stop, overetch)) if stop == id => depth_nm * overetch,
                Some((_, overetch)) => depth_nm * (1.0 + overetch),
                None => depth_nm,
            };
            let (ratio, loss_nm) = (own / rate(id), time_nm * rate(id) / own);
            if !(loss_nm > budget_nm && ratio < warning) {
                continue;
            }
            let message = format!(
                "{} loses {loss_nm:.1} nm while {} is removed: selectivity {ratio:.1}",
                context.name(id),
                context.name(target),
            );
            let severity = if ratio < error { Severity::Error } else { Severity::Warning };
            findings.add(
                Found::on_step(context, moment.index, message)
                    .severity(severity)
                    .help("take a more selective process, remove less, or protect it by a film")
                    .at_exposure(moment.cell, exposure)
                    .fact(context.name(id), loss_nm),
            );
        }
    }
}

/// Depth at three sigma that the step removes of its own material, in nm; with it the stop and
/// the share of overetch at three sigma, where it has a stop.
fn depth(context: &Context<'_>, moment: &Moment<'_>) -> Option<(f64, Option<(MaterialId, f64)>)> {
    match moment.step.action {
        Action::Etch { depth, .. } | Action::Convert { depth, .. } => {
            Some((depth.nominal.nm() + depth.three_sigma.nm(), None))
        }
        Action::EtchUntil { material, stop, overetch, .. } => {
            let share = overetch.nominal.fraction() + overetch.three_sigma.fraction();
            let removed = context.cells.iter().filter_map(|cell| {
                let top = |stage: usize| {
                    let bodies = cell.stages[stage].section.bodies.iter();
                    let of_it = bodies.filter(|body| body.material == material);
                    of_it.filter_map(|body| super::frame::shape::top(&body.region)).reduce(f64::max)
                };
                let before = top(moment.index)?;
                let floor = cell.stages[moment.index].section.drawn.layer_tops[0].min(0.0);
                Some(before - top(moment.index + 1).unwrap_or(floor))
            });
            removed.reduce(f64::max).map(|nm| (nm / (1.0 + share), Some((stop, share))))
        }
        _ => None,
    }
}

/// Whether what is exposed is still needed: the lines and their liner, masks until their strip,
/// what a later step stops on.
fn needed(context: &Context<'_>, moment: &Moment<'_>, id: MaterialId) -> bool {
    let of_lines = moment.before.section.bodies.iter().any(|body| {
        body.material == id && matches!(body.origin, Origin::Line { .. } | Origin::Liner(_))
    });
    let mask = super::frame::metal::masks(context).contains(&id);
    let stops = context.steps().skip(moment.index).any(|(_, step)| match step.action {
        Action::EtchUntil { stop, .. } | Action::PolishUntil { stop, .. } => stop == id,
        _ => false,
    });
    of_lines || mask || stops
}
