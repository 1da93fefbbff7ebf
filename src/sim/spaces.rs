//! State and throat of each space.
//!
//! Open: the ambient has area in the drawn space below the line top (or below the plane, where
//! one was cut lower). Sealed: a void lies between the mid-lines. The throat is the narrowest
//! horizontal way, from the widest place below the line top upward; widths change linearly
//! between vertices, so they are compared at the vertices. Cost: the square of the number of
//! vertices in a space.

use super::section::is_thinner_than;
use super::{Section, Space, hermetic};
use crate::flow::State;
use crate::geom::{Point, Region};
use crate::library::Library;
use crate::num::tolerance::SLIVER_NM;

/// State of one space.
pub(super) fn state(section: &Section, ambient: &Region, at: usize, library: &Library) -> State {
    let reached = reached(section, ambient, at);
    if !reached.is_empty() {
        return State::Open;
    }
    let voids: Vec<_> = voids_in(section, at).collect();
    if voids.is_empty() {
        State::Solid
    } else if voids.iter().all(|void| hermetic::is_shut_in(section, ambient, void, library)) {
        State::Hermetic
    } else {
        State::Sealed
    }
}

/// What the ambient reaches of a drawn space below the line top.
pub(super) fn reached(section: &Section, ambient: &Region, at: usize) -> Region {
    let drawn = &section.drawn;
    let below = Region::rectangle(drawn.walls, [-1.0, section.effective_line_top()]);
    let space = drawn.space_region(at).intersection(&below);
    let reached = ambient.intersection(&space);
    if is_thinner_than(&reached, SLIVER_NM) { Region::empty() } else { reached }
}

/// The voids that lie between the mid-lines of a space.
pub(super) fn voids_in(section: &Section, at: usize) -> impl Iterator<Item = &Region> {
    let [left, right] = section.drawn.space(at).x;
    section.voids.iter().filter(move |void| {
        let Some(bounds) = void.bounds() else { return false };
        let strip = Region::rectangle([left, right], [bounds.min.z, bounds.max.z]);
        let inside = void.intersection(&strip);
        !inside.is_empty() && !is_thinner_than(&inside, SLIVER_NM)
    })
}

/// Width of the throat of a space that is still open, whole also where a wall halves it, in nm.
pub(super) fn throat(section: &Section, ambient: &Region, at: usize) -> Option<f64> {
    let space = section.drawn.space(at);
    let top = section.effective_line_top();
    let widths = widths(ambient, &space, section.drawn.walls);
    let below = widths.iter().filter(|&&(z, width)| z <= top && width.is_finite());
    let widest = below.fold(None, |best: Option<(f64, f64)>, &(z, width)| match best {
        Some((_, most)) if most >= width => best,
        _ => Some((z, width)),
    })?;
    let above = widths.iter().filter(|&&(z, _)| z >= widest.0).map(|&(_, width)| width);
    let narrowest = above.fold(f64::INFINITY, f64::min);
    (narrowest > 0.0 && narrowest.is_finite()).then_some(narrowest)
}

/// The widest horizontal way through the ambient in a space at every height where that may
/// change, lowest first; infinite where it leads over a line.
fn widths(ambient: &Region, space: &Space, walls: [f64; 2]) -> Vec<(f64, f64)> {
    let [left, right] = space.x;
    let crosses = |a: Point, b: Point| a.x.max(b.x) > left && a.x.min(b.x) < right;
    let edges: Vec<_> = ambient.edges().filter(|&(a, b)| crosses(a, b)).collect();
    let mut heights: Vec<_> = edges.iter().flat_map(|&(a, b)| [a.z, b.z]).collect();
    heights.sort_by(f64::total_cmp);
    heights.dedup();
    let inside: Vec<_> = heights
        .windows(2)
        .filter(|pair| pair[1] - pair[0] > 2.0 * SLIVER_NM)
        .flat_map(|pair| [pair[0] + SLIVER_NM, pair[1] - SLIVER_NM])
        .collect();
    let width_at = |z: f64| {
        let mut crossings: Vec<_> = edges
            .iter()
            .filter(|&&(a, b)| (a.z > z) != (b.z > z))
            .map(|&(a, b)| a.x + (z - a.z) / (b.z - a.z) * (b.x - a.x))
            .chain([left, right])
            .map(|x| x.clamp(left, right))
            .collect();
        crossings.sort_by(f64::total_cmp);
        let ways = crossings.windows(2).filter(|way| {
            way[1] - way[0] > 0.0 && ambient.contains(Point::new((way[0] + way[1]) / 2.0, z))
        });
        ways.map(|way| whole_width([way[0], way[1]], space, walls)).fold(0.0, f64::max)
    };
    inside.into_iter().map(|z| (z, width_at(z))).collect()
}

fn whole_width(way: [f64; 2], space: &Space, walls: [f64; 2]) -> f64 {
    let at_wall = [way[0] <= walls[0], way[1] >= walls[1]];
    let over_line = (way[0] <= space.x[0] && space.left.is_some())
        || (way[1] >= space.x[1] && space.right.is_some());
    match at_wall {
        _ if over_line => f64::INFINITY,
        [true, true] => f64::INFINITY,
        [false, false] => way[1] - way[0],
        _ => 2.0 * (way[1] - way[0]),
    }
}
