//! How much barrier is left on metals that drift.

use super::context::Context;
use super::metal::drifts;
use super::shape::Look;
use crate::flow::Action;
use crate::geom::Point;
use crate::library::{CopperBarrier, Kind, MaterialId, Process};
use crate::sim::{Body, CellTrace, Origin, Section};

/// A place where a barrier is too thin.
pub struct Thin<'a> {
    /// The cell.
    pub cell: &'a CellTrace,
    /// The step after which it is too thin; `None`: as found.
    pub step: Option<usize>,
    /// The metal.
    pub metal: MaterialId,
    /// Its barrier.
    pub barrier: MaterialId,
    /// What is left, in nm.
    pub thickness_nm: f64,
    /// What is wanted, in nm.
    pub wanted_nm: f64,
    /// Where.
    pub place: Point,
}

/// The thinnest place of each barrier of the finished section that falls short, with the step
/// that made it so.
pub fn thinnest<'a>(context: &Context<'a>, atomic_layer: f64, plasma: f64) -> Vec<Thin<'a>> {
    let least = |body: &Body| least_nm(context, body, atomic_layer, plasma);
    let mut all = Vec::new();
    for cell in context.cells {
        let end = &cell.stages[cell.stages.len() - 1];
        for mut thin in of_section(context, cell, &end.section, &least) {
            let first = cell.stages.iter().find(|stage| {
                let of_stage = of_section(context, cell, &stage.section, &least);
                of_stage.iter().any(|t| t.metal == thin.metal && t.barrier == thin.barrier)
            });
            thin.step = first.and_then(|stage| stage.step);
            all.push(thin);
        }
    }
    all
}

/// The least thickness of a barrier body by what made it.
fn least_nm(context: &Context<'_>, body: &Body, atomic_layer: f64, plasma: f64) -> f64 {
    let own = match context.material(body.material).copper_barrier {
        CopperBarrier::FromNm(nm) => nm,
        CopperBarrier::Yes | CopperBarrier::No => 0.0,
    };
    let by_process = match body.origin {
        Origin::Step(step) => match &context.variant.steps[step].action {
            Action::Deposit { process, .. } if !by_atomic_layers(&process.process) => plasma,
            _ => atomic_layer,
        },
        _ => atomic_layer,
    };
    own.max(by_process)
}

fn by_atomic_layers(process: &Process) -> bool {
    process.dose_pa_s.is_some()
        || process.arrival.as_ref().is_none_or(|arrival| arrival.conformal.value >= 0.5)
}

fn of_section<'a>(
    context: &Context<'_>,
    cell: &'a CellTrace,
    section: &Section,
    least: &dyn Fn(&Body) -> f64,
) -> Vec<Thin<'a>> {
    let look = Look::at(section);
    let is_barrier = |body: &Body| {
        let material = context.material(body.material);
        material.copper_barrier.counts() && !material.needs_barrier
    };
    let mut found: Vec<Thin<'a>> = Vec::new();
    for metal in section.bodies.iter().filter(|body| drifts(context, body)) {
        for contact in look.contacts(&metal.region) {
            let Some(barrier) = contact.body.filter(|body| is_barrier(body)) else { continue };
            let wanted = least(barrier);
            let (thickness, beyond) = look.thickness(&contact, wanted, is_barrier);
            // Metal may stand behind metal; a space or a dielectric may not.
            let conductor =
                beyond.is_some_and(|body| context.material(body.material).kind == Kind::Conductor);
            if thickness + THICKNESS_SLACK_NM >= wanted || conductor {
                continue;
            }
            let thin = Thin {
                cell,
                step: None,
                metal: metal.material,
                barrier: barrier.material,
                thickness_nm: thickness,
                wanted_nm: wanted,
                place: contact.place,
            };
            let same = |t: &&mut Thin<'_>| t.metal == thin.metal && t.barrier == thin.barrier;
            match found.iter_mut().find(same) {
                Some(known) if known.thickness_nm <= thickness => {}
                Some(known) => *known = thin,
                None => found.push(thin),
            }
        }
    }
    found
}

/// Steps in which a thickness is walked, twice: a barrier that is just thick enough is.
const THICKNESS_SLACK_NM: f64 = 0.1;
