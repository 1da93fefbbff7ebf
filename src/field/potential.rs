//! Lines of equal potential, for pictures.
//!
//! The primal solution on one evenly fine mesh, with one electrode at one volt and all others at
//! zero; each second-order triangle is cut in four first-order ones, and each level is followed
//! through them (marching triangles). Lines are as good as a picture needs; figures come
//! from [`super::solve`]. Cost: one solution of some ten thousand unknowns.

use std::collections::BTreeMap;

use super::delaunay::{self, Wanted};
use super::domain::Domain;
use super::section::{self, Section};
use super::solve::{Level, zone_roles};
use super::{FieldError, Problem, Role, outline};
use crate::geom::Point;
use crate::num::tolerance::{FIELD_FLOOR, FIELD_OUTLINE, FIELD_TRIANGLES};

/// Side of the largest triangle over the shorter side of the section.
const FINENESS: f64 = 0.025;

/// The four first-order triangles of a second-order one, by local nodes.
const QUARTERS: [[usize; 3]; 4] = [[0, 5, 4], [1, 3, 5], [2, 4, 3], [3, 4, 5]];

/// Lines at which the potential is one of `levels` (between 0 and 1) when `electrode` is at one
/// volt and all others at zero; in nm, in the coordinates of the problem.
///
/// # Errors
/// As [`super::solve`].
pub fn equipotentials(
    problem: &Problem,
    electrode: usize,
    levels: &[f64],
) -> Result<Vec<Vec<Point>>, FieldError> {
    let roles: Vec<Role> = problem.bodies.iter().map(|body| body.role).collect();
    let section = section::prepare(problem, 1.0)?;
    let roles = zone_roles(problem, &roles)?;
    let all = outline::triangulate(
        &section,
        std::slice::from_ref(&roles),
        FIELD_OUTLINE * section.scale,
    )?;
    let domain = Domain::new(&section, &all, &roles, problem.electrodes)?;
    let mut mesh = domain.mesh.clone();
    let mut wanted = Wanted {
        size: vec![FINENESS * section.scale; mesh.points.len()],
        tip: vec![f64::INFINITY; mesh.points.len()],
        floor: FIELD_FLOOR * section.scale,
        limit: FIELD_TRIANGLES,
    };
    if !delaunay::refine(&mut mesh, &mut wanted) {
        return Err(FieldError::MeshTooLarge(FIELD_TRIANGLES));
    }
    let level = Level::new(&domain, &mesh);
    let permittivity = level.permittivity(&mesh, &roles);
    let (primal, _, bounds) = level.solve(&domain, &permittivity, problem.electrodes)?;
    let potential = &primal.fields * &bounds.potentials;
    let value =
        |t: usize| level.primal.local(&level.nodes, t, &potential, &bounds.potentials, electrode);
    let mut lines = Vec::new();
    for &at in levels {
        let mut pieces = Vec::new();
        for t in 0..mesh.triangles.len() {
            let values = value(t);
            let points = nodes_of(mesh.corners(t));
            for quarter in QUARTERS {
                let corner = |k: usize| {
                    let local = quarter[k];
                    (level.nodes.of[t][local], points[local], values[local])
                };
                pieces.extend(crossing([corner(0), corner(1), corner(2)], at));
            }
        }
        lines.extend(joined(pieces));
    }
    Ok(lines.into_iter().map(|line| moved(line, &section)).collect())
}

fn moved(line: Vec<Point>, section: &Section) -> Vec<Point> {
    line.into_iter().map(|p| p + section.origin).collect()
}

fn nodes_of([a, b, c]: [Point; 3]) -> [Point; 6] {
    let middle = |p: Point, q: Point| (p + q) * 0.5;
    [a, b, c, middle(b, c), middle(c, a), middle(a, b)]
}

/// A point on an edge between two nodes: the edge knows it from both of its triangles.
type Cut = ([u32; 2], Point);

/// Where a level crosses a first-order triangle.
fn crossing(corners: [(u32, Point, f64); 3], level: f64) -> Option<[Cut; 2]> {
    let cut = |a: usize, b: usize| {
        // Both triangles of an edge must find the same point: in order of node.
        let (a, b) = if corners[a].0 < corners[b].0 { (a, b) } else { (b, a) };
        let ((m, p, u), (n, q, v)) = (corners[a], corners[b]);
        ((u < level) != (v < level)).then(|| ([m, n], p + (q - p) * ((level - u) / (v - u))))
    };
    let cuts: Vec<Cut> = [cut(0, 1), cut(1, 2), cut(2, 0)].into_iter().flatten().collect();
    <[Cut; 2]>::try_from(cuts).ok()
}

/// Pieces joined where they share a cut; every cut belongs to one piece or two.
fn joined(pieces: Vec<[Cut; 2]>) -> Vec<Vec<Point>> {
    let mut at: BTreeMap<[u32; 2], Vec<usize>> = BTreeMap::new();
    for (index, piece) in pieces.iter().enumerate() {
        piece.iter().for_each(|(edge, _)| at.entry(*edge).or_default().push(index));
    }
    // Open lines begin at a cut of one piece only; what is left after them is closed.
    let ends = (0..pieces.len()).flat_map(|piece| [(piece, 0), (piece, 1)]);
    let opens = ends.clone().filter(|&(piece, end)| at[&pieces[piece][end].0].len() == 1);
    let mut used = vec![false; pieces.len()];
    let mut lines = Vec::new();
    for (start, from) in opens.chain(ends) {
        if used[start] {
            continue;
        }
        let mut line = vec![pieces[start][from].1];
        let (mut piece, mut end) = (start, 1 - from);
        loop {
            used[piece] = true;
            let (edge, point) = pieces[piece][end];
            line.push(point);
            let Some(next) = at[&edge].iter().copied().find(|&other| !used[other]) else { break };
            end = usize::from(pieces[next][0].0 == edge);
            piece = next;
        }
        lines.push(line);
    }
    lines
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::field::{Body, Edge};
    use crate::geom::Region;

    #[test]
    fn between_plates_the_lines_are_level_and_evenly_spaced() {
        // Plates at z 0 and 10 with a uniform dielectric: the potential falls evenly (Gauss).
        let plate = |z: [f64; 2], electrode| Body {
            region: Region::rectangle([0.0, 20.0], z),
            role: Role::Electrode(electrode),
        };
        let problem = Problem {
            x: [0.0, 20.0],
            z: [-1.0, 11.0],
            top: Edge::Mirror,
            bottom: Edge::Mirror,
            bodies: vec![plate([-1.0, 0.0], 0), plate([10.0, 11.0], 1)],
            electrodes: 2,
        };
        let lines = equipotentials(&problem, 0, &[0.25, 0.5]).unwrap();
        assert_eq!(lines.len(), 2, "one line a level, whole");
        for (line, z) in lines.iter().zip([7.5, 5.0]) {
            assert!(line.iter().all(|p| (p.z - z).abs() < 1e-5), "{line:?}");
            let x = |p: &Point| p.x;
            let across = line.iter().map(x).fold(f64::MIN, f64::max)
                - line.iter().map(x).fold(f64::MAX, f64::min);
            assert!((across - 20.0).abs() < 1e-4);
        }
    }
}
