//! Where the gap is: the element share ∫ |σ − ε∇u|²/ε of the difference of the bounds.
//!
//! Summed over all triangles it is exactly the gap of the pair (u, σ) (Prager and Synge, Q.
//! Appl. Math. 5, 241 (1947)), so it needs no constant. Triangles are marked until they hold
//! a given share of the gap (Dörfler, SIAM J. Numer. Anal. 33, 1106 (1996)).

use faer::Mat;

use super::assembly::{Condensed, System};
use super::bounds::Bounds;
use super::delaunay::Wanted;
use super::domain::Mesh;
use super::elements::{Element, Nodes};

/// Adds each triangle's share of the gaps of all electrodes, each gap over its capacitance.
pub(super) fn add_shares(
    nodes: &Nodes,
    elements: &[Element],
    permittivity: &[f64],
    [primal, dual]: [(&System, &Condensed); 2],
    bounds: &Bounds,
    shares: &mut [f64],
) {
    let potential = &primal.1.fields * &bounds.potentials;
    let stream = &dual.1.fields * &bounds.fluxes;
    let field = |of: &System, t: usize, fields: &Mat<f64>, coefficients: &Mat<f64>, i| {
        elements[t].gradient(&of.local(nodes, t, fields, coefficients, i))
    };
    for (t, share) in shares.iter_mut().enumerate() {
        let epsilon = permittivity[t];
        for i in 0..bounds.upper.ncols() {
            let u = field(primal.0, t, &potential, &bounds.potentials, i);
            let psi = field(dual.0, t, &stream, &bounds.fluxes, i);
            let miss = [0, 1, 2].map(|q| {
                let x = psi[q][1] - epsilon * u[q][0];
                let z = -psi[q][0] - epsilon * u[q][1];
                (x * x + z * z) / epsilon
            });
            let scale = bounds.upper[(i, i)];
            if scale > 0.0 {
                *share += elements[t].integral(miss) / scale;
            }
        }
    }
}

/// Asks for smaller triangles where most of the gap is: half as long, at singular vertices a
/// quarter. `corners` counts the vertices of the outlines, which come first.
pub(super) fn mark(mesh: &Mesh, corners: &[bool], shares: &[f64], part: f64, wanted: &mut Wanted) {
    let mut order: Vec<usize> = (0..shares.len()).collect();
    order.sort_by(|a, b| shares[*b].total_cmp(&shares[*a]));
    let goal = part * shares.iter().sum::<f64>();
    let mut sum = 0.0;
    for t in order {
        if sum >= goal {
            break;
        }
        sum += shares[t];
        let vertices = mesh.triangles[t].map(|v| v as usize);
        let [a, b, c] = mesh.corners(t);
        let longest = a.distance(b).max(b.distance(c)).max(c.distance(a));
        let singular = vertices.iter().any(|v| corners.get(*v) == Some(&true));
        let size = longest * if singular { 0.26 } else { 0.51 };
        for v in vertices {
            wanted.size[v] = wanted.size[v].min(size);
        }
    }
}
