//! `too-hot-for`: a step is hotter than a material on the wafer stands.

use crate::diag::Severity;
use crate::flow::Action;
use crate::library::{Kind, MaterialId};
use crate::sim::CellTrace;
use super::frame::context::{added, target, temperature_c};
use super::frame::metal::masks;
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "too-hot-for",
    severity: Severity::Error,
    needs: Needs::Material,
    thresholds: &[],
    yields_to: &[],
    page: include_str!("../../docs/rules/too-hot-for.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    let masks = masks(context);
    for moment in context.moments() {
        let Some(step_c) = temperature_c(moment.step) else {
            if added(moment.step).is_some() {
                let process = &moment.process().name;
                findings.want::<f64>(process, "temperature_c", None);
            }
            continue;
        };
        let releases = matches!(moment.step.action, Action::Release { .. });
        let mut over: Vec<(f64, MaterialId)> = Vec::new();
        for id in on_wafer(context, moment.cell, moment.index) {
            let material = context.material(id);
            // What a release or a resist strip takes away, and what other rules judge.
            let cooked = material.kind == Kind::Sacrificial && material.leaves_at_c.is_some();
            let spared = cooked
                || material.kind == Kind::Resist
                || masks.contains(&id)
                || (releases && target(moment.step) == Some(id));
            let limit = material.highest_temperature_c.filter(|_| !spared);
            if let Some(limit) = limit.filter(|limit| step_c > limit.value) {
                over.push((step_c - limit.value, id));
            }
        }
        over.sort_by(|a, b| b.0.total_cmp(&a.0).then(a.1.cmp(&b.1)));
        let Some(&(by, worst)) = over.first() else { continue };
        let others: Vec<_> = over[1..].iter().map(|(_, id)| context.name(*id)).collect();
        let also = if others.is_empty() { String::new() } else { format!("; also for {}", others.join(", ")) };
        let message = format!(
            "{step_c:.0} °C is {by:.0} °C too hot for {}{also}",
            context.name(worst),
        );
        let found = Found::on_step(context, moment.index, message)
            .help("take a cooler process, or put this step before the material comes")
            .fact(context.name(worst), by);
        let place = moment.before.section.bodies.iter().find(|body| body.material == worst);
        findings.add(match place.and_then(|body| body.region.bounds()) {
            Some(bounds) => found.at_place(moment.cell, (bounds.min + bounds.max) * 0.5),
            None => found.in_space(moment.cell, 0),
        });
    }
}

/// Materials on the wafer while a step runs: its own film and vias included.
fn on_wafer(context: &Context<'_>, cell: &CellTrace, index: usize) -> Vec<MaterialId> {
    let bodies = cell.stages[index].section.bodies.iter().map(|body| body.material);
    let vias = context.steps().take(index).filter(|(at, _)| cell.stages[at + 1].acts);
    let vias = vias.filter_map(|(_, step)| match step.action {
        Action::Via { material, .. } => Some(material),
        _ => None,
    });
    let mut all: Vec<_> = bodies.chain(vias).chain(added(&context.variant.steps[index])).collect();
    all.sort();
    all.dedup();
    all
}
