//! `via`: what a slot down onto a line would open.
//!
//! A via is local: the section stays as it is without it. The slot reaches from the surface to
//! the top of its line, and the overetch deeper beside it; it stands off the line's middle by
//! the overlay, toward the wider space. The clearance is taken on both sides, each with the slot
//! off to that side and half of its width tolerance wider; of a slot that cuts into a void it is
//! minus how far it does, across.

use super::super::operation::Via;
use super::super::{Body, Event, Origin, Section};
use crate::geom::{Bounds, Point, Region};

/// The slots of a via step in a whole cell.
pub(in super::super) fn slots(via: &Via, section: &Section, step: usize) -> Vec<Event> {
    let slot = |&line: &usize| {
        let drawn = &section.drawn;
        let middle = (drawn.lines[line].top_x[0] + drawn.lines[line].top_x[1]) / 2.0;
        let [left, right] = [line, line + 1].map(|space| drawn.space_widths(space)[0]);
        let side = if left > right { -1.0 } else { 1.0 };
        let bottom = line_top(section, line) - via.overetch;
        let worst = |side: f64| {
            let half = via.width / 2.0 + via.width_tolerance / 2.0;
            let reach = column(section, middle + side * via.overlay, half, bottom);
            clearance(&reach, section)
        };
        let region = column(section, middle + side * via.overlay, via.width / 2.0, bottom);
        let slot = region.difference(&lines(section));
        Event::Via {
            bodies: fill(via, &slot, step),
            slot,
            line,
            clearance_nm: [worst(-1.0), worst(1.0)].into_iter().flatten().reduce(f64::min),
        }
    };
    via.lines.iter().map(slot).collect()
}

fn line_top(section: &Section, line: usize) -> f64 {
    let of_line = section
        .bodies
        .iter()
        .filter(|body| matches!(body.origin, Origin::Line { line: own, .. } if own == line));
    let tops = of_line.filter_map(|body| body.region.bounds()).map(|b| b.max.z);
    tops.fold(f64::MIN, f64::max).min(section.drawn.line_top)
}

fn lines(section: &Section) -> Region {
    let of_lines = section
        .bodies
        .iter()
        .filter(|body| matches!(body.origin, Origin::Line { .. } | Origin::Liner(_)));
    Region::union_all(of_lines.map(|body| &body.region))
}

/// From the surface there down to `bottom`, within the walls.
fn column(section: &Section, middle: f64, half: f64, bottom: f64) -> Region {
    let [left, right] = section.drawn.walls;
    let x = [(middle - half).max(left), (middle + half).min(right)];
    let all = Region::rectangle(x, [bottom, section.sky()]);
    let surface = section.solid().intersection(&all).bounds().map_or(bottom, |b| b.max.z);
    Region::rectangle(x, [bottom, surface])
}

/// From the slot to the nearest void; `None` without voids.
fn clearance(slot: &Region, section: &Section) -> Option<f64> {
    let gap = |void: &Region| -> Option<f64> {
        let cut = void.intersection(slot);
        if let Some(Bounds { min, max }) = cut.bounds() {
            return Some(min.x - max.x);
        }
        let sides: Vec<_> = slot.edges().collect();
        let of_void = void.edges().flat_map(|(a, b)| {
            sides.iter().map(move |&(c, d)| {
                let to_void = |p: Point| p.distance_to_segment(a, b);
                let to_slot = |p: Point| p.distance_to_segment(c, d);
                to_void(c).min(to_void(d)).min(to_slot(a)).min(to_slot(b))
            })
        });
        of_void.reduce(f64::min)
    };
    section.voids.iter().filter_map(gap).reduce(f64::min)
}

/// Liner and core of a slot, flush with the surface.
fn fill(via: &Via, slot: &Region, step: usize) -> Vec<Body> {
    let origin = Origin::Step(step);
    let (Some((thickness, material)), Some(bounds)) = (via.liner, slot.bounds()) else {
        return vec![Body { material: via.material, origin, region: slot.clone() }];
    };
    let reach = 2.0 * thickness;
    let mouth = Region::rectangle(
        [bounds.min.x, bounds.max.x],
        [bounds.max.z - thickness / 8.0, bounds.max.z + reach],
    );
    let frame = Region::rectangle(
        [bounds.min.x - reach, bounds.max.x + reach],
        [bounds.min.z - reach, bounds.max.z + reach],
    );
    let around = frame.difference(&slot.union(&mouth));
    let core = slot.difference(&around.grown(thickness, std::f64::consts::PI / 36.0));
    let liner = slot.difference(&core);
    let body = |material, region| Body { material, origin, region };
    vec![body(material, liner), body(via.material, core)]
}
