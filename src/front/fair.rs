//! Fairing: the surface is kept smooth where it is smooth.
//!
//! Arrival by line of sight lets any bump in a narrow neck grow, also those of rounding and of
//! facets split and joined. Method: two passes that move vertices toward the chord of their
//! neighbours and back a little further (Taubin, SIGGRAPH 1995, 351, from memory): waves of a few
//! facets vanish, long ones keep their height to the fourth order. Corners, seams and the borders of
//! solids stay. Cost: linear.

use super::surface::{Chain, LEAST_LENGTH_NM, Surface};
use crate::geom::Point;

/// Sharper turns are corners, cosine of 20 degrees.
const CORNER: f64 = 0.94;
/// Share of the way to the chord, then back: no wave longer than some twenty facets is damped.
const PASSES: [f64; 2] = [0.5, -0.53];

/// The surface without waves as short as its facets.
pub(super) fn faired(mut surface: Surface) -> Surface {
    for chain in &mut surface.chains {
        for share in PASSES {
            pass(chain, share);
        }
    }
    surface
}

fn pass(chain: &mut Chain, share: f64) {
    let count = chain.pieces.len();
    let moved = |k: usize| {
        if k == 0 && !chain.closed {
            return None;
        }
        let (a, b) = (&chain.pieces[(k + count - 1) % count], &chain.pieces[k]);
        let (along, on) = (a.facet.to - a.facet.from, b.facet.to - b.facet.from);
        let (la, lb) = (along.norm(), on.norm());
        let is_corner = along.dot(on) < CORNER * la * lb;
        let has_end = b.seam.is_some() || a.facet.solid != b.facet.solid;
        if la.min(lb) < LEAST_LENGTH_NM || is_corner || has_end {
            return None;
        }
        let at = b.facet.from;
        let chord = b.facet.to - a.facet.from;
        let normal = Point::new(-chord.z, chord.x) * (1.0 / chord.norm());
        Some(at - normal * (share * (at - a.facet.from).dot(normal)))
    };
    let starts: Vec<Option<Point>> = (0..count).map(moved).collect();
    for k in 0..count {
        let facet = chain.pieces[k].facet;
        let end = if k + 1 < count { starts[k + 1] } else { starts[0].filter(|_| chain.closed) };
        if starts[k].is_some() || end.is_some() {
            let (from, to) = (starts[k].unwrap_or(facet.from), end.unwrap_or(facet.to));
            chain.pieces[k] = chain.pieces[k].with_ends(from, to);
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::front::outline::Facet;
    use crate::front::surface::Piece;

    fn faired_line(points: &[(f64, f64)]) -> Vec<Point> {
        let at = |&(x, z): &(f64, f64)| Point::new(x, z);
        let piece = |p: &[(f64, f64)]| Piece::new(Facet::between(at(&p[0]), at(&p[1]), 0));
        let pieces = points.windows(2).map(piece).collect();
        let chain = Chain { pieces, closed: false, end_seam: None };
        let walls = [points[0].0, points[points.len() - 1].0];
        faired(Surface { chains: vec![chain], walls }).chains[0].points().collect()
    }

    #[test]
    fn a_zigzag_dies_and_a_wave_stays() {
        let zigzag: Vec<_> = (0..41).map(|k| (f64::from(k), 0.05 * f64::from(k % 2))).collect();
        assert!(faired_line(&zigzag)[15..25].windows(2).all(|p| (p[1].z - p[0].z).abs() < 0.01));
        let height = |k: i32| 0.8 * (std::f64::consts::TAU * f64::from(k) / 40.0).sin();
        let wave: Vec<_> = (0..81).map(|k| (f64::from(k), height(k))).collect();
        let after = faired_line(&wave);
        assert!((2..79).all(|k| (after[k as usize].z - height(k)).abs() < 0.002 * 0.8));
    }

    #[test]
    fn corners_stay() {
        let points = [(0.0, 5.0), (1.0, 5.0), (2.0, 5.0), (2.0, 4.0), (2.0, 3.0), (3.0, 3.0)];
        let after = faired_line(&points);
        assert!(
            after.iter().zip(points).all(|(p, q)| (p.x - q.0).abs() + (p.z - q.1).abs() < 1e-12)
        );
    }
}
