//! Throats: the narrow places between facing parts of the surface.
//!
//! Method: the largest empty disc that touches the surface at the middle of a facet (the medial
//! disc; "shrinking ball", Ma, Bae and Choi, Comput. Graph. 28, 3 (2012), here against segments,
//! exactly). Where the disc touches on the far side too, its diameter is the width there. A
//! throat is a facet whose disc is smaller than those on both ways along the surface: outward, and
//! inward before the surface arrives at the facing side. A V that tapers to its vertex has none.
//! Parallel sides have no least width either; a slit counts from its open end when its width
//! stays within [`SLIT_RISE`] over two widths. Cost: facets in reach squared.

use super::outline::Facet;
use super::surface::Surface;
use crate::geom::Point;

/// A place where the surface faces itself closely.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Narrow {
    /// Width between the facing sides, in nm.
    pub(super) width: f64,
    /// Middle between them.
    pub(super) middle: Point,
    /// What lies behind.
    pub(super) kind: Kind,
    /// How fast the width shrinks per thickness on an open flat.
    pub(super) speed: f64,
}

/// What lies behind a narrow place.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Kind {
    /// A wider place.
    Neck,
    /// Parallel sides down to the bottom.
    Slit,
    /// Sides that draw together toward the bottom.
    Taper,
}

/// The medial disc at the middle of a facet.
#[derive(Debug, Clone, Copy)]
struct Disc {
    radius: f64,
    centre: Point,
    /// Unfolded index of the facet that it touches; none for an infinite disc.
    touches: usize,
    /// Whether it touches on the far side, not beside.
    across: bool,
}

/// Facing sides are at least this far apart as seen from the disc's centre: cos 120°.
const ACROSS: f64 = -0.5;
/// A place is wider when it exceeds the throat by this share.
const WIDER: f64 = 1e-3;
/// Parallel sides: the width rises by less than this share over two widths.
const SLIT_RISE: f64 = 0.1;
/// A slit is at least this long, over half its width.
const SLIT_LENGTH: f64 = 4.0;
/// Cosine between the normals of parallel sides: within twice the slope of [`SLIT_RISE`].
const PARALLEL: f64 = -0.9987;
/// A slit ends where its width exceeds the least by this share.
const SLIT_END: f64 = 0.02;

/// All narrow places, in the order of the surface, each seen from one of its sides.
pub(super) fn narrow_places(surface: &Surface) -> Vec<Narrow> {
    let facets = surface.facets();
    let rates: Vec<f64> = surface.pieces().map(|piece| piece.rate).collect();
    let count = facets.len();
    let unfolded = unfold(&facets, surface.walls);
    let discs: Vec<Disc> = (0..count).map(|i| disc(&unfolded, count + i)).collect();
    let chain_of: Vec<usize> = surface
        .chains
        .iter()
        .enumerate()
        .flat_map(|(k, chain)| std::iter::repeat_n(k, chain.pieces.len()))
        .collect();
    let original = |u: usize| match u / count {
        0 => count - 1 - u,
        1 => u - count,
        _ => 3 * count - 1 - u,
    };
    let mut places: Vec<Narrow> = Vec::new();
    for i in 0..count {
        let own = discs[i];
        if !own.across {
            continue;
        }
        let other = original(own.touches);
        let inward_step: isize = if own.touches > count + i { 1 } else { -1 };
        let same_chain = chain_of[other] == chain_of[i];
        // Seen from both sides: keep the view along the surface.
        if own.touches / count == 1 && same_chain && inward_step < 0 {
            continue;
        }
        let walk = |step: isize, until: Option<usize>, tie_is_narrower: bool| {
            let mut u = (count + i) as isize;
            loop {
                u += step;
                let at = u as usize;
                let inside = u >= 0 && at < 3 * count && Some(at) != until;
                if !inside || chain_of[original(at)] != chain_of[i] {
                    return Walk::Ended;
                }
                let there = discs[original(at)];
                if there.radius > own.radius * (1.0 + WIDER) {
                    return Walk::Wider;
                }
                let narrower =
                    there.radius < own.radius || (tie_is_narrower && there.radius == own.radius);
                if there.across && narrower {
                    return Walk::Narrower;
                }
            }
        };
        let until = same_chain.then_some(own.touches);
        let inward = walk(inward_step, until, false);
        let outward = walk(-inward_step, None, true);
        // Where, going one way, the width is no longer the same, and where a slit ends there.
        let stretch = |step: isize, until: Option<usize>| {
            let (mut way, mut end) = (0.0, i);
            let mut u = (count + i) as isize + step;
            while u >= 0 && (u as usize) < 3 * count {
                let at = original(u as usize);
                let same = discs[at].across && discs[at].radius < own.radius * (1.0 + SLIT_RISE);
                if chain_of[at] != chain_of[i] || !same || Some(u as usize) == until {
                    break;
                }
                way += facets[at].length();
                if u as usize / count == 1 && discs[at].radius < own.radius * (1.0 + SLIT_END) {
                    end = at;
                }
                u += step;
            }
            (way, end)
        };
        let slit_end = || {
            let (outward, end) = stretch(-inward_step, None);
            let (inward, _) = stretch(inward_step, until);
            // At the vertex of a V the width varies along the facet itself.
            let parallel = facets[i].normal.dot(unfolded[own.touches].normal) < PARALLEL;
            let itself = if parallel { facets[i].length() } else { 0.0 };
            (outward + inward + itself >= SLIT_LENGTH * own.radius).then_some(end)
        };
        let (kind, piece) = match (inward, outward) {
            (Walk::Wider, Walk::Wider) => (Kind::Neck, i),
            (Walk::Ended, Walk::Wider) => match slit_end() {
                Some(end) => (Kind::Slit, end),
                None => (Kind::Taper, i),
            },
            _ => continue,
        };
        let own = discs[piece];
        let other = original(own.touches);
        places.push(Narrow {
            width: 2.0 * own.radius,
            middle: own.centre,
            kind,
            speed: rates[piece] + rates[other],
        });
    }
    places
}

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Walk {
    Wider,
    Narrower,
    Ended,
}

/// The surface with its mirror images at both walls, in order along x: left, own, right.
fn unfold(facets: &[Facet], walls: [f64; 2]) -> Vec<Facet> {
    let image = |f: &Facet, wall: f64| {
        let at = |p: Point| Point::new(2.0 * wall - p.x, p.z);
        Facet {
            from: at(f.to),
            to: at(f.from),
            normal: Point::new(-f.normal.x, f.normal.z),
            solid: f.solid,
        }
    };
    let left = facets.iter().rev().map(|f| image(f, walls[0]));
    let right = facets.iter().rev().map(|f| image(f, walls[1]));
    left.chain(facets.iter().copied()).chain(right).collect()
}

fn disc(unfolded: &[Facet], own: usize) -> Disc {
    let at = unfolded[own].middle();
    let normal = unfolded[own].normal;
    let mut best = Disc { radius: f64::INFINITY, centre: at, touches: own, across: false };
    for (j, facet) in unfolded.iter().enumerate() {
        if j == own {
            continue;
        }
        let radius = tangent_radius(at, normal, facet, best.radius);
        if radius < best.radius {
            best.radius = radius;
            best.touches = j;
        }
    }
    if best.radius.is_finite() {
        best.centre = at + normal * best.radius;
        let touched = nearest_on(&unfolded[best.touches], best.centre);
        let (a, b) = (at - best.centre, touched - best.centre);
        best.across = a.dot(b) < ACROSS * a.norm() * b.norm();
    }
    best
}

/// Radius of the disc that touches at a point with a normal, and a facet; infinite if none.
fn tangent_radius(at: Point, normal: Point, facet: &Facet, limit: f64) -> f64 {
    let (a, b) = (facet.from - at, facet.to - at);
    let (ha, hb) = (a.dot(normal), b.dot(normal));
    let end = |p: Point, height: f64| {
        if height > 1e-12 { p.dot(p) / (2.0 * height) } else { f64::INFINITY }
    };
    if ha <= 1e-12 && hb <= 1e-12 {
        return f64::INFINITY;
    }
    // Nothing of the facet comes nearer than its line.
    let slope = 1.0 - facet.normal.dot(normal);
    let height = -facet.normal.dot(a);
    if slope > 1e-12 && height >= 0.0 {
        let radius = height / slope;
        if radius >= limit {
            return f64::INFINITY;
        }
        let touch = normal * radius - facet.normal * radius;
        let along = b - a;
        let (t, square) = ((touch - a).dot(along), along.dot(along));
        if square > 0.0 && t >= 0.0 && t <= square {
            return radius;
        }
    }
    end(a, ha).min(end(b, hb))
}

fn nearest_on(facet: &Facet, p: Point) -> Point {
    let along = facet.to - facet.from;
    let square = along.dot(along);
    if square == 0.0 {
        return facet.from;
    }
    facet.from + along * ((p - facet.from).dot(along) / square).clamp(0.0, 1.0)
}
