//! The coarsest mesh: the constrained Delaunay triangulation of the outlines (spade), each
//! triangle with the zone that it lies in.
//!
//! Zones are flooded across edges that are not outlines, with one point test a face: the last
//! shape that holds the middle of its largest triangle. Cost: n log n, plus faces × outlines.

use spade::{ConstrainedDelaunayTriangulation, Point2, Triangulation as _};

use super::FieldError;
use super::arrangement::Node;
use super::section::Section;
use crate::geom::Point;

/// No triangle on the other side of an edge.
pub(super) const NONE: u32 = u32::MAX;

/// Triangles of the whole section, conductors included; coordinates in nm from its lower
/// left corner. Side k of a triangle is opposite its vertex k.
pub(super) struct Triangulation {
    /// Vertices.
    pub points: Vec<Point>,
    /// Vertices of each triangle, counter-clockwise.
    pub triangles: Vec<[u32; 3]>,
    /// The triangle across each side, or [`NONE`].
    pub neighbours: Vec<[u32; 3]>,
    /// Whether each side is part of an outline.
    pub outline: Vec<[bool; 3]>,
    /// Zone of each triangle.
    pub zone: Vec<usize>,
    nodes: Vec<Node>,
}

impl Triangulation {
    /// Triangulates a section along noded edges.
    pub fn new(section: &Section, edges: &[[Node; 2]]) -> Result<Self, FieldError> {
        let mut nodes: Vec<Node> = edges.iter().flatten().copied().collect();
        nodes.sort_unstable();
        nodes.dedup();
        let index = |node: &Node| nodes.binary_search(node).expect("every end is a node");
        let ends = edges.iter().map(|edge| edge.map(|end| index(&end))).collect();
        let vertices = nodes.iter().map(|n| Point2::new(n[0] as f64, n[1] as f64)).collect();
        let mut conflicts = 0;
        let cdt = ConstrainedDelaunayTriangulation::<Point2<f64>>::try_bulk_load_cdt(
            vertices,
            ends,
            |_| conflicts += 1,
        )
        .map_err(|e| FieldError::internal(format!("triangulation: {e}")))?;
        if conflicts > 0 || cdt.num_vertices() != nodes.len() {
            return Err(FieldError::internal("noded outlines still cross"));
        }
        let mut mesh = Self {
            points: nodes
                .iter()
                .map(|n| Point::new(n[0] as f64 * section.cell, n[1] as f64 * section.cell))
                .collect(),
            triangles: Vec::with_capacity(cdt.num_inner_faces()),
            neighbours: Vec::with_capacity(cdt.num_inner_faces()),
            outline: Vec::with_capacity(cdt.num_inner_faces()),
            zone: Vec::new(),
            nodes,
        };
        for face in cdt.inner_faces() {
            let sides = face.adjacent_edges();
            // The outer face has index 0 and comes first among all faces.
            let across = |k: usize| {
                let other = sides[k].rev().face();
                if other.is_outer() { NONE } else { other.fix().index() as u32 - 1 }
            };
            mesh.triangles.push(sides.map(|side| side.from().fix().index() as u32));
            // Side k runs from vertex k + 1 to vertex k + 2.
            mesh.neighbours.push([across(1), across(2), across(0)]);
            mesh.outline.push([1, 2, 0].map(|k| sides[k].is_constraint_edge()));
        }
        mesh.zone = mesh.flood(section);
        Ok(mesh)
    }

    /// Outline edges whose two sides `differ`, and the frame.
    pub fn edges_between(&self, differ: impl Fn(usize, usize) -> bool) -> Vec<[Node; 2]> {
        let mut edges = Vec::new();
        for (t, vertices) in self.triangles.iter().enumerate() {
            for side in 0..3 {
                let other = self.neighbours[t][side];
                let kept = other == NONE
                    || ((other as usize) > t
                        && self.outline[t][side]
                        && differ(self.zone[t], self.zone[other as usize]));
                if kept {
                    let end = |k: usize| self.nodes[vertices[(side + k) % 3] as usize];
                    edges.push([end(1), end(2)]);
                }
            }
        }
        edges
    }

    /// Corners of a triangle.
    pub fn corners(&self, t: usize) -> [Point; 3] {
        self.triangles[t].map(|v| self.points[v as usize])
    }

    fn flood(&self, section: &Section) -> Vec<usize> {
        let boxes: Vec<_> = section.shapes.iter().map(|s| s.region.bounds()).collect();
        let zone_at = |p: Point| {
            let p = p + section.origin;
            let inside =
                |(shape, bounds): &(&super::section::Shape, &Option<crate::geom::Bounds>)| {
                    let near = bounds.is_some_and(|b| {
                        b.min.x <= p.x && p.x <= b.max.x && b.min.z <= p.z && p.z <= b.max.z
                    });
                    near && shape.region.contains(p)
                };
            let shapes = section.shapes.iter().zip(&boxes);
            shapes.rev().find(inside).map_or(section.zones - 1, |(shape, _)| shape.zone)
        };
        let mut zone = vec![usize::MAX; self.triangles.len()];
        for start in 0..self.triangles.len() {
            if zone[start] != usize::MAX {
                continue;
            }
            let mut face = vec![start];
            zone[start] = 0;
            let mut next = 0;
            while let Some(&t) = face.get(next) {
                next += 1;
                for side in 0..3 {
                    let other = self.neighbours[t][side];
                    if other != NONE && !self.outline[t][side] && zone[other as usize] == usize::MAX
                    {
                        zone[other as usize] = 0;
                        face.push(other as usize);
                    }
                }
            }
            let area = |t: &usize| {
                let [a, b, c] = self.corners(*t);
                (b - a).cross(c - a)
            };
            let largest = face.iter().copied().max_by(|a, b| area(a).total_cmp(&area(b)));
            let [a, b, c] = self.corners(largest.unwrap_or(start));
            let found = zone_at((a + b + c) * (1.0 / 3.0));
            face.iter().for_each(|t| zone[*t] = found);
        }
        zone
    }
}
