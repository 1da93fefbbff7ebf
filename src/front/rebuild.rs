//! The surface read off the outline of the ambient, its pieces taken from an earlier surface.
//!
//! Booleans keep what does not change to within the polygon grid: nearly every edge of the outline
//! lies on a piece of the earlier surface and takes over what that knew. New edges take over
//! what the nearest piece knew. Cost: edges times pieces; it happens when fronts meet.

use super::outline::Facet;
use super::surface::{Chain, Piece, Surface};
use crate::geom::{Point, Region};
use crate::num::tolerance::ON_EDGE_NM;

/// Edges shorter than this have lost their direction to the polygon grid, in nm.
const SHORTEST_NM: f64 = 16.0 * ON_EDGE_NM;

/// The surface of an ambient that reaches the sky, knowing what `old` knew; vertices within
/// `slack_nm` of the chord of their neighbours are left out.
pub(super) fn rebuilt(ambient: &Region, sky: f64, old: &Surface, slack_nm: f64) -> Surface {
    let [left, right] = old.walls;
    let on = |v: f64, at: f64| (v - at).abs() < ON_EDGE_NM;
    let is_frame = |a: Point, b: Point| {
        (on(a.x, left) && on(b.x, left))
            || (on(a.x, right) && on(b.x, right))
            || (on(a.z, sky) && on(b.z, sky))
    };
    let mut chains = Vec::new();
    for ring in ambient.without_hairs().rings() {
        let n = ring.len();
        let edge = |k: usize| (ring[k % n], ring[(k + 1) % n]);
        let first = (0..n).find(|&k| is_frame(edge(k).0, edge(k).1));
        let mut points: Vec<Point> = Vec::new();
        let mut finish = |points: &mut Vec<Point>, closed: bool| {
            let points = thinned(&std::mem::take(points), slack_nm);
            chains.extend(chain(&points, closed, old));
        };
        for k in first.map_or(0, |k| k + 1)..first.map_or(0, |k| k + 1) + n {
            let (a, b) = edge(k);
            if !is_frame(a, b) {
                if points.is_empty() {
                    points.push(a);
                }
                points.push(b);
            } else if !points.is_empty() {
                finish(&mut points, false);
            }
        }
        if points.len() > 1 {
            finish(&mut points, first.is_none());
        }
    }
    Surface { chains, walls: old.walls }
}

/// The points without those that lie within `slack_nm` of the chord of what is kept.
fn thinned(points: &[Point], slack_nm: f64) -> Vec<Point> {
    let last = points.len() - 1;
    let mut kept = vec![points[0]];
    let mut at = 0;
    while at < last {
        let fits = |end: usize| {
            let chord = points[at].distance(points[end]);
            chord > SHORTEST_NM
                && points[at + 1..end]
                    .iter()
                    .all(|p| p.distance_to_segment(points[at], points[end]) <= slack_nm)
        };
        let mut end = at + 1;
        while end < last && (points[at].distance(points[end]) <= SHORTEST_NM || fits(end + 1)) {
            end += 1;
        }
        kept.push(points[end]);
        at = end;
    }
    kept
}

fn chain(points: &[Point], closed: bool, old: &Surface) -> Option<Chain> {
    if points.len() < if closed { 4 } else { 2 } {
        return None;
    }
    let at_wall = |p: Point| {
        let near = old.walls.into_iter().find(|wall| (p.x - wall).abs() < ON_EDGE_NM);
        near.map_or(p, |wall| Point::new(wall, p.z))
    };
    let mut points = points.to_vec();
    if !closed {
        let last = points.len() - 1;
        (points[0], points[last]) = (at_wall(points[0]), at_wall(points[last]));
    }
    let pieces = points.windows(2).map(|p| piece(p[0], p[1], old)).collect::<Option<Vec<_>>>()?;
    let seam_at = |p: Point| {
        let begins = old.pieces().filter(|piece| piece.seam.is_some());
        let begins = begins.map(|piece| (piece.facet.from, piece.seam));
        let ends = old.chains.iter().filter_map(|chain| {
            Some((chain.pieces.last()?.facet.to, chain.end_seam)).filter(|end| end.1.is_some())
        });
        begins.chain(ends).find(|(at, _)| at.distance(p) < SHORTEST_NM).and_then(|(_, seam)| seam)
    };
    let end_seam = if closed { None } else { seam_at(points[points.len() - 1]) };
    let with_seam = |piece: Piece| Piece { seam: seam_at(piece.facet.from), ..piece };
    Some(Chain { pieces: pieces.into_iter().map(with_seam).collect(), closed, end_seam })
}

/// The piece between two points, knowing what the nearest old one knew.
fn piece(from: Point, to: Point, old: &Surface) -> Option<Piece> {
    let middle = (from + to) * 0.5;
    let length = from.distance(to);
    let along = (to - from) * (1.0 / length);
    let distance = |piece: &Piece| {
        let facet = &piece.facet;
        // Of pieces equally near the one that runs the same way.
        let turned = 1.0 - along.dot(Point::new(facet.normal.z, -facet.normal.x));
        middle.distance_to_segment(facet.from, facet.to) + 1e-3 * length * turned
    };
    let own = old
        .pieces()
        .filter(|piece| piece.facet.length() > 0.0)
        .min_by(|a, b| distance(a).total_cmp(&distance(b)))?;
    let gap = middle.distance_to_segment(own.facet.from, own.facet.to);
    let facet = Facet::between(from, to, own.facet.solid);
    let same = gap < SHORTEST_NM && facet.normal.dot(own.facet.normal) > 0.99;
    let facet = if same { Facet { normal: own.facet.normal, ..facet } } else { facet };
    let solved = own.solved.filter(|_| same);
    Some(Piece { facet, seam: None, solved, ..*own })
}
