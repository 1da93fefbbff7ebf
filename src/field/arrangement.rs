//! Outlines as a planar graph: straight edges on a grid that meet only at their ends.
//!
//! Iterated snap rounding: edges are split where they cross (the crossing rounded to the grid)
//! and where a vertex comes closer than 0.8 of a cell, until nothing splits any more. An edge
//! moves by less than a cell; slivers thinner than that close. Reference: Hobby, Comput.
//! Geom. 13, 199 (1999); Halperin and Packer, Comput. Geom. 23, 209 (2002). Deviation: pairs
//! are found by a sweep over x, not by hot pixels, which costs n·(edges abreast) a round. It
//! fails (an internal error) when rounding still splits edges after 64 rounds.

use super::FieldError;

/// A vertex in cells of the grid from the lower left corner of the section.
pub(super) type Node = [i64; 2];

/// Nearest approach of a vertex to an edge, squared, in cells: beyond half a diagonal, so
/// that a rounded crossing is always caught.
const CAPTURE2: f64 = 0.64;

/// Splits segments until they meet only at their ends; sorted, each once.
pub(super) fn node(segments: Vec<[Node; 2]>) -> Result<Vec<[Node; 2]>, FieldError> {
    let mut edges = tidy(segments);
    for _ in 0..64 {
        let splits = splits(&edges);
        if splits.is_empty() {
            return Ok(edges);
        }
        edges = apply(&edges, splits);
    }
    Err(FieldError::internal("the outlines could not be noded"))
}

/// Orders the ends of each edge, drops edges without length and repeated ones.
fn tidy(mut edges: Vec<[Node; 2]>) -> Vec<[Node; 2]> {
    edges.iter_mut().for_each(|edge| edge.sort_unstable());
    edges.retain(|[a, b]| a != b);
    edges.sort_unstable();
    edges.dedup();
    edges
}

/// Points at which edges must be split, as (edge, point).
fn splits(edges: &[[Node; 2]]) -> Vec<(usize, Node)> {
    let mut splits = Vec::new();
    for (i, e) in edges.iter().enumerate() {
        let (low, high) = (e[0][1].min(e[1][1]), e[0][1].max(e[1][1]));
        // Edges are sorted by their left end, so those abreast of `e` follow it directly.
        for (j, f) in edges.iter().enumerate().skip(i + 1) {
            if f[0][0] > e[1][0] + 1 {
                break;
            }
            if f[0][1].max(f[1][1]) < low - 1 || f[0][1].min(f[1][1]) > high + 1 {
                continue;
            }
            let before = splits.len();
            splits.extend(f.iter().filter(|p| captures(e, p)).map(|p| (i, *p)));
            splits.extend(e.iter().filter(|p| captures(f, p)).map(|p| (j, *p)));
            if splits.len() == before
                && let Some(p) = crossing(e, f)
            {
                splits.extend(
                    [(i, e), (j, f)].iter().filter(|(_, g)| !g.contains(&p)).map(|(k, _)| (*k, p)),
                );
            }
        }
    }
    splits
}

/// Replaces every split edge by its parts, in order along it.
fn apply(edges: &[[Node; 2]], mut splits: Vec<(usize, Node)>) -> Vec<[Node; 2]> {
    let along = |(i, p): &(usize, Node)| {
        let [a, b] = edges[*i];
        (*i, (b[0] - a[0]) * (p[0] - a[0]) + (b[1] - a[1]) * (p[1] - a[1]), *p)
    };
    splits.sort_unstable_by_key(along);
    let mut parts = Vec::with_capacity(edges.len() + splits.len());
    let mut next = splits.iter().peekable();
    for (i, [a, b]) in edges.iter().enumerate() {
        let mut from = *a;
        while let Some((_, p)) = next.next_if(|(k, _)| *k == i) {
            parts.push([from, *p]);
            from = *p;
        }
        parts.push([from, *b]);
    }
    tidy(parts)
}

fn turn(a: Node, b: Node, c: Node) -> i64 {
    (b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0])
}

/// Whether a vertex lies so near the inside of an edge that the edge must pass through it.
fn captures([a, b]: &[Node; 2], p: &Node) -> bool {
    if p == a || p == b {
        return false;
    }
    let [dx, dz] = [b[0] - a[0], b[1] - a[1]];
    let along = dx * (p[0] - a[0]) + dz * (p[1] - a[1]);
    let length2 = dx * dx + dz * dz;
    if along <= 0 || along >= length2 {
        return false;
    }
    let cross = turn(*a, *b, *p) as f64;
    cross * cross < CAPTURE2 * length2 as f64
}

/// Where two edges cross inside both, rounded to the grid.
fn crossing([a, b]: &[Node; 2], [c, d]: &[Node; 2]) -> Option<Node> {
    let (s, t) = (turn(*a, *b, *c), turn(*a, *b, *d));
    let (u, v) = (turn(*c, *d, *a), turn(*c, *d, *b));
    if s.signum() * t.signum() >= 0 || u.signum() * v.signum() >= 0 {
        return None;
    }
    let part = u as f64 / (u - v) as f64;
    let at = |k: usize| a[k] + ((b[k] - a[k]) as f64 * part).round() as i64;
    Some([at(0), at(1)])
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_cross_becomes_four_edges() {
        let edges = node(vec![[[0, 0], [10, 10]], [[0, 10], [10, 0]]]).unwrap();
        assert_eq!(edges.len(), 4);
        assert!(edges.iter().all(|e| e.contains(&[5, 5])));
    }

    #[test]
    fn a_vertex_on_an_edge_and_overlapping_edges_are_shared() {
        let edges = node(vec![[[0, 0], [10, 0]], [[4, 0], [4, 7]], [[2, 0], [20, 0]]]).unwrap();
        assert_eq!(
            edges,
            [
                [[0, 0], [2, 0]],
                [[2, 0], [4, 0]],
                [[4, 0], [4, 7]],
                [[4, 0], [10, 0]],
                [[10, 0], [20, 0]]
            ]
        );
    }
}
