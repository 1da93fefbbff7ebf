//! What of a section's surface belongs to which body.
//!
//! The ambient's outline is walked edge by edge; an edge of a body that runs the other way over
//! it exposes that body there. Shared edges mostly are the same edges (see
//! [`crate::geom::conform`]) and are found by their ends; the others, where one side has
//! vertices on a straight piece that the other lacks, by overlap along the edge. Cost: n, and
//! the product of the numbers of such others.

use std::collections::BTreeMap;

use super::{Exposure, Section};
use crate::geom::{Point, Region};
use crate::num::tolerance::{GRID_PER_NM, SLIVER_NM};

/// A piece of surface that one body exposes, from one end to the other.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Piece {
    /// Index of the body.
    pub body: usize,
    /// Its points, at least two.
    pub points: Vec<Point>,
}

impl Piece {
    pub(super) fn length(&self) -> f64 {
        self.points.windows(2).map(|ends| ends[0].distance(ends[1])).sum()
    }

    /// The point at half of its length.
    fn middle(&self) -> Point {
        let mut left = self.length() / 2.0;
        for ends in self.points.windows(2) {
            let step = ends[0].distance(ends[1]);
            if step >= left && step > 0.0 {
                return ends[0] + (ends[1] - ends[0]) * (left / step);
            }
            left -= step;
        }
        self.points[0]
    }
}

/// An edge and, sorted along it, what body covers it from where to where (0 to 1).
type Covered = (Point, Point, Vec<(f64, f64, usize)>);

/// The pieces of the outline of an empty region that bodies of the section expose to it.
pub(super) fn pieces(section: &Section, empty: &Region) -> Vec<Piece> {
    let mut edges: Vec<Covered> = empty.edges().map(|(from, to)| (from, to, Vec::new())).collect();
    cover(&mut edges, section);
    let mut pieces = Vec::new();
    let mut first = 0;
    for ring in empty.rings() {
        walk(&edges[first..first + ring.len()], section, &mut pieces);
        first += ring.len();
    }
    pieces
}

/// What a step finds exposed, longest first; a mirrored half counts twice.
pub(super) fn exposures(section: &Section, pieces: &[Piece], symmetric: bool) -> Vec<Exposure> {
    let mut found: Vec<(Exposure, f64)> = Vec::new();
    for piece in pieces {
        let material = section.bodies[piece.body].material;
        let length = piece.length();
        let own = Exposure { material, length_nm: 0.0, place: piece.middle() };
        let at = found.iter().position(|(e, _)| e.material == material).unwrap_or_else(|| {
            found.push((own.clone(), 0.0));
            found.len() - 1
        });
        let (exposure, longest) = &mut found[at];
        exposure.length_nm += if symmetric { 2.0 * length } else { length };
        if length > *longest {
            *longest = length;
            exposure.place = own.place;
        }
    }
    let mut exposures: Vec<_> = found.into_iter().map(|(exposure, _)| exposure).collect();
    exposures.retain(|exposure| exposure.length_nm > SLIVER_NM);
    exposures.sort_by(|a, b| b.length_nm.total_cmp(&a.length_nm).then(a.material.cmp(&b.material)));
    exposures
}

fn cover(edges: &mut [Covered], section: &Section) {
    let key = |a: Point, b: Point| [a.x, a.z, b.x, b.z].map(|v| (v * GRID_PER_NM).round() as i64);
    let ends: BTreeMap<_, _> =
        edges.iter().enumerate().map(|(at, (a, b, _))| (key(*b, *a), at)).collect();
    let mut others = Vec::new();
    for (body, (a, b)) in section
        .bodies
        .iter()
        .enumerate()
        .flat_map(|(at, body)| body.region.edges().map(move |edge| (at, edge)))
    {
        match ends.get(&key(a, b)) {
            Some(&at) => edges[at].2.push((0.0, 1.0, body)),
            None => others.push((body, a, b)),
        }
    }
    for (from, to, covered) in edges.iter_mut().filter(|(_, _, covered)| covered.is_empty()) {
        for &(body, a, b) in &others {
            if let Some((start, end)) = overlap(*from, *to, b, a) {
                covered.push((start, end, body));
            }
        }
        covered.sort_by(|a, b| a.0.total_cmp(&b.0).then(a.2.cmp(&b.2)));
    }
}

/// From where to where (0 to 1) the edge `a` to `b` runs along the edge `from` to `to`.
fn overlap(from: Point, to: Point, a: Point, b: Point) -> Option<(f64, f64)> {
    let (min, max) = (|p: f64, q: f64| p.min(q) - SLIVER_NM, |p: f64, q: f64| p.max(q) + SLIVER_NM);
    if max(a.x, b.x) < min(from.x, to.x)
        || max(from.x, to.x) < min(a.x, b.x)
        || max(a.z, b.z) < min(from.z, to.z)
        || max(from.z, to.z) < min(a.z, b.z)
    {
        return None;
    }
    let along = to - from;
    let length = along.norm();
    let place = |p: Point| (p - from).dot(along) / (length * length);
    let (start, end) = (place(a).max(0.0), place(b).min(1.0));
    let beside = |p: Point| (p - from).cross(along).abs() <= SLIVER_NM * length;
    let shares = (end - start) * length > SLIVER_NM && beside(a) && beside(b);
    shares.then_some((start, end))
}

/// Joins what one body covers along a ring.
fn walk(ring: &[Covered], section: &Section, pieces: &mut Vec<Piece>) {
    let bare = ring.iter().position(|(_, _, covered)| covered.is_empty()).unwrap_or(0);
    let mut open: Option<Piece> = None;
    for (from, to, covered) in ring.iter().cycle().skip(bare).take(ring.len()) {
        for &(start, end, body) in covered {
            let at = |share: f64| *from + (*to - *from) * share;
            let (a, b) = (at(start), at(end));
            let material = section.bodies[body].material;
            match &mut open {
                Some(piece)
                    if section.bodies[piece.body].material == material
                        && piece.points[piece.points.len() - 1].distance(a) <= SLIVER_NM =>
                {
                    piece.points.push(b);
                }
                _ => pieces.extend(open.replace(Piece { body, points: vec![a, b] })),
            }
        }
    }
    pieces.extend(open);
}

/// The parts of the outline of `a` along which `b` lies on the other side.
pub(super) fn contact(a: &Region, b: &Region) -> Vec<(Point, Point)> {
    let far = |p: &Region, q: &Region| match (p.bounds(), q.bounds()) {
        (Some(p), Some(q)) => p.max.x < q.min.x - SLIVER_NM || p.max.z < q.min.z - SLIVER_NM,
        _ => true,
    };
    if far(a, b) || far(b, a) {
        return Vec::new();
    }
    let others: Vec<_> = b.edges().collect();
    let of_edge = |(from, to): (Point, Point)| {
        let shared = others.iter().filter_map(move |&(c, d)| overlap(from, to, d, c));
        shared.map(move |(start, end)| (from + (to - from) * start, from + (to - from) * end))
    };
    a.edges().flat_map(of_edge).collect()
}

/// Whether two regions share a part of their outlines.
pub(super) fn touch(a: &Region, b: &Region) -> bool {
    !contact(a, b).is_empty()
}
