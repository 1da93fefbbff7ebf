//! Facets of the size that the flux needs, and fans at convex corners.
//!
//! A convex corner opens into a fan: pieces without length whose normals turn from one side to the
//! other in equal steps; the next step of the surface gives them theirs. Where the solid changes and
//! one side grows faster, the fan of the faster film turns on until it stands upright on the slower
//! surface: it grows over it like any edge. Long pieces are split evenly, short ones joined to a
//! neighbour when the turn between them is slight. The size wanted is `facet_nm`, less near
//! throats in proportion to their width. Cost: linear, times throats.

use super::outline::Facet;
use super::surface::{Chain, LEAST_LENGTH_NM, Piece, Surface};
use super::throat::Narrow;
use crate::geom::Point;

/// How the surface is cut into facets.
#[derive(Debug, Clone, Copy)]
pub(super) struct Mesh {
    /// Facet length on the open surface, in nm.
    pub(super) facet_nm: f64,
    /// Facet length in a throat that is about to close, in nm.
    pub(super) least_nm: f64,
    /// Turn between neighbours of a fan, in radians.
    pub(super) fan_rad: f64,
}

/// Facets in a throat over its width.
const THROAT_SHARE: f64 = 0.12;
/// Growth of the facet length with distance from a throat.
const GRADING: f64 = 0.15;
/// Longer than this times the wanted length is split, shorter than that is joined.
const SPLIT: f64 = 1.4;
const JOIN: f64 = 0.45;
/// Convex corners open into a fan above this turn, in radians; where one of their edges is below
/// this share of the facet length, only sharper ones: less may be the noise of a smooth surface.
const OPENS_RAD: f64 = 0.4;
const OPENS_SHORT_RAD: f64 = 0.9;
const EDGE: f64 = 0.25;
/// A piece shorter than this times the wanted length is taken out where its neighbours run on.
const COLLAPSE: f64 = 0.15;
/// Neighbours run on when they turn by less than this, in radians.
const RUNS_ON_RAD: f64 = 0.35;
/// Most turn at a point that joining may remove, in fan steps.
const JOIN_TURN: f64 = 0.6;

impl Mesh {
    /// Facet length wanted at a point.
    pub(super) fn size_at(&self, p: Point, throats: &[Narrow]) -> f64 {
        throats.iter().fold(self.facet_nm, |size, throat| {
            let there = (THROAT_SHARE * throat.width).max(self.least_nm);
            let away = (p.distance(throat.middle) - 0.5 * throat.width).max(0.0);
            size.min(there + GRADING * away)
        })
    }

    /// Opens a fan at every convex corner, also at those that mirrors make.
    pub(super) fn open_corners(&self, surface: &mut Surface, solid_rates: &[f64]) {
        for chain in &mut surface.chains {
            self.open_chain(chain, solid_rates);
        }
    }

    fn open_chain(&self, chain: &mut Chain, solid_rates: &[f64]) {
        let old = std::mem::take(&mut chain.pieces);
        let up = Point::new(0.0, 1.0);
        let mut pieces = Vec::with_capacity(old.len());
        if let Some(first) = old.first().filter(|_| !chain.closed) {
            // The mirror image of a surface that falls away from its wall meets it in a peak.
            if first.facet.normal.z > 0.0 {
                pieces.extend(self.half_fan(first, first.facet.from, up, first.facet.normal));
            }
        }
        for (k, piece) in old.iter().enumerate() {
            if k > 0 || chain.closed {
                let before = if k > 0 { &old[k - 1] } else { &old[old.len() - 1] };
                pieces.extend(self.fan(before, piece, solid_rates));
            }
            pieces.push(*piece);
        }
        if let Some(last) = old.last().filter(|last| !chain.closed && last.facet.normal.z > 0.0) {
            pieces.extend(self.half_fan(last, last.facet.to, last.facet.normal, up));
        }
        chain.pieces = pieces;
    }

    /// Pieces between two neighbours; none unless the corner is convex or one film is faster.
    fn fan(&self, a: &Piece, b: &Piece, solid_rates: &[f64]) -> Vec<Piece> {
        let (n, turn) = (a.facet.normal, turn(a, b));
        let (rate_a, rate_b) = (solid_rates[a.facet.solid], solid_rates[b.facet.solid]);
        let quarter = std::f64::consts::FRAC_PI_2;
        // The last normal of the faster film stands along the slower surface.
        if rate_a > rate_b && turn + quarter > 0.0 {
            return self.sweep(a, b.facet.from, n, turn + quarter, true);
        }
        if rate_b > rate_a && turn + quarter > 0.0 {
            let first = Point::new(-a.facet.normal.z, a.facet.normal.x);
            return self.sweep(b, b.facet.from, first, turn + quarter, false);
        }
        let is_long = a.facet.length().min(b.facet.length()) > EDGE * self.facet_nm;
        let opens = if is_long { OPENS_RAD } else { OPENS_SHORT_RAD };
        if turn > (1.5 * self.fan_rad).max(opens) {
            let steps = (turn / self.fan_rad).ceil();
            return self.arc(a, b.facet.from, n, turn / steps, 1..steps as usize);
        }
        Vec::new()
    }

    /// A fan of the film of `of` whose far end stands on the slower surface.
    fn sweep(&self, of: &Piece, at: Point, first: Point, turn: f64, from_own: bool) -> Vec<Piece> {
        if turn < 0.5 * self.fan_rad {
            return Vec::new();
        }
        let steps = (turn / self.fan_rad).ceil();
        let count = steps as usize;
        // Without the normal of `of` itself, with the upright one.
        let range = if from_own { 1..count + 1 } else { 0..count };
        self.arc(of, at, first, turn / steps, range)
    }

    /// The half of a fan on this side of a mirror wall.
    fn half_fan(&self, of: &Piece, at: Point, from: Point, to: Point) -> Vec<Piece> {
        let turn = to.cross(from).atan2(from.dot(to));
        if 2.0 * turn <= 1.5 * self.fan_rad {
            return Vec::new();
        }
        let steps = (turn / self.fan_rad).ceil();
        let count = steps as usize;
        // The upright facet belongs to both halves.
        let range = if to.x == 0.0 && to.z == 1.0 { 1..count + 1 } else { 0..count };
        self.arc(of, at, from, turn / steps, range)
    }

    /// Pieces without length at a point, their normals turned clockwise from `first`.
    fn arc(
        &self,
        of: &Piece,
        at: Point,
        first: Point,
        step: f64,
        range: std::ops::Range<usize>,
    ) -> Vec<Piece> {
        range
            .map(|k| {
                let (sine, cosine) = (step * k as f64).sin_cos();
                let normal = Point::new(
                    first.x * cosine + first.z * sine,
                    first.z * cosine - first.x * sine,
                );
                let facet = Facet { from: at, to: at, normal, solid: of.facet.solid };
                Piece { facet, seam: None, solved: None, ..*of }
            })
            .collect()
    }

    /// Splits long pieces and joins short ones.
    pub(super) fn refine(&self, surface: &mut Surface, throats: &[Narrow]) {
        for chain in &mut surface.chains {
            self.collapse(chain, throats);
            self.join(chain, throats);
            self.split(chain, throats);
        }
    }

    /// Takes out small pieces that stand across a surface which is smooth without them: the
    /// neighbours meet in their middle.
    fn collapse(&self, chain: &mut Chain, throats: &[Narrow]) {
        let mut k = 1;
        while k + 1 < chain.pieces.len() {
            let [a, b, c] = [k - 1, k, k + 1].map(|at| chain.pieces[at]);
            let solid = b.facet.solid;
            let alike = a.facet.solid == solid && c.facet.solid == solid;
            let free = b.seam.is_none() && c.seam.is_none();
            let own = b.facet.length();
            let is_small = own > LEAST_LENGTH_NM
                && own < a.facet.length().min(c.facet.length())
                && own < COLLAPSE * self.size_at(b.facet.from, throats);
            // Both turns to one side are a fan or a round corner.
            let is_step = turn(&a, &b) * turn(&b, &c) < 0.0 && turn(&a, &c).abs() < RUNS_ON_RAD;
            if alike && free && is_small && is_step {
                let middle = b.facet.middle();
                chain.pieces[k - 1] = a.with_ends(a.facet.from, middle);
                chain.pieces[k + 1] = c.with_ends(middle, c.facet.to);
                chain.pieces.remove(k);
            } else {
                k += 1;
            }
        }
    }

    fn split(&self, chain: &mut Chain, throats: &[Narrow]) {
        let mut pieces = Vec::with_capacity(chain.pieces.len());
        for piece in &chain.pieces {
            self.halve(*piece, throats, &mut pieces);
        }
        chain.pieces = pieces;
    }

    fn halve(&self, piece: Piece, throats: &[Narrow], into: &mut Vec<Piece>) {
        let Facet { from, to, .. } = piece.facet;
        let middle = piece.facet.middle();
        if piece.facet.length() <= SPLIT * self.size_at(middle, throats) {
            into.push(piece);
            return;
        }
        // Halves keep the direction of the whole: an exact line stays one.
        let part =
            |from: Point, to: Point| Piece { facet: Facet { from, to, ..piece.facet }, ..piece };
        self.halve(part(from, middle), throats, into);
        self.halve(Piece { seam: None, ..part(middle, to) }, throats, into);
    }

    /// Joins neighbours, shortest pairs first: the same seen from either end of the chain.
    fn join(&self, chain: &mut Chain, throats: &[Narrow]) {
        let pieces = &chain.pieces;
        let mut pairs: Vec<(f64, usize)> = Vec::new();
        for k in 1..pieces.len() {
            if let Some(length) = self.joint(&pieces[k - 1], &pieces[k], throats) {
                pairs.push((length, k));
            }
        }
        pairs.sort_by(|a, b| a.0.total_cmp(&b.0).then(a.1.cmp(&b.1)));
        let mut taken = vec![false; pieces.len()];
        let mut joins = vec![false; pieces.len()];
        for (_, k) in pairs {
            if !taken[k - 1] && !taken[k] {
                (taken[k - 1], taken[k], joins[k]) = (true, true, true);
            }
        }
        let mut joined: Vec<Piece> = Vec::with_capacity(pieces.len());
        for (k, next) in pieces.iter().enumerate() {
            match joined.last_mut().filter(|_| joins[k]) {
                Some(last) => *last = join(last, next),
                None => joined.push(*next),
            }
        }
        chain.pieces = joined;
    }

    /// Length of two neighbours over the wanted one, when they should be one piece.
    fn joint(&self, a: &Piece, b: &Piece, throats: &[Narrow]) -> Option<f64> {
        let (la, lb) = (a.facet.length(), b.facet.length());
        let alike = a.facet.solid == b.facet.solid && b.seam.is_none();
        if !alike || turn(a, b).abs() > JOIN_TURN * self.fan_rad || la.min(lb) < LEAST_LENGTH_NM {
            return None;
        }
        let size = self.size_at(b.facet.from, throats);
        let short = la.min(lb) < JOIN * size && la + lb < SPLIT * size;
        short.then_some((la + lb) / size)
    }
}

/// Turn from one piece to the next, positive when convex (clockwise), in radians.
fn turn(a: &Piece, b: &Piece) -> f64 {
    let (n, m) = (a.facet.normal, b.facet.normal);
    m.cross(n).atan2(n.dot(m))
}

fn join(a: &Piece, b: &Piece) -> Piece {
    let (la, lb) = (a.facet.length(), b.facet.length());
    let share = la / (la + lb);
    Piece {
        rate: share * a.rate + (1.0 - share) * b.rate,
        solved: a.solved.zip(b.solved).map(|(a, b)| share * a + (1.0 - share) * b),
        gas: share * a.gas + (1.0 - share) * b.gas,
        ..a.with_ends(a.facet.from, b.facet.to)
    }
}
