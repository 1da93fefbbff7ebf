//! Fronts that pass through each other in a step: how that is seen, and what is right then.
//!
//! A step is sound when the pieces cross neither each other nor a wall, and the chains still end on
//! their walls in order. Where it is not, the step is done once more as a set: each piece sweeps
//! the quadrilateral between itself and its image, and the ambient loses all that is swept
//! (Huygens' construction; the front moves only into the ambient). Cost: a sort and a sweep over
//! heights; booleans only where fronts passed.

use super::surface::{Surface, area};
use crate::geom::{Point, Region};
use crate::num::tolerance::{ON_EDGE_NM, SAME_LINE_NM};

/// Whether no two pieces cross, and all stay between the walls.
pub(super) fn is_sound(surface: &Surface) -> bool {
    let [left, right] = surface.walls;
    let within = |p: Point| p.x >= left - ON_EDGE_NM && p.x <= right + ON_EDGE_NM;
    struct Span {
        a: Point,
        b: Point,
        low: f64,
        high: f64,
        chain: usize,
        at: usize,
    }
    let mut spans: Vec<Span> = Vec::with_capacity(surface.len());
    for (chain, c) in surface.chains.iter().enumerate() {
        for (at, piece) in c.pieces.iter().enumerate() {
            let (a, b) = (piece.facet.from, piece.facet.to);
            if !within(a) || !within(b) || !(a.z + b.z).is_finite() {
                return false;
            }
            if a != b {
                spans.push(Span { a, b, low: a.z.min(b.z), high: a.z.max(b.z), chain, at });
            }
        }
    }
    spans.sort_by(|s, t| s.low.total_cmp(&t.low));
    for (k, s) in spans.iter().enumerate() {
        let (from, to) = (s.a.x.min(s.b.x), s.a.x.max(s.b.x));
        for t in spans[k + 1..].iter().take_while(|t| t.low <= s.high) {
            if t.a.x.max(t.b.x) < from || t.a.x.min(t.b.x) > to {
                continue;
            }
            let shared = s.b == t.a || s.a == t.b;
            let adjacent = s.chain == t.chain && s.at.abs_diff(t.at) == 1;
            if !shared && !adjacent && cross(s.a, s.b, t.a, t.b) {
                return false;
            }
        }
    }
    true
}

/// Whether two segments cross by more than the rounding of the polygon grid.
fn cross(a: Point, b: Point, c: Point, d: Point) -> bool {
    let sides = |p: Point, q: Point| [c, d, a, b].map(|r| (q - p).cross(r - p));
    let ([at_c, at_d, ..], [.., at_a, at_b]) = (sides(a, b), sides(c, d));
    let deepest = |first: f64, second: f64, length: f64| {
        first.abs().min(second.abs()) > SAME_LINE_NM * length
    };
    at_c * at_d < 0.0
        && at_a * at_b < 0.0
        && deepest(at_c, at_d, a.distance(b))
        && deepest(at_a, at_b, c.distance(d))
}

/// The ambient left by a step in which each piece goes from its place to its image; `images` are
/// the ends of the images, chain by chain, piece by piece.
pub(super) fn swept(ambient: &Region, surface: &Surface, images: &[Vec<[Point; 2]>]) -> Region {
    let mut rings = Vec::new();
    for (chain, images) in surface.chains.iter().zip(images) {
        let mut fan: Vec<Point> = Vec::new();
        for (piece, [from, to]) in chain.pieces.iter().zip(images) {
            let (a, b) = (piece.facet.from, piece.facet.to);
            if a == b {
                // The pieces of a fan sweep one polygon around their point.
                if fan.is_empty() {
                    fan.extend([a, *from]);
                }
                fan.push(*to);
                continue;
            }
            rings.extend(counter_clockwise(std::mem::take(&mut fan)));
            let inside = piece.facet.normal * (-BACK_NM);
            let quad = [a + inside, b + inside, *to, *from];
            rings.extend(counter_clockwise(vec![quad[0], quad[1], quad[2]]));
            rings.extend(counter_clockwise(vec![quad[0], quad[2], quad[3]]));
        }
        rings.extend(counter_clockwise(fan));
    }
    ambient.difference(&Region::from_rings(rings))
}

/// How far into the solid a sweep begins, so that neighbours leave no hairs, in nm.
const BACK_NM: f64 = 1e-4;

/// A ring that winds like all others, so that overlaps do not cancel; none of two points.
fn counter_clockwise(mut ring: Vec<Point>) -> Option<Vec<Point>> {
    if area(&ring) < 0.0 {
        ring.reverse();
    }
    (ring.len() > 2).then_some(ring)
}
