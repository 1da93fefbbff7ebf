//! Makes regions that share edges share them vertex by vertex.
//!
//! A boolean rounds the vertices that it makes to the polygon grid. Two neighbours cut at
//! different times may so disagree by a grid cell along an edge that they share, and a later
//! boolean would find a crack or a hair between them. Here vertices within two cells of each
//! other become one, and an edge that passes within two cells of a neighbour's vertex takes it
//! in, as in snap rounding (Hobby, Comput. Geom. 13, 199 (1999)), but only where vertices
//! already are; hairs that this closes are shaved off. Cost: n log n, and n times the vertices under a long edge. It cannot fail.

use super::hairs::shaved;
use super::{Point, Region};
use crate::num::tolerance::GRID_PER_NM;

/// Vertices this close are one, in grid cells.
const REACH_CELLS: i64 = 2;

type Vertex = (i64, i64);

/// Merges vertices and splits edges so that edges shared by two of the regions are the same
/// edges; vertices at the upright walls stay there, none moves by more than four grid cells.
pub fn conform(regions: &mut [Region], walls: [f64; 2]) {
    let walls = walls.map(|x| to_grid(Point::new(x, 0.0)).0);
    let to_grid = |p: Point| {
        let (x, z) = to_grid(p);
        let wall = walls.into_iter().find(|wall| (wall - x).abs() <= REACH_CELLS);
        (wall.unwrap_or(x), z)
    };
    let mut vertices: Vec<Vertex> =
        regions.iter().flat_map(Region::rings).flatten().map(|&p| to_grid(p)).collect();
    vertices.sort_unstable();
    vertices.dedup();
    let merged = merge(&vertices);
    let target = |v: Vertex| merged[vertices.partition_point(|&other| other < v)];
    let mut kept = merged.clone();
    kept.sort_unstable();
    kept.dedup();
    for region in regions {
        for polygon in &mut region.polygons {
            for ring in polygon.iter_mut() {
                let corners = ring.iter().map(|&p| to_point(target(to_grid(p))));
                let corners = shaved(&corners.collect::<Vec<_>>());
                *ring = split(&corners, &kept);
            }
            if polygon[0].len() < 3 {
                polygon.clear();
            } else {
                polygon.retain(|ring| ring.len() >= 3);
            }
        }
        region.polygons.retain(|polygon| !polygon.is_empty());
    }
}

fn to_grid(p: Point) -> Vertex {
    ((p.x * GRID_PER_NM).round() as i64, (p.z * GRID_PER_NM).round() as i64)
}

fn to_point(v: Vertex) -> Point {
    Point::new(v.0 as f64 / GRID_PER_NM, v.1 as f64 / GRID_PER_NM)
}

/// For each vertex, in order, the first one within reach.
fn merge(vertices: &[Vertex]) -> Vec<Vertex> {
    let mut merged: Vec<Vertex> = Vec::with_capacity(vertices.len());
    for (at, &v) in vertices.iter().enumerate() {
        let near = merged[..at]
            .iter()
            .rev()
            .zip(vertices[..at].iter().rev())
            .take_while(|&(_, &(x, _))| v.0 - x <= REACH_CELLS)
            .map(|(&target, _)| target)
            .filter(|t| (v.0 - t.0).abs() <= REACH_CELLS && (v.1 - t.1).abs() <= REACH_CELLS)
            .last();
        merged.push(near.unwrap_or(v));
    }
    merged
}

/// The ring through `corners` with the vertices beside its edges taken in.
fn split(corners: &[Point], vertices: &[Vertex]) -> Vec<Point> {
    let mut ring: Vec<Vertex> = Vec::with_capacity(corners.len());
    for (at, &a) in corners.iter().enumerate() {
        let [a, b] = [a, corners[(at + 1) % corners.len()]].map(to_grid);
        if a == b {
            continue;
        }
        ring.push(a);
        let mut beside: Vec<_> = near_edge(a, b, vertices).collect();
        beside.sort_unstable();
        ring.extend(beside.into_iter().map(|(_, v)| v));
    }
    ring.into_iter().map(to_point).collect()
}

/// Vertices beside the edge, but neither at its ends nor exactly on it, with their place along it.
fn near_edge(
    a: Vertex,
    b: Vertex,
    vertices: &[Vertex],
) -> impl Iterator<Item = (i128, Vertex)> + '_ {
    let from = vertices.partition_point(|v| v.0 < a.0.min(b.0) - REACH_CELLS);
    let (low, high) = (a.1.min(b.1) - REACH_CELLS, a.1.max(b.1) + REACH_CELLS);
    let last = a.0.max(b.0) + REACH_CELLS;
    let along = ((b.0 - a.0) as i128, (b.1 - a.1) as i128);
    let length2 = along.0 * along.0 + along.1 * along.1;
    vertices[from..].iter().take_while(move |v| v.0 <= last).filter_map(move |&v| {
        if v.1 < low || v.1 > high {
            return None;
        }
        let to = ((v.0 - a.0) as i128, (v.1 - a.1) as i128);
        let across = along.0 * to.1 - along.1 * to.0;
        let place = along.0 * to.0 + along.1 * to.1;
        let reach = i128::from(REACH_CELLS);
        let beside = across != 0
            && across as f64 * across as f64 <= (reach * reach) as f64 * length2 as f64
            && place > 0
            && place < length2;
        (beside && v != a && v != b).then_some((place, v))
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    /// A wedge and its neighbour, cut by a plane between two vertices that only one of them has.
    #[test]
    fn neighbours_cut_alike_after_conforming() {
        let (a, b) = (Point::new(0.0, 0.0), Point::new(7.0, 100.0));
        let between = Point::new(2.3333333, 33.3333333).snapped();
        let left =
            Region::from_rings([vec![a, b, Point::new(-10.0, 100.0), Point::new(-10.0, 0.0)]]);
        let right = Region::from_rings([vec![
            a,
            Point::new(20.0, 0.0),
            Point::new(20.0, 100.0),
            b,
            between,
        ]]);
        let mut regions = [left, right];
        conform(&mut regions, [-10.0, 20.0]);
        let below = Region::rectangle([-10.0, 20.0], [0.0, 77.77]);
        let cut = regions.each_ref().map(|region| region.intersection(&below));
        let whole = cut[0].union(&cut[1]);
        assert_eq!(whole.rings().count(), 1);
        assert_eq!(whole.polygons()[0][0].len(), 4, "{whole:?}");
    }

    #[test]
    fn vertices_two_cells_apart_become_one() {
        let cell = 1.0 / GRID_PER_NM;
        let square = Region::rectangle([0.0, 1.0], [0.0, 1.0]);
        let other = Region::rectangle([1.0 + 2.0 * cell, 2.0], [0.0, 1.0]);
        let mut regions = [square, other];
        conform(&mut regions, [0.0, 2.0]);
        assert_eq!(regions[0].union(&regions[1]).polygons().len(), 1);
        assert_eq!(regions[1].bounds().unwrap().min.x, 1.0);
    }
}
