//! Making triangles small and round enough: Ruppert's Delaunay refinement.
//!
//! Method: a bad triangle gets its circumcentre as a new vertex; where an outline hides the
//! centre, or has the centre in its diametral circle, that outline edge is split at its middle
//! instead (Ruppert, J. Algorithms 18, 548 (1995)). Flips restore the Delaunay property. On
//! the noding grid middles of outline edges are exact for some thirty halvings, so no outline
//! moves. Deviations: only outline edges that stop a circumcentre are split, not all that are
//! encroached; triangles with a longest side below a floor, or whose sharpest angle lies
//! between two outlines, may stay slender, and outline edges below the floor are not split, so
//! a cusp, a very thin film or a small angle costs little. Cost: some microseconds a triangle.
//! It stops at a number of triangles, and says so.

use super::domain::{Mesh, Side};
use super::triangulation::NONE;
use crate::geom::Point;

/// Sine of the smallest angle of a triangle that is left alone: 21 degrees.
const SHARPEST: f64 = 0.358;

/// What triangles must become.
pub(super) struct Wanted {
    /// Triangles with all three vertices at or below a size must not be longer than the largest
    /// of the three, in nm; one a vertex.
    pub size: Vec<f64>,
    /// Triangles at a vertex must not be longer than this, in nm; one a vertex.
    pub tip: Vec<f64>,
    /// Below this longest side the shape does not matter, in nm.
    pub floor: f64,
    /// Triangles at most.
    pub limit: usize,
}

/// Splits and flips until every triangle is as wanted; whether the limit sufficed.
pub(super) fn refine(mesh: &mut Mesh, wanted: &mut Wanted) -> bool {
    let mut refiner = Refiner { mesh, wanted, queue: Vec::new(), flips: Vec::new() };
    refiner.legalize_all();
    refiner.queue = (0..refiner.mesh.triangles.len() as u32).rev().collect();
    while let Some(t) = refiner.queue.pop() {
        while refiner.is_bad(t as usize) {
            if refiner.mesh.triangles.len() + 2 > refiner.wanted.limit {
                return false;
            }
            if !refiner.improve(t as usize) {
                break;
            }
        }
    }
    true
}

struct Refiner<'a> {
    mesh: &'a mut Mesh,
    wanted: &'a mut Wanted,
    /// Triangles that changed and must be looked at.
    queue: Vec<u32>,
    /// Sides that may have to be flipped.
    flips: Vec<(u32, usize)>,
}

impl Refiner<'_> {
    /// Squared length of a side, the same number from both of its triangles.
    fn length2(&self, t: usize, side: usize) -> f64 {
        let v = self.mesh.triangles[t];
        let (a, b) = (v[(side + 1) % 3], v[(side + 2) % 3]);
        let d = self.mesh.points[a.max(b) as usize] - self.mesh.points[a.min(b) as usize];
        d.dot(d)
    }

    fn longest(&self, t: usize) -> (usize, f64) {
        let lengths = [0, 1, 2].map(|side| self.length2(t, side));
        let mut longest = 0;
        for side in 1..3 {
            if lengths[side] > lengths[longest] {
                longest = side;
            }
        }
        (longest, lengths[longest])
    }

    /// Whether a triangle is longer than wanted.
    fn is_long(&self, t: usize) -> bool {
        let v = self.mesh.triangles[t].map(|v| v as usize);
        let size = v.iter().fold(0.0_f64, |size, v| size.max(self.wanted.size[*v]));
        let tip = v.iter().fold(f64::INFINITY, |tip, v| tip.min(self.wanted.tip[*v]));
        let most = size.min(tip);
        self.longest(t).1 > most * most
    }

    fn is_bad(&self, t: usize) -> bool {
        if self.is_long(t) {
            return true;
        }
        let (longest, length2) = self.longest(t);
        if length2 < self.wanted.floor * self.wanted.floor {
            return false;
        }
        let [a, b, c] = self.mesh.corners(t);
        let lengths = [0, 1, 2].map(|side| self.length2(t, side));
        let shortest = (0..3).fold(longest, |s, k| if lengths[k] < lengths[s] { k } else { s });
        let others = lengths[(shortest + 1) % 3] * lengths[(shortest + 2) % 3];
        let area2 = (b - a).cross(c - a);
        if area2 * area2 >= SHARPEST * SHARPEST * others {
            return false;
        }
        // The sharpest angle is opposite the shortest side; between two outlines it is given.
        let sides = self.mesh.sides[t];
        let given = |side: usize| sides[side % 3] != Side::Free;
        !(given(shortest + 1) && given(shortest + 2))
    }

    /// Inserts the circumcentre of a triangle, or splits the outline edge in its way; whether
    /// there was anything to do above the floor.
    fn improve(&mut self, t: usize) -> bool {
        let [a, b, c] = self.mesh.corners(t);
        let (b, c) = (b - a, c - a);
        let (bb, cc) = (b.dot(b), c.dot(c));
        let scale = 0.5 / b.cross(c);
        let centre = a + Point::new(c.z * bb - b.z * cc, b.x * cc - c.x * bb) * scale;
        let (at, side) = match self.walk(t, a + (b + c) * (1.0 / 3.0), centre) {
            Seen::Inside(at) => match self.encroached(at, centre) {
                None => {
                    self.insert(at, centre);
                    return true;
                }
                Some(edge) => edge,
            },
            Seen::Behind(at, side) => (at, side),
        };
        let length2 = self.length2(at, side);
        let wanted = self.is_long(t) || length2 > self.wanted.floor * self.wanted.floor;
        if wanted {
            self.split(at, side);
        }
        wanted
    }

    /// Walks straight from a point of triangle `t` to another point.
    fn walk(&self, t: usize, from: Point, to: Point) -> Seen {
        let mut at = t;
        let mut entry = usize::MAX;
        loop {
            let corners = self.mesh.corners(at);
            let left = corners.map(|p| (to - from).cross(p - from) >= 0.0);
            let leaves = |side: &usize| {
                let (a, b) = ((side + 1) % 3, (side + 2) % 3);
                *side != entry
                    && !left[a]
                    && left[b]
                    && (corners[b] - corners[a]).cross(to - corners[a]) < 0.0
            };
            let Some(side) = (0..3).find(leaves) else { return Seen::Inside(at) };
            let other = self.mesh.neighbours[at][side];
            if other == NONE || self.mesh.sides[at][side] != Side::Free {
                return Seen::Behind(at, side);
            }
            entry = self.facing(other as usize, at);
            at = other as usize;
        }
    }

    /// An outline edge whose diametral circle holds a point that would see it.
    fn encroached(&self, at: usize, point: Point) -> Option<(usize, usize)> {
        let mut cavity = vec![at];
        let mut next = 0;
        let mut nearest: Option<(f64, (usize, usize))> = None;
        while let Some(&t) = cavity.get(next) {
            next += 1;
            let corners = self.mesh.corners(t);
            for side in 0..3 {
                let other = self.mesh.neighbours[t][side];
                if other == NONE || self.mesh.sides[t][side] != Side::Free {
                    let (a, b) = (corners[(side + 1) % 3] - point, corners[(side + 2) % 3] - point);
                    let depth = a.dot(b);
                    if depth < nearest.map_or(0.0, |(depth, _)| depth) {
                        nearest = Some((depth, (t, side)));
                    }
                } else if !cavity.contains(&(other as usize)) {
                    let [a, b, c] = self.mesh.corners(other as usize).map(|p| p - point);
                    if circle_holds_origin(a, b, c) > 0.0 {
                        cavity.push(other as usize);
                    }
                }
            }
        }
        nearest.map(|(_, edge)| edge)
    }

    /// Puts a vertex inside a triangle.
    fn insert(&mut self, t: usize, point: Point) {
        let corners = self.mesh.corners(t);
        let v = self.mesh.triangles[t];
        let size = v.iter().fold(0.0_f64, |size, v| size.max(self.wanted.size[*v as usize]));
        for side in 0..3 {
            let (a, b) = (corners[(side + 1) % 3], corners[(side + 2) % 3]);
            // On a side: three triangles would leave one without area.
            if (b - a).cross(point - a) <= 1e-9 * (b - a).dot(b - a) {
                let vertex = self.vertex(point, size);
                return self.split_at(t, side, vertex);
            }
        }
        let vertex = self.vertex(point, size);
        let mesh = &mut *self.mesh;
        let (n, s) = (mesh.neighbours[t], mesh.sides[t]);
        let first = mesh.triangles.len();
        let (u, w) = (first as u32, first as u32 + 1);
        for _ in 0..2 {
            mesh.zone.push(mesh.zone[t]);
            mesh.part.push(mesh.part[t]);
        }
        mesh.triangles[t] = [vertex, v[1], v[2]];
        mesh.neighbours[t] = [n[0], u, w];
        mesh.sides[t] = [s[0], Side::Free, Side::Free];
        mesh.triangles.push([v[0], vertex, v[2]]);
        mesh.neighbours.push([t as u32, n[1], w]);
        mesh.sides.push([Side::Free, s[1], Side::Free]);
        mesh.triangles.push([v[0], v[1], vertex]);
        mesh.neighbours.push([t as u32, u, n[2]]);
        mesh.sides.push([Side::Free, Side::Free, s[2]]);
        self.relink(n[1], t, first);
        self.relink(n[2], t, first + 1);
        for (t, side) in [(t, 0), (first, 1), (first + 1, 2)] {
            self.flips.push((t as u32, side));
            self.queue.push(t as u32);
        }
        self.legalize();
    }

    fn vertex(&mut self, point: Point, size: f64) -> u32 {
        self.mesh.points.push(point);
        self.wanted.size.push(size);
        self.wanted.tip.push(f64::INFINITY);
        self.mesh.points.len() as u32 - 1
    }

    /// Which side of `t` faces `other`.
    fn facing(&self, t: usize, other: usize) -> usize {
        let at = self.mesh.neighbours[t].iter().position(|n| *n == other as u32);
        at.expect("neighbours know each other")
    }

    fn relink(&mut self, t: u32, from: usize, to: usize) {
        if t != NONE {
            let side = self.facing(t as usize, from);
            self.mesh.neighbours[t as usize][side] = to as u32;
        }
    }

    /// Splits a side at its middle.
    fn split(&mut self, t: usize, side: usize) {
        let v = self.mesh.triangles[t];
        let (b, c) = (v[(side + 1) % 3] as usize, v[(side + 2) % 3] as usize);
        let middle = (self.mesh.points[b] + self.mesh.points[c]) * 0.5;
        let middle = self.vertex(middle, self.wanted.size[b].max(self.wanted.size[c]));
        self.split_at(t, side, middle);
    }

    /// Splits a side at a vertex on it.
    fn split_at(&mut self, t: usize, side: usize, middle: u32) {
        let other = self.mesh.neighbours[t][side];
        let mine = self.halve(t, side, middle);
        if other != NONE {
            let other = other as usize;
            let facing = self.facing(other, t);
            let theirs = self.halve(other, facing, middle);
            // Both kept the half at the first vertex of their side, which run opposite ways.
            self.mesh.neighbours[t][side] = theirs as u32;
            self.mesh.neighbours[theirs][facing] = t as u32;
            self.mesh.neighbours[other][facing] = mine as u32;
            self.mesh.neighbours[mine][side] = other as u32;
            self.seek_flips(other, theirs, middle);
        }
        self.seek_flips(t, mine, middle);
        self.legalize();
    }

    /// Cuts a triangle from the vertex opposite `side` to `middle`; keeps the half with the
    /// first vertex of the side and returns the new other half.
    fn halve(&mut self, t: usize, side: usize, middle: u32) -> usize {
        let (first, second) = ((side + 1) % 3, (side + 2) % 3);
        let mesh = &mut *self.mesh;
        let new = mesh.triangles.len();
        let mut vertices = mesh.triangles[t];
        vertices[first] = middle;
        let mut neighbours = mesh.neighbours[t];
        let mut sides = mesh.sides[t];
        let outer = neighbours[first];
        neighbours[second] = t as u32;
        sides[second] = Side::Free;
        mesh.triangles.push(vertices);
        mesh.neighbours.push(neighbours);
        mesh.sides.push(sides);
        mesh.zone.push(mesh.zone[t]);
        mesh.part.push(mesh.part[t]);
        mesh.triangles[t][second] = middle;
        mesh.neighbours[t][first] = new as u32;
        mesh.sides[t][first] = Side::Free;
        self.relink(outer, t, new);
        new
    }

    fn seek_flips(&mut self, t: usize, u: usize, apex: u32) {
        for t in [t, u] {
            let opposite = self.mesh.triangles[t].iter().position(|v| *v == apex);
            self.flips.push((t as u32, opposite.expect("an apex is a vertex")));
            self.queue.push(t as u32);
        }
    }

    fn legalize_all(&mut self) {
        for t in 0..self.mesh.triangles.len() as u32 {
            self.flips.extend([(t, 0), (t, 1), (t, 2)]);
        }
        self.legalize();
    }

    fn legalize(&mut self) {
        while let Some((t, side)) = self.flips.pop() {
            let t = t as usize;
            let other = self.mesh.neighbours[t][side];
            if other == NONE || self.mesh.sides[t][side] != Side::Free {
                continue;
            }
            let other = other as usize;
            let facing = self.facing(other, t);
            if self.should_flip(t, side, other, facing) {
                self.flip(t, side, other, facing);
            }
        }
    }

    /// Whether the circle of `t` clearly holds the vertex of `other` across.
    fn should_flip(&self, t: usize, side: usize, other: usize, facing: usize) -> bool {
        let at = |t: usize, k: usize| self.mesh.points[self.mesh.triangles[t][k % 3] as usize];
        let d = at(other, facing);
        let [a, b, c] = [at(t, side) - d, at(t, side + 1) - d, at(t, side + 2) - d];
        if circle_holds_origin(a, b, c) <= 0.0 {
            return false;
        }
        // Both triangles after the flip must turn the right way.
        let flat = 1e-13 * a.dot(a).max(b.dot(b)).max(c.dot(c));
        a.cross(b) > flat && c.cross(a) > flat
    }

    fn flip(&mut self, t: usize, side: usize, other: usize, facing: usize) {
        let (tn, ts) = (self.mesh.neighbours[t], self.mesh.sides[t]);
        let (un, us) = (self.mesh.neighbours[other], self.mesh.sides[other]);
        let next = |k: usize, by: usize| (k + by) % 3;
        let a = self.mesh.triangles[t][side];
        let b = self.mesh.triangles[t][next(side, 1)];
        let c = self.mesh.triangles[t][next(side, 2)];
        let d = self.mesh.triangles[other][facing];
        // Before: (a, b, c) and (d, c, b). After: (a, b, d) and (a, d, c).
        let (ab, ca) = (next(side, 2), next(side, 1));
        let (bd, dc) = (next(facing, 1), next(facing, 2));
        self.mesh.triangles[t] = [a, b, d];
        self.mesh.neighbours[t] = [un[bd], other as u32, tn[ab]];
        self.mesh.sides[t] = [us[bd], Side::Free, ts[ab]];
        self.mesh.triangles[other] = [a, d, c];
        self.mesh.neighbours[other] = [un[dc], tn[ca], t as u32];
        self.mesh.sides[other] = [us[dc], ts[ca], Side::Free];
        self.relink(un[bd], other, t);
        self.relink(tn[ca], t, other);
        for (t, side) in [(t, 0), (t, 2), (other, 0), (other, 1)] {
            self.flips.push((t as u32, side));
        }
        self.queue.extend([t as u32, other as u32]);
    }
}

/// Where a walk ended.
enum Seen {
    /// In the triangle that holds the point.
    Inside(usize),
    /// At an outline before it: triangle and side.
    Behind(usize, usize),
}

/// Positive when the circle through three points, counter-clockwise, clearly holds the origin:
/// rounding must not flip back and forth between vertices on one circle.
fn circle_holds_origin(a: Point, b: Point, c: Point) -> f64 {
    let (aa, bb, cc) = (a.dot(a), b.dot(b), c.dot(c));
    let inside = aa * b.cross(c) + bb * c.cross(a) + cc * a.cross(b);
    inside - 1e-10 * (aa * bb.max(cc) + bb * cc)
}
