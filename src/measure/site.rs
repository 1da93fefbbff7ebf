//! All figures of one site, as the report carries them.

use super::geometry::{Geometry, Traced, for_all, site_states};
use super::polish::plane_sigma_nm;
use super::{ElectricalFigures, Figure, MeasureError, SiteFigures, StepFigures};
use crate::flow::{Quantity, Site, State};
use crate::sim::Stage;

/// Figures that cost growth or field solutions of their own; where nobody asked for them, `None`.
#[derive(Debug, Clone, Default)]
pub struct Extras {
    /// Widest space of these lines that the seal still closes, nm.
    pub closing_space: Option<Figure>,
    /// Standard deviation of the height of the void's top, nm.
    pub void_top_sigma_nm: Option<f64>,
    /// Electrical figures.
    pub electrical: Option<ElectricalFigures>,
}

/// The figures of a site at the end of its traces.
pub fn site(
    traced: &Traced,
    geometry: &Geometry,
    extras: Extras,
) -> Result<SiteFigures, MeasureError> {
    let variant = traced.variant;
    let last = traced.fine.last().ok_or(MeasureError::Inconsistent("a trace without stages"))?;
    let line_top = last.section.drawn.line_top;
    let (space_nm, space_right_nm) = drawn_spaces(traced);
    let narrowest = space_right_nm.map_or(space_nm, |right| right.min(space_nm));
    let states = site_states(&geometry.states());
    let sealed_by = geometry.sealed_by();
    let op = |step: usize| variant.steps[step].op_text.clone();
    let least = |quantity| geometry.least(quantity);
    Ok(SiteFigures {
        split: variant.split.as_ref().map(|split| split.value.clone()),
        site: traced.site.label().to_owned(),
        space_nm,
        space_right_nm,
        aspect_ratio: line_top / narrowest,
        state: if let [state] = states[..] { Some(state) } else { None },
        sealed: for_all(&states, |state| matches!(state, State::Sealed | State::Hermetic)),
        sealed_by: sealed_by.map(|(step, _)| op(step)),
        seal_thickness_nm: sealed_by.and_then(|(_, thickness)| thickness),
        throat_nm: geometry.throat(),
        voids: geometry.voids(),
        seams: geometry.seams(),
        side_film_nm: least(Quantity::SideFilm),
        floor_film_nm: least(Quantity::FloorFilm),
        corner_film_nm: least(Quantity::CornerFilm),
        polish_margin_nm: least(Quantity::PolishMargin),
        polish_margin_sigmas: polish_sigmas(traced, geometry, extras.void_top_sigma_nm),
        seal_margin_nm: least(Quantity::SealMargin),
        closing_space_nm: extras.closing_space,
        via_clearance_nm: least(Quantity::ViaClearance),
        electrical: extras.electrical,
        steps: traced.fine.iter().filter_map(|stage| step(traced, stage, line_top)).collect(),
    })
}

/// The polish margin in standard deviations of plane and, where it is known, void top; `None` where
/// neither has a tolerance.
fn polish_sigmas(traced: &Traced, geometry: &Geometry, top_sigma_nm: Option<f64>) -> Option<f64> {
    let margin = geometry.least(Quantity::PolishMargin)?.value;
    let plane_sigma_nm = plane_sigma_nm(traced.variant, geometry.nearest_plane()?);
    let sigma_nm = plane_sigma_nm.hypot(top_sigma_nm.unwrap_or(0.0));
    (sigma_nm > 0.0).then(|| margin / sigma_nm)
}

/// The drawn space, or the left one of a pair and the right one, in nm.
fn drawn_spaces(traced: &Traced) -> (f64, Option<f64>) {
    let wafer = &traced.variant.wafer;
    match traced.site {
        Site::Array { array, .. } => {
            let pair = &wafer.lines.spaces[*array];
            let (left, right) = (pair.left.nominal.nm(), pair.right.nominal.nm());
            (left, (left != right).then_some(right))
        }
        Site::Row { row, space, .. } => (wafer.rows[*row].spaces[space - 1].nominal.nm(), None),
    }
}

fn step(traced: &Traced, stage: &Stage, line_top: f64) -> Option<StepFigures> {
    let step = &traced.variant.steps[stage.step?];
    let library = &traced.flow.library;
    let exposed = stage.exposed_before.iter();
    let tops = stage.section.bodies.iter().filter_map(|body| body.region.bounds());
    let top = tops.map(|bounds| bounds.max.z).max_by(f64::total_cmp)?;
    Some(StepFigures {
        op: step.op_text.clone(),
        verb: step.action.verb().to_owned(),
        exposed_before: exposed.map(|e| library.material(e.material).name.clone()).collect(),
        surface_top_nm: top - line_top,
    })
}
