//! The exposed surface of a scene as directed facets.
//!
//! A facet runs from one point to the next with the ambient on its left; facets that follow
//! each other along the surface follow each other in the list. Mostly one chain runs from the
//! left wall to the right; what else bounds the ambient (a cap that reaches in from a wall, an
//! island) are chains of their own. Method: the ambient is the part of the
//! space between the walls, outside all solids, that reaches the sky; its boundary without
//! walls and sky is the surface. Cost: one boolean, then edges times vertices of the solids
//! for the pieces of shared edges. Fails when the scene is open at its bottom.

use super::{FrontError, Scene};
use crate::geom::{Bounds, Point, Region};
use crate::num::tolerance::{ON_EDGE_NM, SKY_MARGIN_NM};

/// A straight piece of exposed surface.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Facet {
    /// Its first end, in nm; the ambient is to the left on the way to the second.
    pub from: Point,
    /// Its second end, in nm.
    pub to: Point,
    /// Unit normal, into the ambient; a facet without length still has one.
    pub normal: Point,
    /// Index of the solid it belongs to.
    pub solid: usize,
}

impl Facet {
    /// The facet between two points, the ambient on its left.
    pub fn between(from: Point, to: Point, solid: usize) -> Self {
        let along = to - from;
        let length = along.norm();
        Self { from, to, normal: Point::new(-along.z / length, along.x / length), solid }
    }

    /// Length, in nm.
    pub fn length(&self) -> f64 {
        self.from.distance(self.to)
    }

    /// Its middle.
    pub fn middle(&self) -> Point {
        (self.from + self.to) * 0.5
    }
}

/// The exposed surface of a scene.
#[derive(Debug, Clone, PartialEq)]
pub struct Outline {
    /// The ambient up to a little above the surface.
    pub ambient: Region,
    /// Chains of facets, each from wall to wall or closed.
    pub chains: Vec<Vec<Facet>>,
}

impl Outline {
    /// The surface that the ambient of a scene reaches, one facet an edge.
    pub fn exposed(scene: &Scene) -> Result<Self, FrontError> {
        let points = scene.solids.iter().flat_map(|s| s.region.rings().flatten().copied());
        let bounds = Bounds::around(points).ok_or(FrontError::Inconsistent("no solid"))?;
        let [left, right] = scene.walls;
        let sky = bounds.max.z + SKY_MARGIN_NM;
        let open = Region::rectangle(scene.walls, [bounds.min.z, sky])
            .difference(&Region::union_all(scene.solids.iter().map(|s| &s.region)));
        let reaches_sky =
            |part: &Region| part.bounds().is_some_and(|b| b.max.z >= sky - ON_EDGE_NM);
        let ambient = open
            .parts()
            .find(reaches_sky)
            .map(|part| part.without_hairs())
            .ok_or(FrontError::Inconsistent("no ambient above the solids"))?;
        if ambient.bounds().is_some_and(|b| b.min.z <= bounds.min.z + ON_EDGE_NM) {
            return Err(FrontError::Inconsistent("the scene is open at its bottom"));
        }
        let is_surface = |a: Point, b: Point| {
            let on = |v: f64, w: f64, at: f64| {
                (v - at).abs() < ON_EDGE_NM && (w - at).abs() < ON_EDGE_NM
            };
            !(on(a.x, b.x, left) || on(a.x, b.x, right) || on(a.z, b.z, sky))
        };
        let mut chains: Vec<Vec<Facet>> = Vec::new();
        for ring in ambient.rings() {
            let edges: Vec<_> =
                ring.iter().copied().zip(ring.iter().copied().cycle().skip(1)).collect();
            // Start behind an edge that is no surface, so that no chain is cut in two.
            let start = edges.iter().position(|&(a, b)| !is_surface(a, b)).map_or(0, |at| at + 1);
            let mut chain = Vec::new();
            for k in 0..edges.len() {
                let (a, b) = edges[(start + k) % edges.len()];
                if is_surface(a, b) {
                    chain.extend(pieces(scene, a, b));
                } else if !chain.is_empty() {
                    chains.push(std::mem::take(&mut chain));
                }
            }
            if !chain.is_empty() {
                chains.push(chain);
            }
        }
        Ok(Self { ambient, chains })
    }

    /// All facets, chain after chain.
    pub fn facets(&self) -> impl Iterator<Item = &Facet> {
        self.chains.iter().flatten()
    }
}

/// The pieces of an edge of the ambient, cut where one solid ends and the next begins.
fn pieces(scene: &Scene, a: Point, b: Point) -> Vec<Facet> {
    let along = b - a;
    let length = along.norm();
    let place = |p: Point| (p - a).dot(along) / length;
    let mut cuts: Vec<f64> = scene
        .solids
        .iter()
        .flat_map(|s| s.region.rings().flatten().copied())
        .filter(|p| p.distance_to_segment(a, b) < ON_EDGE_NM)
        .map(place)
        .filter(|&t| t > ON_EDGE_NM && t < length - ON_EDGE_NM)
        .collect();
    cuts.extend([0.0, length]);
    cuts.sort_by(f64::total_cmp);
    cuts.dedup_by(|x, y| *x - *y < ON_EDGE_NM);
    let inward = Point::new(along.z, -along.x) * (4.0 * ON_EDGE_NM / length);
    let owner = |middle: Point| {
        let inside = middle + inward;
        scene.solids.iter().position(|s| s.region.contains(inside)).or_else(|| {
            // A sliver thinner than the probe: the solid whose edge is nearest.
            let gap = |s: &super::Solid| {
                s.region
                    .edges()
                    .map(|(p, q)| middle.distance_to_segment(p, q))
                    .fold(f64::INFINITY, f64::min)
            };
            let gaps: Vec<f64> = scene.solids.iter().map(gap).collect();
            (0..gaps.len()).min_by(|&i, &j| gaps[i].total_cmp(&gaps[j]))
        })
    };
    let mut facets: Vec<Facet> = Vec::new();
    for pair in cuts.windows(2) {
        let end = |t: f64| {
            if t == 0.0 {
                a
            } else if t == length {
                b
            } else {
                a + along * (t / length)
            }
        };
        let (from, to) = (end(pair[0]), end(pair[1]));
        let solid = owner((from + to) * 0.5).unwrap_or(0);
        match facets.last_mut() {
            Some(last) if last.solid == solid => last.to = to,
            _ => facets.push(Facet::between(from, to, solid)),
        }
    }
    facets
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::front::Solid;

    fn solid(x: [f64; 2], z: [f64; 2]) -> Solid {
        Solid { region: Region::rectangle(x, z), rate: 1.0 }
    }

    #[test]
    fn a_trench_is_one_chain_from_wall_to_wall() {
        let scene = Scene {
            walls: [0.0, 30.0],
            solids: vec![solid([0.0, 30.0], [-5.0, 0.0]), solid([0.0, 10.0], [0.0, 20.0])],
        };
        let outline = Outline::exposed(&scene).unwrap();
        let [chain] = &outline.chains[..] else { panic!("{outline:?}") };
        assert_eq!(chain[0].from, Point::new(0.0, 20.0));
        assert_eq!(chain.last().unwrap().to, Point::new(30.0, 0.0));
        assert_eq!(chain.iter().map(|f| f.solid).collect::<Vec<_>>(), [1, 1, 0]);
        assert_eq!(chain[0].normal, Point::new(0.0, 1.0));
    }

    #[test]
    fn a_flat_over_two_solids_is_cut_where_they_meet() {
        let scene = Scene {
            walls: [0.0, 30.0],
            solids: vec![solid([0.0, 10.0], [-5.0, 0.0]), solid([10.0, 30.0], [-5.0, 0.0])],
        };
        let outline = Outline::exposed(&scene).unwrap();
        let ends: Vec<_> = outline.facets().map(|f| (f.to.x, f.solid)).collect();
        assert_eq!(ends, [(10.0, 0), (30.0, 1)]);
    }

    #[test]
    fn a_cap_from_the_wall_is_a_chain_of_its_own() {
        let scene = Scene {
            walls: [0.0, 30.0],
            solids: vec![solid([0.0, 30.0], [-5.0, 0.0]), solid([20.0, 30.0], [10.0, 12.0])],
        };
        let outline = Outline::exposed(&scene).unwrap();
        assert_eq!(outline.chains.len(), 2);
        assert!(outline.chains.iter().all(|c| !c.is_empty()));
    }

    #[test]
    fn an_open_bottom_is_an_error() {
        let scene = Scene { walls: [0.0, 30.0], solids: vec![solid([0.0, 20.0], [-5.0, 0.0])] };
        assert!(matches!(Outline::exposed(&scene), Err(FrontError::Inconsistent(_))));
    }
}
