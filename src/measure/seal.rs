//! `seal-margin`, and which step closed a space: read from the closures of the trace.

use super::view::Window;
use crate::flow::{Action, State, Variant};
use crate::geom::{Point, Region};
use crate::sim::{Body, Event, Origin, Section, Stage};

/// How a space was closed.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Seal {
    /// Index of the step whose film closed it.
    pub step: usize,
    /// Open-field thickness of that film at closure and beyond it, in nm; `None` where no throat
    /// closed, as under a film that bridges what a release takes away.
    pub film: Option<Film>,
}

/// The film that closed a throat, thicknesses on an open flat in nm.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Film {
    /// At closure.
    pub at_closure_nm: f64,
    /// Beyond closure.
    pub margin_nm: f64,
}

/// The step that closed a space, if its last stage shows it closed.
///
/// The film that closed the space since it was last open. Of several closures the last one
/// counts that shut off something below the line top: what meets higher up shuts only the
/// notch. Where no throat closed, it is the step whose film lies over the void.
pub(super) fn seal(variant: &Variant, stages: &[Stage], index: usize) -> Option<Seal> {
    let open = |stage: &Stage| stage.states.get(index) == Some(&State::Open);
    let last = stages.last().filter(|last| !open(last))?;
    let since_open = stages.iter().rposition(open).map_or(stages.len(), |at| at + 1);
    let line_top = last.section.drawn.line_top;
    for stage in &stages[since_open..] {
        if let (Some(step), Some(at_closure_nm)) = (stage.step, closure_nm(stage, index, line_top))
            && let Action::Deposit { thickness, .. } = &variant.steps[step].action
        {
            let margin_nm = thickness.nominal.nm() - at_closure_nm;
            return Some(Seal { step, film: Some(Film { at_closure_nm, margin_nm }) });
        }
    }
    let step = roof_step(&last.section, index)?;
    Some(Seal { step, film: None })
}

/// Thickness at which a stage closed a space.
fn closure_nm(stage: &Stage, index: usize, line_top: f64) -> Option<f64> {
    let closures = stage.events.iter().filter_map(|event| match event {
        Event::Closed { space, thickness_nm, void, .. } if *space == index => {
            Some((*thickness_nm, void.bounds().is_some_and(|b| b.min.z < line_top)))
        }
        _ => None,
    });
    let closures: Vec<_> = closures.collect();
    let last_below = closures.iter().rev().find(|(_, below)| *below);
    last_below.or(closures.last()).map(|(thickness, _)| *thickness)
}

/// The step that made the body right above the highest void of a space.
fn roof_step(section: &Section, index: usize) -> Option<usize> {
    let window = Window::of(&section.drawn, index);
    let here = section.voids.iter().filter(|void| !window.view(void).is_empty());
    let top = |void: &Region| void.bounds().map_or(f64::NEG_INFINITY, |bounds| bounds.max.z);
    let highest = here.max_by(|a, b| top(a).total_cmp(&top(b)))?;
    match roof_body(section, highest)?.origin {
        Origin::Step(step) => Some(step),
        _ => None,
    }
}

/// The body right above the highest point of a void.
pub(super) fn roof_body<'a>(section: &'a Section, void: &Region) -> Option<&'a Body> {
    let top = void.rings().flatten().max_by(|a, b| a.z.total_cmp(&b.z))?;
    let [left, right] = section.drawn.walls;
    let x = top.x.clamp(left + ABOVE_NM, right - ABOVE_NM);
    let above = Point::new(x, top.z + ABOVE_NM);
    section.bodies.iter().find(|body| body.region.contains(above))
}

/// How far above the top of a void, and inside the walls, its roof is looked up, in nm.
const ABOVE_NM: f64 = 1e-3;
