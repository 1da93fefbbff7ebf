//! The moving surface: chains of pieces, and the ambient that they bound.
//!
//! A piece is a facet with what it remembers from one step to the next. Chains run from wall to
//! wall or are closed, the ambient on their left. Together with walls and sky they bound
//! the ambient; rings are found by following a chain to its wall and the wall, counter-clockwise,
//! to the next chain. Cost: chains squared; there are few.

use super::outline::{Facet, Outline};
use super::{FrontError, Scene};
use crate::geom::{Point, Region};

/// A facet on the move.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Piece {
    pub(super) facet: Facet,
    /// Rate along the normal per thickness on an open flat, that of the solid included.
    pub(super) rate: f64,
    /// The rate that the flux gave when it was last solved; none on a new piece.
    pub(super) solved: Option<f64>,
    /// Γ of the neutral gas when it was last solved.
    pub(super) gas: f64,
    /// Seam that ends where this piece begins.
    pub(super) seam: Option<usize>,
}

impl Piece {
    pub(super) fn new(facet: Facet) -> Self {
        Self { facet, rate: 0.0, solved: None, gas: 1.0, seam: None }
    }

    /// The same piece between other ends; the normal is kept when they coincide.
    pub(super) fn with_ends(self, from: Point, to: Point) -> Self {
        let facet = if from.distance(to) > LEAST_LENGTH_NM {
            Facet::between(from, to, self.facet.solid)
        } else {
            Facet { from, to, ..self.facet }
        };
        Self { facet, ..self }
    }
}

/// Shorter pieces have no direction of their own; they keep the one they had, in nm.
pub(super) const LEAST_LENGTH_NM: f64 = 1e-7;

/// Pieces that follow each other.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Chain {
    pub(super) pieces: Vec<Piece>,
    /// Whether its end is its beginning; else both lie on walls.
    pub(super) closed: bool,
    /// Seam that ends where the chain ends.
    pub(super) end_seam: Option<usize>,
}

impl Chain {
    pub(super) fn points(&self) -> impl Iterator<Item = Point> + '_ {
        let last = self.pieces.last().filter(|_| !self.closed).map(|p| p.facet.to);
        self.pieces.iter().map(|p| p.facet.from).chain(last)
    }

    fn ends(&self) -> [Point; 2] {
        [self.pieces[0].facet.from, self.pieces[self.pieces.len() - 1].facet.to]
    }
}

/// All that moves, between its walls.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Surface {
    pub(super) chains: Vec<Chain>,
    pub(super) walls: [f64; 2],
}

/// A part of the ambient: its outline and the chains on it.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Basin {
    pub(super) ring: Vec<Point>,
    pub(super) chains: Vec<usize>,
    pub(super) reaches_sky: bool,
}

impl Surface {
    pub(super) fn of(outline: &Outline, scene: &Scene) -> Self {
        let chain = |facets: &Vec<Facet>| {
            let closed = facets[0].from == facets[facets.len() - 1].to;
            let pieces = facets.iter().copied().map(Piece::new).collect();
            Chain { pieces, closed, end_seam: None }
        };
        Self { chains: outline.chains.iter().map(chain).collect(), walls: scene.walls }
    }

    pub(super) fn pieces(&self) -> impl Iterator<Item = &Piece> {
        self.chains.iter().flat_map(|chain| &chain.pieces)
    }

    pub(super) fn pieces_mut(&mut self) -> impl Iterator<Item = &mut Piece> {
        self.chains.iter_mut().flat_map(|chain| &mut chain.pieces)
    }

    pub(super) fn facets(&self) -> Vec<Facet> {
        self.pieces().map(|piece| piece.facet).collect()
    }

    pub(super) fn len(&self) -> usize {
        self.chains.iter().map(|chain| chain.pieces.len()).sum()
    }

    pub(super) fn top(&self) -> f64 {
        self.pieces().flat_map(|p| [p.facet.from.z, p.facet.to.z]).fold(f64::NEG_INFINITY, f64::max)
    }

    fn is_at_right(&self, p: Point) -> bool {
        p.x - self.walls[0] > self.walls[1] - p.x
    }

    /// The parts of the ambient, up to `sky`; closed chains around solid are not among them.
    pub(super) fn basins(&self, sky: f64) -> Result<Vec<Basin>, FrontError> {
        let mut basins = Vec::new();
        let mut used = vec![false; self.chains.len()];
        for start in 0..self.chains.len() {
            if std::mem::replace(&mut used[start], true) {
                continue;
            }
            let chain = &self.chains[start];
            let mut basin =
                Basin { ring: chain.points().collect(), chains: vec![start], reaches_sky: false };
            if chain.closed {
                if area(&basin.ring) > 0.0 {
                    basins.push(basin);
                }
                continue;
            }
            let mut end = chain.ends()[1];
            loop {
                let next = self.next_along_walls(end, sky, &mut basin)?;
                if next == start {
                    break;
                }
                if std::mem::replace(&mut used[next], true) {
                    return Err(FrontError::Inconsistent("chains share a stretch of wall"));
                }
                basin.ring.extend(self.chains[next].points());
                basin.chains.push(next);
                end = self.chains[next].ends()[1];
            }
            basins.push(basin);
        }
        Ok(basins)
    }

    /// The chain that begins next on the way up the right wall, along the sky, down the left wall.
    fn next_along_walls(
        &self,
        end: Point,
        sky: f64,
        basin: &mut Basin,
    ) -> Result<usize, FrontError> {
        let starts = |right: bool| {
            let chains = self.chains.iter().enumerate().filter(|(_, chain)| !chain.closed);
            chains
                .map(|(k, chain)| (k, chain.ends()[0]))
                .filter(move |(_, p)| self.is_at_right(*p) == right)
        };
        let mut from = end.z;
        if self.is_at_right(end) {
            let above = starts(true).filter(|(_, p)| p.z > from);
            if let Some((next, _)) = above.min_by(|a, b| a.1.z.total_cmp(&b.1.z)) {
                return Ok(next);
            }
            basin.ring.extend([Point::new(self.walls[1], sky), Point::new(self.walls[0], sky)]);
            basin.reaches_sky = true;
            from = sky;
        }
        starts(false)
            .filter(|(_, p)| p.z < from)
            .max_by(|a, b| a.1.z.total_cmp(&b.1.z))
            .map(|(next, _)| next)
            .ok_or(FrontError::Inconsistent("the surface does not close the ambient"))
    }

    /// The ambient up to `sky`.
    pub(super) fn ambient(&self, sky: f64) -> Result<Region, FrontError> {
        let basins = self.basins(sky)?;
        let islands = self.chains.iter().filter(|c| c.closed).map(|c| c.points().collect());
        let islands: Vec<Vec<Point>> =
            islands.filter(|ring: &Vec<Point>| area(ring) < 0.0).collect();
        let outer = Region::from_rings_positive(basins.into_iter().map(|basin| basin.ring));
        let holes = islands.into_iter().map(|mut ring| {
            ring.reverse();
            ring
        });
        Ok(outer.difference(&Region::from_rings(holes)))
    }
}

/// Signed area of a ring, positive when counter-clockwise.
pub(super) fn area(ring: &[Point]) -> f64 {
    let next = ring.iter().cycle().skip(1);
    0.5 * ring.iter().zip(next).map(|(a, b)| a.cross(*b)).sum::<f64>()
}
