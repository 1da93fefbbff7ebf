//! `polish-margin`: how far the planes cut after a void closed stay above its top.

use super::reading::Missing;
use super::view::Window;
use crate::flow::{Action, Variant};
use crate::geom::Region;
use crate::sim::{Event, Stage};

/// A plane and how far it stays above the voids that were there.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Clearance {
    /// Index of the step that cut the plane.
    pub step: usize,
    /// From the void's top up to the plane, in nm.
    pub margin_nm: f64,
}

/// The least clearance of all planes over all voids of a space.
///
/// A void that a plane opened has none, whatever closed over it later.
pub(super) fn clearance(stages: &[Stage], index: usize) -> Result<Clearance, Missing> {
    let mut least: Option<Clearance> = None;
    let mut voids = false;
    for (at, stage) in stages.iter().enumerate() {
        let window = Window::of(&stage.section.drawn, index);
        let Some(plane_nm) = plane(stage) else {
            voids |= at + 1 == stages.len() && !window.view(&all_voids(stage)).is_empty();
            continue;
        };
        if let Some(depth_nm) = cut_depth(stage, index, plane_nm) {
            return Err(Missing::Cut { depth_nm });
        }
        let Some(top) = window.view(&all_voids(stage)).bounds().map(|bounds| bounds.max.z) else {
            continue;
        };
        voids = true;
        let margin_nm = plane_nm - top;
        let step = stage.step.unwrap_or(0);
        if least.is_none_or(|least| margin_nm < least.margin_nm) {
            least = Some(Clearance { step, margin_nm });
        }
    }
    least.ok_or(if voids { Missing::NoPlane } else { Missing::NoVoid })
}

/// Standard deviation of a plane's height, from its own tolerance, in nm.
pub(super) fn plane_sigma_nm(variant: &Variant, step: usize) -> f64 {
    match &variant.steps[step].action {
        Action::Polish { to, .. } => to.offset.three_sigma.nm() / 3.0,
        _ => 0.0,
    }
}

fn plane(stage: &Stage) -> Option<f64> {
    stage.events.iter().find_map(|event| match event {
        Event::Planed { z_nm, .. } => Some(*z_nm),
        _ => None,
    })
}

/// How far below the top of a void that it opened a plane lies.
fn cut_depth(stage: &Stage, index: usize, plane_nm: f64) -> Option<f64> {
    let depths = stage.events.iter().filter_map(|event| match event {
        Event::Opened { space, void } if *space == index => Some(void.bounds()?.max.z - plane_nm),
        _ => None,
    });
    depths.max_by(f64::total_cmp)
}

fn all_voids(stage: &Stage) -> Region {
    Region::union_all(stage.section.voids.iter())
}
