//! From a section to the edges that its mesh must keep: outlines noded, edges between equal
//! zones dropped, chains thinned.
//!
//! Thinning is Douglas and Peucker's (Cartographica 10, 112 (1973)) between the vertices where
//! outlines fork or end. Where a thinned outline would cross another, all stay as they are.
//! The bounds of the solver are proofs for the outlines that leave this file.

use std::collections::BTreeMap;

use super::arrangement::{self, Node};
use super::section::Section;
use super::triangulation::Triangulation;
use super::{FieldError, Role};

/// Triangulates a section with no more edges than matter to any of the variants.
///
/// `roles` holds one list a variant, one role a zone; outlines move by at most `tolerance`
/// nm beyond the noding grid.
pub(super) fn triangulate(
    section: &Section,
    roles: &[Vec<Role>],
    tolerance: f64,
) -> Result<Triangulation, FieldError> {
    let noded = arrangement::node(segments(section))?;
    let all = Triangulation::new(section, &noded)?;
    let differ = |a: usize, b: usize| roles.iter().any(|roles| roles[a] != roles[b]);
    let kept = all.edges_between(differ);
    let chains = thin(&kept, tolerance / section.cell);
    let thinned = arrangement::node(chains.clone())?;
    // Chains that met were split or fell onto each other: then thinning was too bold.
    let edges = if thinned.len() == chains.len() { thinned } else { kept };
    Triangulation::new(section, &edges)
}

/// All outlines and the frame, in cells from the lower left corner.
fn segments(section: &Section) -> Vec<[Node; 2]> {
    let cells = |v: f64| (v / section.cell).round() as i64;
    let node =
        |p: crate::geom::Point| [cells(p.x - section.origin.x), cells(p.z - section.origin.z)];
    let [w, h] = section.size.map(cells);
    let frame = [[0, 0], [w, 0], [w, h], [0, h], [0, 0]];
    let outlines = section.shapes.iter().flat_map(|s| s.region.edges());
    outlines
        .map(|(a, b)| [node(a), node(b)])
        .chain(frame.windows(2).map(|ends| [ends[0], ends[1]]))
        .collect()
}

/// Replaces chains of edges between forks by chains with fewer vertices.
fn thin(edges: &[[Node; 2]], tolerance: f64) -> Vec<[Node; 2]> {
    let mut at: BTreeMap<Node, Vec<usize>> = BTreeMap::new();
    for (i, edge) in edges.iter().enumerate() {
        edge.iter().for_each(|end| at.entry(*end).or_default().push(i));
    }
    let mut used = vec![false; edges.len()];
    let mut thinned = Vec::new();
    let mut walk = |from: Node, first: usize| {
        let mut chain = vec![from];
        let (mut edge, mut end) = (first, from);
        while !std::mem::replace(&mut used[edge], true) {
            end = if edges[edge][0] == end { edges[edge][1] } else { edges[edge][0] };
            chain.push(end);
            match at[&end][..] {
                [a, b] => edge = if a == edge { b } else { a },
                _ => break,
            }
        }
        if chain.len() > 1 {
            simplify(&chain, tolerance, &mut thinned);
        }
    };
    for (node, incident) in at.iter().filter(|(_, incident)| incident.len() != 2) {
        incident.iter().for_each(|edge| walk(*node, *edge));
    }
    // What is left are closed rings; each starts at its first vertex in order.
    for (node, incident) in &at {
        walk(*node, incident[0]);
    }
    thinned
}

/// Appends the edges of a chain without the vertices nearer than `tolerance` to its chords.
fn simplify(chain: &[Node], tolerance: f64, out: &mut Vec<[Node; 2]>) {
    let (first, last) = (chain[0], chain[chain.len() - 1]);
    let far = |p: &Node| {
        let point = |n: Node| crate::geom::Point::new(n[0] as f64, n[1] as f64);
        point(*p).distance_to_segment(point(first), point(last))
    };
    let inner = chain.iter().enumerate().skip(1).take(chain.len().saturating_sub(2));
    let split = inner.map(|(i, p)| (i, far(p))).max_by(|a, b| a.1.total_cmp(&b.1));
    match split {
        // A ring's two halves must not fall onto each other, however small it is.
        Some((at, distance)) if distance > tolerance || first == last => {
            simplify(&chain[..=at], tolerance, out);
            simplify(&chain[at..], tolerance, out);
        }
        _ => out.push([first, last]),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn collinear_vertices_go_and_corners_stay() {
        let ring = [[0, 0], [5, 0], [10, 0], [10, 10], [4, 10], [0, 10]];
        let edges: Vec<_> = (0..6).map(|i| [ring[i], ring[(i + 1) % 6]]).collect();
        let mut thinned = thin(&edges, 0.1);
        thinned.iter_mut().for_each(|e| e.sort_unstable());
        assert_eq!(thinned.len(), 4, "{thinned:?}");
    }
}
