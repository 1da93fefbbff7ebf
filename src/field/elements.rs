//! Second-order triangles: nodes, stiffness, gradients.
//!
//! Nodes 0–2 of a triangle are its vertices, nodes 3–5 the middles of the sides opposite
//! them. Products of gradients are quadratic, so the rule of the three side middles is exact.

use super::domain::Mesh;
use super::triangulation::NONE;

/// Values at the six nodes of a triangle.
pub(super) type Local = [f64; 6];

/// Nodes of a mesh: its vertices, then the middles of its sides.
pub(super) struct Nodes {
    /// The six nodes of each triangle.
    pub of: Vec<[u32; 6]>,
    /// How many there are.
    pub count: usize,
}

impl Nodes {
    /// Numbers the nodes of a mesh.
    pub fn new(mesh: &Mesh) -> Self {
        let mut count = mesh.points.len() as u32;
        let mut of: Vec<[u32; 6]> = Vec::with_capacity(mesh.triangles.len());
        for (t, [a, b, c]) in mesh.triangles.iter().enumerate() {
            let mut nodes = [*a, *b, *c, NONE, NONE, NONE];
            for side in 0..3 {
                let other = mesh.neighbours[t][side];
                nodes[3 + side] = if other == NONE || other as usize > t {
                    count += 1;
                    count - 1
                } else {
                    let facing =
                        mesh.neighbours[other as usize].iter().position(|n| *n == t as u32);
                    of[other as usize][3 + facing.expect("neighbours know each other")]
                };
            }
            of.push(nodes);
        }
        Self { of, count: count as usize }
    }
}

/// The three nodes on a side.
pub(super) fn side_nodes(side: usize) -> [usize; 3] {
    [(side + 1) % 3, (side + 2) % 3, 3 + side]
}

/// Node values of the hat function of a vertex, linear in the triangle.
pub(super) fn hat(vertex: usize) -> Local {
    let mut values = [0.0; 6];
    values[vertex] = 1.0;
    values[3 + (vertex + 1) % 3] = 0.5;
    values[3 + (vertex + 2) % 3] = 0.5;
    values
}

/// The shape of a triangle: its area and the gradients of its six functions at the middles
/// of its sides.
pub(super) struct Element {
    /// Area, in nm².
    pub area: f64,
    gradients: [[[f64; 2]; 6]; 3],
}

impl Element {
    /// The element of a triangle.
    pub fn new(mesh: &Mesh, t: usize) -> Self {
        let corners = mesh.corners(t);
        let area2 = (corners[1] - corners[0]).cross(corners[2] - corners[0]);
        // Gradient of the barycentric coordinate of each vertex.
        let slope = [0, 1, 2].map(|k| {
            let side = corners[(k + 2) % 3] - corners[(k + 1) % 3];
            [-side.z / area2, side.x / area2]
        });
        let gradients = [0, 1, 2].map(|q| {
            let at = |k: usize| if k == q { 0.0 } else { 0.5 };
            let mut gradients = [[0.0; 2]; 6];
            for k in 0..3 {
                let (i, j) = ((k + 1) % 3, (k + 2) % 3);
                for axis in 0..2 {
                    gradients[k][axis] = (4.0 * at(k) - 1.0) * slope[k][axis];
                    gradients[3 + k][axis] =
                        4.0 * (at(i) * slope[j][axis] + at(j) * slope[i][axis]);
                }
            }
            gradients
        });
        Self { area: 0.5 * area2, gradients }
    }

    /// ∫ ∇φ_a · ∇φ_b over the triangle.
    pub fn stiffness(&self) -> [Local; 6] {
        let entry = |a: usize, b: usize| {
            let products = self.gradients.map(|g| g[a][0] * g[b][0] + g[a][1] * g[b][1]);
            self.integral(products)
        };
        std::array::from_fn(|a| std::array::from_fn(|b| entry(a, b)))
    }

    /// Gradient at the three side middles of what has these node values.
    pub fn gradient(&self, values: &Local) -> [[f64; 2]; 3] {
        self.gradients.map(|g| {
            g.iter().zip(values).fold([0.0; 2], |[x, z], (g, v)| [x + g[0] * v, z + g[1] * v])
        })
    }

    /// Integral over the triangle of what has these values at the side middles.
    pub fn integral(&self, at_middles: [f64; 3]) -> f64 {
        self.area / 3.0 * at_middles.iter().sum::<f64>()
    }
}
