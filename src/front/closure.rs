//! What happens when a throat closes: the surface is cut there, and what is shut off freezes.
//!
//! A chord across the throat joins the two sides. Cut at both its ends the chains are joined the
//! other way round; the part of the ambient that does not reach the sky any more is the void. Of it
//! is taken away what is narrower than the closure width: tips that an opening with a disc of that
//! width does not reach (they are a seam). Cost: one walk along the chains, and two booleans where there
//! are such tips.

use super::FrontError;
use super::outline::Facet;
use super::surface::{Chain, Piece, Surface, area};
use super::throat::{Facing, Narrow};
use crate::geom::{Point, Region};

/// The disc of the opening over the closure width: parallel sides at just that width are a seam.
const OPENING_SHARE: f64 = 1.002;
/// Turn of the opening's arcs, in radians.
const OPENING_STEP: f64 = 0.4;

/// Cuts the surface at a throat. The chord of what stays open carries the seam of this number.
pub(super) fn cut(surface: &mut Surface, throat: &Narrow, seam: usize) {
    let (c, k) = nearest(surface, throat.piece, throat.foot);
    let piece = surface.chains[c].pieces[k];
    let p = foot(&piece.facet, throat.foot);
    match throat.facing {
        Facing::Left | Facing::Right => {
            let wall =
                if throat.facing == Facing::Left { surface.walls[0] } else { surface.walls[1] };
            let w = Point::new(wall, p.z);
            let chain = surface.chains.remove(c);
            let (before, after) = split(chain.pieces, k, p);
            let there = chord(p, w, &piece, None);
            let back = chord(w, p, &piece, Some(seam));
            if chain.closed {
                let pieces = [vec![back], after, before, vec![there]].concat();
                surface.chains.push(Chain { pieces, closed: false, end_seam: Some(seam) });
            } else {
                let first = [before, vec![there]].concat();
                let second = [vec![back], after].concat();
                let (at_end, was) = (Some(seam), chain.end_seam);
                surface.chains.push(Chain { pieces: first, closed: false, end_seam: at_end });
                surface.chains.push(Chain { pieces: second, closed: false, end_seam: was });
            }
        }
        Facing::Piece(other) => {
            let (d, m) = nearest(surface, other, p);
            if c == d && m <= k {
                // Smoothing has left the neck: cut at the narrowest facets themselves.
                let foot = surface_middle(surface, throat.piece);
                let exact = Narrow { foot, ..*throat };
                if foot != throat.foot {
                    cut(surface, &exact, seam);
                }
                return;
            }
            let opposite = surface.chains[d].pieces[m];
            let q = foot(&opposite.facet, p);
            let middle = (p + q) * 0.5;
            let there =
                vec![chord(p, middle, &piece, None), chord(middle, q, &opposite, Some(seam))];
            let back =
                vec![chord(q, middle, &opposite, None), chord(middle, p, &piece, Some(seam))];
            if c == d {
                cut_chain(surface, c, [k, m], [p, q], there, back);
            } else {
                join_chains(surface, [c, d], [k, m], [p, q], there, back);
            }
        }
    }
}

/// Chord pieces grow like the film of the side that they are taken from.
fn chord(from: Point, to: Point, like: &Piece, seam: Option<usize>) -> Piece {
    Piece { facet: Facet::between(from, to, like.facet.solid), seam, solved: None, ..*like }
}

fn cut_chain(
    surface: &mut Surface,
    c: usize,
    [k, m]: [usize; 2],
    [p, q]: [Point; 2],
    there: Vec<Piece>,
    back: Vec<Piece>,
) {
    let chain = surface.chains.remove(c);
    let (head, after) = split(chain.pieces, k, p);
    let (inner, tail) = split(after, m - k, q);
    let pieces = [head, there, tail].concat();
    surface.chains.push(Chain { pieces, closed: chain.closed, end_seam: chain.end_seam });
    let pieces = [inner, back].concat();
    surface.chains.push(Chain { pieces, closed: true, end_seam: None });
}

fn join_chains(
    surface: &mut Surface,
    [c, d]: [usize; 2],
    [k, m]: [usize; 2],
    [p, q]: [Point; 2],
    there: Vec<Piece>,
    back: Vec<Piece>,
) {
    let (first, second) = (surface.chains[c].clone(), surface.chains[d].clone());
    surface.chains = surface
        .chains
        .iter()
        .enumerate()
        .filter(|(at, _)| *at != c && *at != d)
        .map(|(_, chain)| chain.clone())
        .collect();
    let (first_head, first_tail) = split(first.pieces, k, p);
    let (second_head, second_tail) = split(second.pieces, m, q);
    if first.closed || second.closed {
        // Around one chain and back over the chord.
        let pieces = [first_head, there, second_tail, second_head, back, first_tail].concat();
        let closed = first.closed && second.closed;
        let end_seam = first.end_seam.or(second.end_seam);
        surface.chains.push(rotated_open(Chain { pieces, closed, end_seam }, surface.walls));
    } else {
        let pieces = [first_head, there, second_tail].concat();
        surface.chains.push(Chain { pieces, closed: false, end_seam: second.end_seam });
        let pieces = [second_head, back, first_tail].concat();
        surface.chains.push(Chain { pieces, closed: false, end_seam: first.end_seam });
    }
}

/// An open chain that was assembled from its middle begins at its wall again.
fn rotated_open(mut chain: Chain, walls: [f64; 2]) -> Chain {
    if !chain.closed {
        let breaks = |k: usize| {
            let (a, b) =
                (chain.pieces[k].facet.to, chain.pieces[(k + 1) % chain.pieces.len()].facet.from);
            a != b && walls.contains(&a.x)
        };
        if let Some(end) = (0..chain.pieces.len()).find(|&k| breaks(k)) {
            let count = chain.pieces.len();
            chain.pieces.rotate_left((end + 1) % count);
        }
    }
    chain
}

fn surface_middle(surface: &Surface, piece: usize) -> Point {
    let (c, k) = place(surface, piece);
    surface.chains[c].pieces[k].facet.middle()
}

/// Chain and place in it of a piece counted over all chains.
fn place(surface: &Surface, mut piece: usize) -> (usize, usize) {
    for (c, chain) in surface.chains.iter().enumerate() {
        if piece < chain.pieces.len() {
            return (c, piece);
        }
        piece -= chain.pieces.len();
    }
    unreachable!("a piece beyond the surface")
}

/// The piece nearest to a point among those around one of its chain.
fn nearest(surface: &Surface, piece: usize, to: Point) -> (usize, usize) {
    let (c, k) = place(surface, piece);
    let pieces = &surface.chains[c].pieces;
    let distance = |k: usize| foot(&pieces[k].facet, to).distance(to);
    let downhill = |step: isize| {
        let mut at = k;
        while let Some(next) = at.checked_add_signed(step).filter(|&next| next < pieces.len()) {
            if distance(next) > distance(at) {
                break;
            }
            at = next;
        }
        at
    };
    let (down, up) = (downhill(-1), downhill(1));
    (c, if distance(down) < distance(up) { down } else { up })
}

fn foot(facet: &Facet, of: Point) -> Point {
    let along = facet.to - facet.from;
    let square = along.dot(along);
    if square == 0.0 {
        return facet.from;
    }
    facet.from + along * ((of - facet.from).dot(along) / square).clamp(0.0, 1.0)
}

/// Pieces up to and from a point on piece `k`.
fn split(mut pieces: Vec<Piece>, k: usize, at: Point) -> (Vec<Piece>, Vec<Piece>) {
    let mut tail = pieces.split_off(k);
    let piece = tail[0];
    let part = |from: Point, to: Point| Facet { from, to, ..piece.facet };
    if piece.facet.from != at {
        pieces.push(Piece { facet: part(piece.facet.from, at), ..piece });
    }
    tail[0] = Piece { facet: part(at, piece.facet.to), seam: None, ..piece };
    if piece.facet.to == at {
        tail.remove(0);
    }
    (pieces, tail)
}

/// Takes away what does not reach the sky; the parts that are voids, seams taken away.
pub(super) fn freeze(
    surface: &mut Surface,
    sky: f64,
    closure_width: f64,
) -> Result<Vec<Region>, FrontError> {
    let basins = surface.basins(sky)?;
    if !basins.iter().any(|basin| basin.reaches_sky) {
        return Err(FrontError::Inconsistent("nothing reaches the sky"));
    }
    let mut keep = vec![true; surface.chains.len()];
    let mut voids = Vec::new();
    for basin in basins.iter().filter(|basin| !basin.reaches_sky) {
        basin.chains.iter().for_each(|&chain| keep[chain] = false);
        let mut region = Region::from_rings_positive([basin.ring.clone()]);
        for (k, chain) in surface.chains.iter().enumerate() {
            let ring: Vec<Point> = chain.points().collect();
            if chain.closed && area(&ring) < 0.0 && region.contains(ring[0]) {
                keep[k] = false;
                let island = ring.into_iter().rev().collect();
                region = region.difference(&Region::from_rings([island]));
            }
        }
        voids.push(without_tips(&region, surface.walls, closure_width));
    }
    let mut kept = keep.iter();
    surface.chains.retain(|_| kept.next().copied().unwrap_or(true));
    Ok(voids)
}

/// A region without the parts that an opening with a disc of `width` does not reach.
fn without_tips(region: &Region, walls: [f64; 2], width: f64) -> Region {
    let radius = 0.5 * OPENING_SHARE * width;
    // Beyond a wall the region goes on as its image.
    let touches = |wall: f64| region.rings().flatten().any(|p| (p.x - wall).abs() < 1e-6);
    let mut whole = region.clone();
    for wall in walls.into_iter().filter(|&wall| touches(wall)) {
        whole = whole.union(&region.mirrored(wall));
    }
    let Some(bounds) = whole.bounds() else { return Region::empty() };
    let margin = 2.0 * width;
    let solid = Region::rectangle(
        [bounds.min.x - margin, bounds.max.x + margin],
        [bounds.min.z - margin, bounds.max.z + margin],
    )
    .difference(&whole);
    let eroded = whole.difference(&solid.grown(radius, OPENING_STEP));
    if eroded.is_empty() {
        return Region::empty();
    }
    let tips = region.difference(&eroded.grown(radius, OPENING_STEP));
    // What an opening rounds off in corners is no tip.
    let is_tip = |part: &Region| part.area() > width * width;
    let tips: Vec<Region> = tips.parts().filter(is_tip).collect();
    let rest = region.difference(&Region::union_all(&tips));
    let is_wide = |part: &Region| part.area() > 2.0 * width * width;
    let wide: Vec<Region> = rest.parts().filter(is_wide).collect();
    Region::union_all(&wide)
}
