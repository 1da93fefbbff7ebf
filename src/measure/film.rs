//! `side-film`, `floor-film`, `corner-film`, `roof`: how much solid keeps a void, or the open
//! space, from what lies around it.

use std::f64::consts::FRAC_PI_2;

use super::view::View;
use crate::flow::{Action, Variant};
use crate::geom::{Point, Region, covered};
use crate::num::tolerance::{CORNER_LOSS_NM, GRID_PER_NM};
use crate::sim::Stage;

/// Solid between an empty region and the nearer line side, level, at half of the line height or,
/// where the region does not reach there, at its widest place between line bottom and top.
///
/// Other empty regions on the way do not count. `None` where the region lies above or below the
/// lines.
pub(super) fn side(space: &View, empty: &Region) -> Option<f64> {
    let half = space.line_top / 2.0;
    let z = if empty.row(half).is_empty() { widest_place(space, empty)? } else { half };
    let reach = empty.row(z);
    let (first, last) = (reach.first()?[0], reach.last()?[1]);
    let [left, right] = space.line_sides(z);
    let solid = space.solid.row(z);
    Some(covered(&solid, left, first).min(covered(&solid, last, right)))
}

/// Height between line bottom and top at which a region is widest.
fn widest_place(space: &View, empty: &Region) -> Option<f64> {
    let cell = 1.0 / GRID_PER_NM;
    let corners = empty.rings().flatten().map(|p| p.z).chain([0.0, space.line_top]);
    let beside =
        corners.flat_map(|z| [z - cell, z + cell]).filter(|z| (0.0..=space.line_top).contains(z));
    let widths = beside.filter_map(|z| {
        let row = empty.row(z);
        Some((row.last()?[1] - row.first()?[0], z))
    });
    widths.max_by(|a, b| a.0.total_cmp(&b.0).then(b.1.total_cmp(&a.1))).map(|(_, z)| z)
}

/// Solid below an empty region at mid-space, down to the floor that the last etch left.
pub(super) fn floor(space: &View, empty: &Region, floor: f64) -> Option<f64> {
    let bottom = empty.column(0.0).first()?[0];
    Some(covered(&space.solid.column(0.0), floor, bottom))
}

/// Height at mid-space of the floor of a space: lowest empty place there after the last step
/// that took something away and so lowered it, or on the wafer as found.
pub(super) fn floor_height(variant: &Variant, stages: &[Stage], index: usize) -> Option<f64> {
    let lowest = |stage: &Stage| {
        let empty = View::of(&stage.section, index).empty();
        empty.column(0.0).first().map(|piece| piece[0])
    };
    let digs = |stage: &Stage| {
        let action = stage.step.map(|step| &variant.steps[step].action);
        stage.acts
            && matches!(
                action,
                Some(
                    Action::Etch { .. }
                        | Action::EtchUntil { .. }
                        | Action::Release { .. }
                        | Action::Strip { .. }
                )
            )
    };
    for (after, before) in stages.iter().skip(1).zip(stages).rev().filter(|(s, _)| digs(s)) {
        if let (Some(now), Some(then)) = (lowest(after), lowest(before))
            && now < then
        {
            return Some(now);
        }
    }
    stages.first().and_then(lowest)
}

/// Least way from the top corners of the two lines to anything empty.
///
/// A corner is the point, or the arc, that was drawn; where the line lost it, what of the line is
/// nearest to it. `None` where neither line has anything left near its corner.
pub(super) fn corner(space: &View, radius_nm: f64) -> Option<f64> {
    let empty = space.empty();
    let corners = space.corners();
    let drawn = corners.iter().zip([-1.0, 1.0]).flat_map(|(c, inward)| arc(*c, inward, radius_nm));
    let ways = drawn.filter_map(|p| {
        let left = space.lines.nearest(p).filter(|left| left.distance(p) <= CORNER_LOSS_NM)?;
        Some(if empty.contains(left) { 0.0 } else { empty.nearest(left)?.distance(left) })
    });
    ways.min_by(f64::total_cmp)
}

/// Points of a drawn corner: the sharp one itself, else its arc; `inward` is the sign of x into
/// the line.
fn arc(corner: Point, inward: f64, radius_nm: f64) -> Vec<Point> {
    if radius_nm == 0.0 {
        return vec![corner];
    }
    let centre = corner + Point::new(inward * radius_nm, -radius_nm);
    let angles = (0..=ARC_STEPS).map(|k| FRAC_PI_2 * f64::from(k) / f64::from(ARC_STEPS));
    angles.map(|a| centre + Point::new(-inward * a.cos(), a.sin()) * radius_nm).collect()
}

/// Points on the arc of a rounded corner, less one: the arc is missed by at most r/3000.
const ARC_STEPS: u32 = 32;

/// Shortest straight way from a void to the ambient.
pub(super) fn roof(space: &View, void: &Region) -> Option<f64> {
    void.distance(&space.ambient)
}
