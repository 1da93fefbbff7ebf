//! Seams: where fronts met above a closed throat.
//!
//! The notch between two fronts is the point where the pieces of one side meet those of the other;
//! it is followed from the chord of the closed throat upward, step by step. The seam ends where
//! the notch opens beyond 90 degrees, measured between the points of the two sides that lie two
//! closure widths (1 nm by default) from its middle.

use super::surface::{Chain, Surface};
use crate::geom::{Point, Region};
use crate::num::tolerance::SAME_LINE_NM;

/// A seam in the making.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Track {
    /// Index of the closure that it belongs to; pieces carry the same number.
    pub(super) closure: usize,
    /// Its points so far, upward.
    pub(super) points: Vec<Point>,
}

/// Adds where the notch is now; false when the seam has ended.
pub(super) fn follow(track: &mut Track, surface: &Surface, closure_width: f64) -> bool {
    let Some(notch) = find(surface, track.closure) else { return false };
    let reach = 2.0 * closure_width;
    let [before, after] = notch.sides(surface, reach);
    let (Some(before), Some(after)) = (before, after) else { return false };
    let (a, b) = (before - notch.at, after - notch.at);
    // From the right side counter-clockwise to the left one, over the ambient.
    let angle = b.cross(a).atan2(b.dot(a));
    let opening = if angle < 0.0 { angle + std::f64::consts::TAU } else { angle };
    if opening > std::f64::consts::FRAC_PI_2 {
        return false;
    }
    if track.points.last().is_none_or(|last| notch.at.z > last.z) {
        track.points.push(notch.at);
    }
    true
}

/// Every seam whose notch is still on the surface, and where that is.
pub(super) fn notches(surface: &Surface) -> Vec<(usize, Point)> {
    let of = |chain: &Chain| {
        let pieces = chain.pieces.iter().filter_map(|p| Some((p.seam?, p.facet.from)));
        let end = chain.end_seam.zip(chain.pieces.last().map(|last| last.facet.to));
        pieces.chain(end).collect::<Vec<_>>()
    };
    surface.chains.iter().flat_map(of).collect()
}

/// Marks where the surface meets a plug as the notch of a seam: on the wall where the plug lies at
/// one, else at its lowest point there.
pub(super) fn plant(surface: &mut Surface, plug: &Region, seam: usize) {
    let on_plug = |p: Point| plug.edges().any(|(a, b)| p.distance_to_segment(a, b) < SAME_LINE_NM);
    let inside = |p: Point| !surface.walls.contains(&p.x);
    let points = surface.chains.iter().enumerate().flat_map(|(c, chain)| {
        let of_chain = chain.points().collect::<Vec<_>>().into_iter().enumerate();
        of_chain.map(move |(k, p)| (p, c, k))
    });
    let lowest = points
        .filter(|(p, ..)| on_plug(*p))
        .min_by(|(p, ..), (q, ..)| inside(*p).cmp(&inside(*q)).then(p.z.total_cmp(&q.z)));
    if let Some((_, c, k)) = lowest {
        let chain = &mut surface.chains[c];
        match chain.pieces.get_mut(k) {
            Some(piece) => piece.seam = Some(seam),
            None => chain.end_seam = Some(seam),
        }
    }
}

struct Notch {
    at: Point,
    chain: usize,
    /// Pieces before this one are on the left side; the number of pieces at the chain's end.
    piece: usize,
}

fn find(surface: &Surface, seam: usize) -> Option<Notch> {
    for (chain, c) in surface.chains.iter().enumerate() {
        if let Some(piece) = c.pieces.iter().position(|p| p.seam == Some(seam)) {
            return Some(Notch { at: c.pieces[piece].facet.from, chain, piece });
        }
        if c.end_seam == Some(seam) {
            let at = c.pieces.last()?.facet.to;
            return Some(Notch { at, chain, piece: c.pieces.len() });
        }
    }
    None
}

impl Notch {
    /// The points at `reach` from the notch, before and after it; a wall mirrors the other side.
    fn sides(&self, surface: &Surface, reach: f64) -> [Option<Point>; 2] {
        let pieces = &surface.chains[self.chain].pieces;
        let at = self.at;
        let crossing = |from: Point, to: Point| {
            let (inside, outside) = (at.distance(from), at.distance(to));
            (outside >= reach).then(|| {
                let t = if outside > inside { (reach - inside) / (outside - inside) } else { 0.0 };
                from + (to - from) * t.clamp(0.0, 1.0)
            })
        };
        let before =
            pieces[..self.piece].iter().rev().find_map(|p| crossing(p.facet.to, p.facet.from));
        let after = pieces[self.piece..].iter().find_map(|p| crossing(p.facet.from, p.facet.to));
        let image = |p: Point| Point::new(2.0 * at.x - p.x, p.z);
        let open = !surface.chains[self.chain].closed;
        if open && self.piece == 0 {
            [after.map(image), after]
        } else if open && self.piece == pieces.len() {
            [before, before.map(image)]
        } else {
            [before, after]
        }
    }
}
