//! One step of the surface: every facet offset along its normal by its own rate.
//!
//! Method: front tracking with facets (the string method of Jewett, Hagouel, Neureuther and Van
//! Duzer (Polym. Eng. Sci. 17, 381 (1977)) with facets instead of points). Vertices move to where offset facets meet. At
//! corners that is the intersection of the two offset lines: it makes a fan of facets at a
//! convex corner the envelope of its planes (exact for a rate that depends on direction), and
//! a concave one lose its facets. On a smooth surface the intersection is ill-conditioned and
//! only slides the vertex along the surface, which changes nothing; there the vertex takes the
//! rate interpolated between the middles of its neighbours, and facets turn with the rates. Between
//! the two the slide is blended, and bounded by the thickness of the step (a rate of ±1 per radian is
//! the most that an isotropic arrival can show). Facets that would turn over are removed and their
//! neighbours extended until they meet. Cost: linear. Steps must stay well below the width
//! of any throat, or fronts pass through each other.

use super::outline::Facet;
use super::surface::{Chain, Piece, Surface};
use crate::geom::Point;

/// Turns between which the slide along the surface is blended in: convex, then concave, radians.
const CONVEX_BLEND: [f64; 2] = [0.015, 0.03];
const CONCAVE_BLEND: [f64; 2] = [0.17, 0.5];

/// Offset lines nearer to parallel than this have no crossing to speak of.
const LEAST_SINE: f64 = 1e-3;

/// A convex corner sharper than 60 degrees, as the cosine between normals, is swept by its sides alone.
const SHARP: f64 = -0.5;

/// Sharper wedges at a mirror wall than this slope do not move faster along it.
const STEEPEST: f64 = 0.02;

/// The surface after `thickness` more on an open flat, at its present rates.
pub(super) fn advanced(surface: &Surface, thickness: f64) -> Surface {
    let chains = surface.chains.iter().map(|chain| advance(chain, surface.walls, thickness));
    Surface { chains: chains.filter(|c| !c.pieces.is_empty()).collect(), walls: surface.walls }
}

/// Where the ends of each piece go in a step, chain by chain: along its own normal where the ambient
/// is convex, for sweeping as a set needs no more; where offset facets meet elsewhere.
pub(super) fn images(surface: &Surface, thickness: f64) -> Vec<Vec<[Point; 2]>> {
    let own = |piece: &Piece, at: Point| at + piece.facet.normal * (thickness * piece.rate);
    let between = |a: &Piece, b: &Piece| {
        let is_convex = b.facet.normal.cross(a.facet.normal) > 0.0;
        let is_blunt = a.facet.normal.dot(b.facet.normal) > SHARP;
        (is_convex && is_blunt).then(|| vertex(a, b, thickness))
    };
    let at_wall = |piece: &Piece, at: Point| {
        let inward = if at.x - surface.walls[0] < surface.walls[1] - at.x { 1.0 } else { -1.0 };
        let leans_away = piece.facet.normal.x * inward > 0.0 && piece.facet.normal.z > 0.5;
        if leans_away { wall_vertex(piece, at, thickness) } else { own(piece, at) }
    };
    let of = |chain: &Chain| {
        let n = chain.pieces.len();
        let ends = |k: usize| {
            let piece = &chain.pieces[k];
            let Facet { from, to, .. } = piece.facet;
            let open = !chain.closed;
            let first = if open && k == 0 {
                at_wall(piece, from)
            } else {
                between(&chain.pieces[(k + n - 1) % n], piece).unwrap_or_else(|| own(piece, from))
            };
            let last = if open && k + 1 == n {
                at_wall(piece, to)
            } else {
                between(piece, &chain.pieces[(k + 1) % n]).unwrap_or_else(|| own(piece, to))
            };
            [first, last]
        };
        (0..n).map(ends).collect()
    };
    surface.chains.iter().map(of).collect()
}

/// Where every piece of a chain begins after the step, and where the chain ends.
fn links(chain: &Chain, thickness: f64) -> (Vec<Link>, Point) {
    let pieces = &chain.pieces;
    let n = pieces.len();
    let links: Vec<Link> = pieces
        .iter()
        .enumerate()
        .map(|(k, piece)| {
            let before =
                if k > 0 { Some(&pieces[k - 1]) } else { pieces.last().filter(|_| chain.closed) };
            let from = match before {
                Some(before) => vertex(before, piece, thickness),
                None => wall_vertex(piece, piece.facet.from, thickness),
            };
            Link { piece: *piece, from }
        })
        .collect();
    let end = if chain.closed {
        links[0].from
    } else {
        wall_vertex(&pieces[n - 1], pieces[n - 1].facet.to, thickness)
    };
    (links, end)
}

fn advance(chain: &Chain, walls: [f64; 2], thickness: f64) -> Chain {
    let (mut links, mut end) = links(chain, thickness);
    let mut end_seam = chain.end_seam;
    remove_turned(&mut links, &mut end, &mut end_seam, chain.closed, walls, thickness);
    let tos: Vec<Point> = links.iter().skip(1).map(|l| l.from).chain([end]).collect();
    let pieces = links.iter().zip(tos).map(|(l, to)| l.piece.with_ends(l.from, to)).collect();
    Chain { pieces, closed: chain.closed, end_seam }
}

/// A piece before the step and where it begins after it.
#[derive(Clone, Copy)]
struct Link {
    piece: Piece,
    from: Point,
}

/// Where the offset facets of two neighbours meet.
fn vertex(a: &Piece, b: &Piece, thickness: f64) -> Point {
    let at = b.facet.from;
    let (n, m) = (a.facet.normal, b.facet.normal);
    let sum = n + m;
    let size = sum.norm();
    // Half of the turn, positive when convex (the surface turns clockwise).
    let half = 0.5 * m.cross(n).atan2(n.dot(m));
    if size < 1e-6 {
        return at + n * (0.5 * thickness * (a.rate + b.rate));
    }
    let normal = sum * (1.0 / size);
    let tangent = Point::new(normal.z, -normal.x);
    let sharpness =
        if half > 0.0 { ramp(2.0 * half, CONVEX_BLEND) } else { ramp(-2.0 * half, CONCAVE_BLEND) };
    let (la, lb) = (a.facet.length(), b.facet.length());
    let mean = 0.5 * (a.rate + b.rate);
    let between = if la + lb > 0.0 { (a.rate * lb + b.rate * la) / (la + lb) } else { mean };
    let rate = sharpness * mean + (1.0 - sharpness) * between;
    let mut slide = 0.0;
    if sharpness > 0.0 {
        slide = sharpness * (b.rate - a.rate) / (2.0 * half.sin());
        if half > 0.0 {
            let most = a.rate.max(b.rate).max(1.0);
            slide = slide.clamp(-most, most);
        }
    }
    at + normal * (thickness * rate / half.cos()) + tangent * (thickness * slide)
}

fn ramp(value: f64, [from, to]: [f64; 2]) -> f64 {
    ((value - from) / (to - from)).clamp(0.0, 1.0)
}

/// Where an offset facet meets the mirror wall that it ends at.
fn wall_vertex(piece: &Piece, at: Point, thickness: f64) -> Point {
    let slope = piece.facet.normal.z;
    let slope = if slope.abs() < STEEPEST { STEEPEST.copysign(slope) } else { slope };
    Point::new(at.x, at.z + thickness * piece.rate / slope)
}

/// Removes pieces that have turned over, until none is left.
fn remove_turned(
    links: &mut Vec<Link>,
    end: &mut Point,
    end_seam: &mut Option<usize>,
    closed: bool,
    walls: [f64; 2],
    thickness: f64,
) {
    // Both ends of a chain may lie on the same wall.
    let ends = [links[0].piece.facet.from.x, links[links.len() - 1].piece.facet.to.x];
    let mut k = 0;
    while k < links.len() && links.len() > 1 {
        let to = if k + 1 < links.len() { links[k + 1].from } else { *end };
        let normal = links[k].piece.facet.normal;
        let along = Point::new(normal.z, -normal.x);
        let last = k + 1 == links.len();
        // At a wall also what has passed through it is gone.
        let beyond = !closed
            && ((last && is_beyond(links[k].from, end.x, walls))
                || (k == 0 && is_beyond(to, links[0].from.x, walls)));
        if (to - links[k].from).dot(along) >= -1e-12 && !beyond {
            k += 1;
            continue;
        }
        let middle = (links[k].from + to) * 0.5;
        let gone = links.remove(k);
        if k < links.len() && links[k].piece.seam.is_none() {
            links[k].piece.seam = gone.piece.seam;
        }
        if !closed && (k == 0 || last) {
            // At a wall the neighbour is extended to it.
            if k == 0 {
                links[0].from = meets_wall(&links[0].piece, ends[0], middle, thickness);
            } else {
                let neighbour = links[k - 1].piece;
                *end = meets_wall(&neighbour, ends[1], middle, thickness);
                *end_seam = end_seam.or(gone.piece.seam);
            }
        } else {
            let next = if last { 0 } else { k };
            let before = if k == 0 { links.len() - 1 } else { k - 1 };
            let (a, b) = (&links[before].piece, &links[next].piece);
            let met = meeting(a, b, middle, thickness);
            // Lines that are all but parallel may cross far beyond both.
            let most = gone.from.distance(to) + thickness * a.rate.max(b.rate);
            let ahead = |facet: &Facet, way: Point| way.cross(facet.normal) > most;
            let is_far = ahead(&a.facet, met - gone.from) || ahead(&b.facet, to - met);
            let met = if is_far { middle } else { met };
            links[next].from = met;
            if closed && next == 0 {
                *end = met;
            }
        }
        k = k.saturating_sub(2);
    }
}

/// Whether a point lies beyond the wall at `wall`.
fn is_beyond(p: Point, wall: f64, walls: [f64; 2]) -> bool {
    let outward = if wall - walls[0] > walls[1] - wall { 1.0 } else { -1.0 };
    (p.x - wall) * outward > 1e-12
}

/// The crossing of two offset lines; near `fallback` when they are all but parallel.
fn meeting(a: &Piece, b: &Piece, fallback: Point, thickness: f64) -> Point {
    let (n, m) = (a.facet.normal, b.facet.normal);
    let sine = n.cross(m);
    if sine.abs() < LEAST_SINE {
        return fallback;
    }
    let c = n.dot(a.facet.from) + a.rate * thickness;
    let d = m.dot(b.facet.from) + b.rate * thickness;
    Point::new((c * m.z - d * n.z) / sine, (n.x * d - m.x * c) / sine)
}

fn meets_wall(piece: &Piece, x: f64, fallback: Point, thickness: f64) -> Point {
    let n = piece.facet.normal;
    if n.z.abs() < LEAST_SINE {
        return Point::new(x, fallback.z);
    }
    let offset = n.dot(piece.facet.from) + piece.rate * thickness;
    Point::new(x, (offset - n.x * x) / n.z)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn chain(points: &[(f64, f64)], rates: &[f64]) -> Chain {
        let piece = |(p, rate): (&[(f64, f64)], &f64)| Piece {
            rate: *rate,
            ..Piece::new(Facet::between(Point::new(p[0].0, p[0].1), Point::new(p[1].0, p[1].1), 0))
        };
        let pieces = points.windows(2).zip(rates).map(piece).collect();
        Chain { pieces, closed: false, end_seam: None }
    }

    fn moved(points: &[(f64, f64)], rates: &[f64], by: f64) -> Vec<(f64, f64)> {
        let walls = [points[0].0, points[points.len() - 1].0];
        advance(&chain(points, rates), walls, by).points().map(|p| (p.x, p.z)).collect()
    }

    #[test]
    fn a_trench_keeps_its_corners() {
        let points = [(0.0, 5.0), (2.0, 5.0), (2.0, 0.0), (9.0, 0.0)];
        let after = moved(&points, &[1.0, 0.5, 0.25], 1.0);
        let exact = [(0.0, 6.0), (2.5, 6.0), (2.5, 0.25), (9.0, 0.25)];
        for (a, b) in after.iter().zip(exact) {
            assert!((a.0 - b.0).abs() + (a.1 - b.1).abs() < 1e-12, "{after:?}");
        }
    }

    #[test]
    fn a_floor_that_is_overgrown_disappears() {
        // A V with a narrow floor: sides close over it and meet where their lines cross.
        let points = [(0.0, 10.0), (4.5, 1.0), (5.5, 1.0), (10.0, 10.0)];
        let after = moved(&points, &[1.0, 0.0, 1.0], 1.0);
        assert_eq!(after.len(), 3);
        assert!((after[1].0 - 5.0).abs() < 1e-12 && after[1].1 > 1.0, "{after:?}");
    }

    #[test]
    fn the_wall_takes_over_when_the_last_piece_is_overgrown() {
        let points = [(0.0, 10.0), (4.5, 1.0), (5.0, 1.0)];
        let after = moved(&points, &[1.0, 0.0], 1.0);
        assert_eq!(after.len(), 2);
        assert!(after[1].0 == 5.0 && after[1].1 > 1.0, "{after:?}");
    }

    #[test]
    fn a_notch_at_the_wall_fills_evenly_however_many_pieces_it_buries() {
        let points: Vec<_> = (0..9).map(|k| (0.1 * f64::from(k), 0.4 * f64::from(k))).collect();
        let after = moved(&points, &[1.0; 8], 0.2);
        // Offset of z = 4 x by 0.2: at the wall it stands at 0.2 √17.
        assert!(
            after[0].0 == 0.0 && (after[0].1 - 0.2 * 17.0_f64.sqrt()).abs() < 1e-9,
            "{after:?}"
        );
        assert!(after.windows(2).all(|p| p[0].0 < p[1].0), "{after:?}");
    }
}
