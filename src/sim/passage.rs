//! The way out that has the least solid to pass.
//!
//! Regions are the nodes of a graph: the start, the goal, free regions, and the contacts of
//! layers that allow different thicknesses. Crossing a layer from one of its neighbours to another costs the
//! shortest way through it over the thickness that it allows, so that with equal allowances the
//! sum of thicknesses counts. The shortest way in a layer is straight where the straight one
//! stays inside; else it bends at the layer's vertices (visibility graph; Lozano-Pérez and
//! Wesley, Commun. ACM 22, 560 (1979)), which are thinned to 1/200 of the allowance first.
//! Deviation: moving along a contact costs nothing, so a way through layers that allow different
//! thicknesses may come out too short. Cost: the product of the numbers of contact edges, and
//! for bent ways vertices squared times edges.

use super::surface::contact;
use crate::geom::{Point, Region};

/// A connected layer that lets pass.
pub(super) struct Layer {
    /// Where it is.
    pub region: Region,
    /// Thickness that may be passed, in nm; infinite: it does not count.
    pub limit: f64,
}

type Edge = (Point, Point);

/// Least sum of thickness over allowance on the ways from `start` to `goal`; `None` where no
/// way leads there.
pub(super) fn least_share(
    start: &Region,
    goal: &Region,
    free: &[&Region],
    layers: &[Layer],
) -> Option<f64> {
    let nodes: Vec<&Region> = [start, goal].into_iter().chain(free.iter().copied()).collect();
    let mut ways: Vec<(usize, usize, f64)> = Vec::new();
    for (a, region) in nodes.iter().enumerate() {
        for (b, other) in nodes.iter().enumerate().skip(a + 1) {
            if !contact(region, other).is_empty() {
                ways.push((a, b, 0.0));
            }
        }
    }
    let mut count = nodes.len();
    let mut doors: Vec<Vec<(usize, Vec<Edge>)>> = layers
        .iter()
        .map(|layer| {
            let with = nodes.iter().map(|node| contact(&layer.region, node)).enumerate();
            with.filter(|(_, edges)| !edges.is_empty()).collect()
        })
        .collect();
    for a in 0..layers.len() {
        for b in a + 1..layers.len() {
            let edges = contact(&layers[a].region, &layers[b].region);
            if !edges.is_empty() {
                doors[a].push((count, edges.clone()));
                doors[b].push((count, edges));
                count += 1;
            }
        }
    }
    for (layer, doors) in layers.iter().zip(&doors) {
        for (at, (a, from)) in doors.iter().enumerate() {
            for (b, to) in &doors[at + 1..] {
                let cost = if layer.limit.is_finite() {
                    through(&layer.region, from, to, layer.limit / 200.0) / layer.limit
                } else {
                    0.0
                };
                ways.push((*a, *b, cost));
            }
        }
    }
    let cost = cheapest(count, &ways);
    cost.is_finite().then_some(cost)
}

/// Cost from node 0 to node 1 (Bellman and Ford; the graphs are small).
fn cheapest(count: usize, ways: &[(usize, usize, f64)]) -> f64 {
    let mut cost = vec![f64::INFINITY; count];
    cost[0] = 0.0;
    for _ in 0..count {
        for &(a, b, way) in ways {
            cost[a] = cost[a].min(cost[b] + way);
            cost[b] = cost[b].min(cost[a] + way);
        }
    }
    cost[1]
}

/// Shortest way through a region between two sets of its edges.
fn through(region: &Region, from: &[Edge], to: &[Edge], tolerance: f64) -> f64 {
    let walls: Vec<Edge> = region.edges().collect();
    let mut straight = Vec::new();
    for &(a, b) in from {
        for &(c, d) in to {
            let middle = |p: Point, q: Point| (p + q) * 0.5;
            for p in [a, middle(a, b), b] {
                straight.push((p, nearest(p, c, d)));
            }
            for q in [c, middle(c, d), d] {
                straight.push((nearest(q, a, b), q));
            }
        }
    }
    straight.sort_by(|x, y| x.0.distance(x.1).total_cmp(&y.0.distance(y.1)));
    let clear = straight.iter().position(|&(p, q)| sees(p, q, region, &walls));
    match clear {
        Some(at)
            if straight[at].0.distance(straight[at].1)
                <= straight[0].0.distance(straight[0].1) * (1.0 + 1e-9) =>
        {
            straight[at].0.distance(straight[at].1)
        }
        clear => {
            let direct = clear.map_or(f64::INFINITY, |at| straight[at].0.distance(straight[at].1));
            direct.min(bent(region, &walls, from, to, tolerance))
        }
    }
}

/// Shortest way that bends at vertices of the region.
fn bent(region: &Region, walls: &[Edge], from: &[Edge], to: &[Edge], tolerance: f64) -> f64 {
    let corners = reflex_corners(region, tolerance);
    let door = |p: Point, edges: &[Edge]| {
        let ends = edges.iter().map(|&(a, b)| nearest(p, a, b));
        let seen = ends.filter(|&q| sees(p, q, region, walls));
        seen.map(|q| p.distance(q)).fold(f64::INFINITY, f64::min)
    };
    let mut cost: Vec<f64> = corners.iter().map(|&p| door(p, from)).collect();
    let mut done = vec![false; corners.len()];
    let mut best = f64::INFINITY;
    while let Some(at) = (0..corners.len())
        .filter(|&at| !done[at] && cost[at] < best)
        .min_by(|&a, &b| cost[a].total_cmp(&cost[b]))
    {
        done[at] = true;
        best = best.min(cost[at] + door(corners[at], to));
        for other in 0..corners.len() {
            let longer = cost[at] + corners[at].distance(corners[other]);
            if !done[other]
                && longer < cost[other]
                && sees(corners[at], corners[other], region, walls)
            {
                cost[other] = longer;
            }
        }
    }
    best
}

/// Vertices at which the outline turns away from the region, thinned.
fn reflex_corners(region: &Region, tolerance: f64) -> Vec<Point> {
    let mut corners: Vec<Point> = Vec::new();
    for ring in region.rings() {
        let count = ring.len();
        for at in 0..count {
            let (a, p, b) = (ring[(at + count - 1) % count], ring[at], ring[(at + 1) % count]);
            let reflex = (p - a).cross(b - p) < 0.0;
            if reflex && corners.last().is_none_or(|last| last.distance(p) > tolerance) {
                corners.push(p);
            }
        }
    }
    corners
}

fn nearest(p: Point, a: Point, b: Point) -> Point {
    let along = b - a;
    let length2 = along.dot(along);
    if length2 == 0.0 { a } else { a + along * ((p - a).dot(along) / length2).clamp(0.0, 1.0) }
}

/// Whether the straight way between two points of a region stays in it.
fn sees(p: Point, q: Point, region: &Region, walls: &[Edge]) -> bool {
    let along = q - p;
    if along.norm() == 0.0 {
        return true;
    }
    let crossed = walls.iter().any(|&(a, b)| {
        let edge = b - a;
        let turn = along.cross(edge);
        if turn == 0.0 {
            return false;
        }
        let here = (a - p).cross(edge) / turn;
        let there = (a - p).cross(along) / turn;
        let inside = 1e-6..1.0 - 1e-6;
        inside.contains(&here) && inside.contains(&there)
    });
    !crossed && region.contains((p + q) * 0.5)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn slab(x: [f64; 2], z: [f64; 2]) -> Region {
        Region::rectangle(x, z)
    }

    #[test]
    fn a_planar_cap_costs_its_thickness() {
        let start = slab([20.0, 40.0], [0.0, 50.0]);
        let goal = slab([0.0, 60.0], [62.0, 80.0]);
        let cap = Layer { region: slab([0.0, 60.0], [50.0, 62.0]), limit: 48.0 };
        let share = least_share(&start, &goal, &[], &[cap]).unwrap();
        assert!((share - 0.25).abs() < 1e-9, "{share}");
    }

    /// Around a tight plate 40 wide, 10 above the start and 5 thick, to an open top 30 up:
    /// √(20² + 10²) + 5 + 15 = 42.36 from the middle of a narrow start.
    #[test]
    fn a_way_around_a_plate_bends_at_its_corners() {
        let start = slab([-0.001, 0.001], [-5.0, 0.0]);
        let goal = slab([-50.0, 50.0], [30.0, 40.0]);
        let plate = slab([-20.0, 20.0], [10.0, 15.0]);
        let layer =
            Layer { region: slab([-50.0, 50.0], [0.0, 30.0]).difference(&plate), limit: 100.0 };
        let share = least_share(&start, &goal, &[], &[layer]).unwrap();
        let exact = (500f64.sqrt() + 5.0 + 15.0) / 100.0;
        assert!((share - exact).abs() < 1e-3, "{share} {exact}");
    }

    #[test]
    fn no_way_leads_through_what_does_not_let_pass() {
        let start = slab([0.0, 10.0], [0.0, 10.0]);
        let goal = slab([0.0, 10.0], [20.0, 30.0]);
        assert_eq!(least_share(&start, &goal, &[], &[]), None);
        let touching = slab([0.0, 10.0], [10.0, 20.0]);
        assert_eq!(least_share(&start, &goal, &[&touching], &[]), Some(0.0));
    }
}
