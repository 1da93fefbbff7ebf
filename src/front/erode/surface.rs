//! The exposed surface as facets: the border of the ambient, by the solid behind it.

use super::locate::Locator;
use crate::front::FrontError;
use crate::geom::{Bounds, Point, Region, shaved};
use crate::num::tolerance::{FACET_SLACK_NM, FACET_SLACK_SHARE, SAME_LINE_NM, SIDE_STEP_NM};

/// What follows a facet at one of its ends.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Link {
    /// The facet of this index.
    Facet(usize),
    /// A mirror wall: the facet's own mirror image.
    Mirror,
    /// The lower edge of the scene.
    End,
}

/// A straight piece of the exposed surface, the ambient on the left from `a` to `b`.
#[derive(Debug, Clone)]
pub(super) struct Facet {
    pub(super) a: Point,
    pub(super) b: Point,
    /// The solid behind it; `None` below the scene.
    pub(super) owner: Option<usize>,
    /// What comes before `a`.
    pub(super) before: Link,
    /// What comes after `b`.
    pub(super) after: Link,
    /// Depth that the removal is behind at `a` and at `b`, in nm: what was left of the last step
    /// when it got here.
    pub(super) lag: [f64; 2],
}

impl Facet {
    pub(super) fn middle(&self) -> Point {
        (self.a + self.b) * 0.5
    }

    pub(super) fn length(&self) -> f64 {
        self.a.distance(self.b)
    }

    /// Unit vector from `a` to `b`.
    pub(super) fn along(&self) -> Point {
        (self.b - self.a) * (1.0 / self.length())
    }

    /// Unit vector into the ambient.
    pub(super) fn normal(&self) -> Point {
        let along = self.along();
        Point::new(-along.z, along.x)
    }
}

/// The box in which things move: mirror walls left and right, the sky above.
#[derive(Debug, Clone, Copy)]
pub(super) struct Frame {
    pub(super) walls: [f64; 2],
    bottom: f64,
    top: f64,
}

impl Frame {
    /// The frame of some solids.
    pub(super) fn around(walls: [f64; 2], solids: &[Region]) -> Result<Self, FrontError> {
        let corners =
            solids.iter().filter_map(Region::bounds).flat_map(|Bounds { min, max }| [min, max]);
        let Bounds { min, max } =
            Bounds::around(corners).ok_or(FrontError::Inconsistent("a scene without solids"))?;
        let walls = walls.map(|x| Point::new(x, 0.0).snapped().x);
        if !(min.z.is_finite() && max.z.is_finite() && walls[0] < walls[1]) {
            return Err(FrontError::Inconsistent("a scene without finite bounds"));
        }
        const SKY_NM: f64 = 1.0;
        Ok(Self { walls, bottom: min.z, top: max.z + SKY_NM })
    }

    pub(super) fn region(&self) -> Region {
        Region::rectangle(self.walls, [self.bottom, self.top])
    }

    /// Parts open space into what the sky reaches and enclosed voids.
    pub(super) fn split_open(&self, open: &Region) -> Result<(Region, Vec<Region>), FrontError> {
        let (sky, enclosed): (Vec<_>, Vec<_>) =
            open.parts().partition(|part| part.bounds().is_some_and(|b| b.max.z >= self.top));
        let mut sky = sky.into_iter();
        match (sky.next(), sky.next()) {
            (Some(ambient), None) => {
                let voids = enclosed.into_iter().filter(|v| !v.without_hairs().is_empty());
                Ok((ambient, voids.collect()))
            }
            _ => Err(FrontError::Inconsistent("the sky is not one open space")),
        }
    }

    /// Which mirror wall a point lies on.
    pub(super) fn on_wall(&self, p: Point) -> bool {
        self.walls.contains(&p.x)
    }

    fn holds_edge(&self, a: Point, b: Point) -> bool {
        (a.x == b.x && self.on_wall(a)) || (a.z == b.z && (a.z >= self.top || a.z <= self.bottom))
    }
}

/// The surface of the ambient in facets no longer than `facet_nm`, chain by chain. No facet
/// belongs to two solids.
pub(super) fn facets(
    ambient: &Region,
    frame: &Frame,
    solids: &[Region],
    facet_nm: f64,
    is_rough: bool,
) -> Vec<Facet> {
    let nodes = Nodes::new(solids);
    let owners = Locator::new(solids);
    let mut facets = Vec::new();
    for ring in ambient.rings() {
        for chain in chains(&shaved(ring), frame) {
            add_chain(&mut facets, &chain, frame, &nodes, &owners, facet_nm, is_rough);
        }
    }
    facets
}

/// Points in order; `closed` when the last is followed by the first.
struct Chain {
    points: Vec<Point>,
    closed: bool,
}

/// The pieces of a ring that are surface and not frame.
fn chains(ring: &[Point], frame: &Frame) -> Vec<Chain> {
    let n = ring.len();
    if n < 3 {
        return Vec::new();
    }
    let Some(start) = (0..n).find(|&i| frame.holds_edge(ring[i], ring[(i + 1) % n])) else {
        return vec![Chain { points: ring.to_vec(), closed: true }];
    };
    let mut chains = Vec::new();
    let mut points: Vec<Point> = Vec::new();
    for k in 1..=n {
        let (a, b) = (ring[(start + k) % n], ring[(start + k + 1) % n]);
        if frame.holds_edge(a, b) {
            if points.len() > 1 {
                chains.push(Chain { points: std::mem::take(&mut points), closed: false });
            }
            points.clear();
        } else {
            if points.is_empty() {
                points.push(a);
            }
            points.push(b);
        }
    }
    chains
}

/// Vertices of the solids in order of z, to find those that lie on an edge.
struct Nodes(Vec<Point>);

impl Nodes {
    fn new(solids: &[Region]) -> Self {
        let mut points: Vec<_> = solids.iter().flat_map(Region::rings).flatten().copied().collect();
        points.sort_by(|p, q| p.z.total_cmp(&q.z).then(p.x.total_cmp(&q.x)));
        points.dedup();
        Self(points)
    }

    /// Those inside the edge from `a` to `b`, in its direction.
    fn between(&self, a: Point, b: Point) -> Vec<Point> {
        let [low, high] = [a.z.min(b.z) - SAME_LINE_NM, a.z.max(b.z) + SAME_LINE_NM];
        let from = self.0.partition_point(|p| p.z < low);
        let along = b - a;
        let mut found: Vec<_> = self.0[from..]
            .iter()
            .take_while(|p| p.z <= high)
            .filter(|p| p.distance_to_segment(a, b) < SAME_LINE_NM)
            .filter(|p| p.distance(a) > SAME_LINE_NM && p.distance(b) > SAME_LINE_NM)
            .copied()
            .collect();
        found.sort_by(|p, q| (*p - a).dot(along).total_cmp(&(*q - a).dot(along)));
        found
    }
}

fn add_chain(
    facets: &mut Vec<Facet>,
    chain: &Chain,
    frame: &Frame,
    nodes: &Nodes,
    owners: &Locator,
    facet_nm: f64,
    is_rough: bool,
) {
    let mut points = Vec::new();
    let n = chain.points.len();
    for i in 0..n {
        points.push(chain.points[i]);
        if chain.closed || i + 1 < n {
            let next = chain.points[(i + 1) % n];
            points.extend(nodes.between(chain.points[i], next));
        }
    }
    if chain.closed {
        points.push(points[0]);
    }
    let owner: Vec<_> = points.windows(2).map(|e| owner_behind(e[0], e[1], owners)).collect();
    let first = facets.len();
    let mut i = 0;
    while i < owner.len() {
        let run = owner[i..].iter().take_while(|&&o| o == owner[i]).count();
        for edge in coarsened(&points[i..=i + run], facet_nm, is_rough).windows(2) {
            let pieces = (edge[0].distance(edge[1]) / facet_nm).ceil().max(1.0) as usize;
            let cut = |k: usize| {
                if k == pieces {
                    edge[1]
                } else {
                    edge[0] + (edge[1] - edge[0]) * (k as f64 / pieces as f64)
                }
            };
            for k in 0..pieces {
                let here = facets.len();
                facets.push(Facet {
                    a: cut(k),
                    b: cut(k + 1),
                    owner: owner[i],
                    before: Link::Facet(here.wrapping_sub(1)),
                    after: Link::Facet(here + 1),
                    lag: [0.0; 2],
                });
            }
        }
        i += run;
    }
    let last = facets.len() - 1;
    let end = |p: Point| if frame.on_wall(p) { Link::Mirror } else { Link::End };
    let (before, after) = if chain.closed {
        (Link::Facet(last), Link::Facet(first))
    } else {
        (end(points[0]), end(points[points.len() - 1]))
    };
    facets[first].before = before;
    facets[last].after = after;
}

/// The solid on the right of an edge of the ambient.
fn owner_behind(a: Point, b: Point, owners: &Locator) -> Option<usize> {
    let along = (b - a) * (1.0 / a.distance(b));
    let inward = Point::new(along.z, -along.x);
    let middle = (a + b) * 0.5;
    // Farther out where rounding left a hair between the two.
    [1.0, 10.0, 100.0].iter().find_map(|far| owners.find(middle + inward * (SIDE_STEP_NM * far)))
}

/// How far left-out vertices may lie from a chord of this length, in nm.
pub(super) fn slack_nm(chord: f64) -> f64 {
    FACET_SLACK_NM.max(FACET_SLACK_SHARE * chord)
}

/// The chain with vertices left out that stay near the chord of their neighbours, no chord
/// longer than `facet_nm`.
fn coarsened(points: &[Point], facet_nm: f64, is_rough: bool) -> Vec<Point> {
    let mut kept = vec![points[0]];
    let mut i = 0;
    while i + 1 < points.len() {
        let fits = |j: usize| {
            let chord = points[i].distance(points[j]);
            let slack = if is_rough { slack_nm(chord) } else { FACET_SLACK_NM };
            chord <= facet_nm
                && chord > SAME_LINE_NM
                && points[i + 1..j]
                    .iter()
                    .all(|p| p.distance_to_segment(points[i], points[j]) <= slack)
        };
        let mut j = i + 1;
        while j + 1 < points.len() && fits(j + 1) {
            j += 1;
        }
        kept.push(points[j]);
        i = j;
    }
    kept
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_trench_between_two_materials_gives_facets_of_each() {
        let line = Region::rectangle([0.0, 10.0], [0.0, 20.0]);
        let oxide = Region::rectangle([10.0, 30.0], [0.0, 5.0]);
        let solids = [line, oxide];
        let frame = Frame::around([0.0, 30.0], &solids).unwrap();
        let open = frame.region().difference(&Region::union_all(&solids));
        let (ambient, voids) = frame.split_open(&open).unwrap();
        assert!(voids.is_empty());
        let facets = facets(&ambient, &frame, &solids, 2.0, false);
        let length = |owner| {
            facets.iter().filter(|f| f.owner == Some(owner)).map(Facet::length).sum::<f64>()
        };
        assert_eq!((length(0), length(1)), (25.0, 20.0));
        assert!(facets.iter().all(|f| f.length() <= 2.0));
        assert_eq!(facets.iter().filter(|f| f.before == Link::Mirror).count(), 1);
    }

    #[test]
    fn a_hair_is_shaved() {
        let ring = [
            (0.0, 0.0),
            (4.0, 0.0),
            (4.0, 4.0),
            (2.0, 4.0),
            (2.0, 9.0),
            (2.000001, 4.0),
            (0.0, 4.0),
        ]
        .map(|(x, z)| Point::new(x, z));
        assert_eq!(shaved(&ring).len(), 5);
    }
}
