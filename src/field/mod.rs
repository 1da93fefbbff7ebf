//! Capacitance of a section, between proofs: Laplace's equation by finite elements, primal
//! and dual on one triangulation.
//!
//! Plain numbers only: permittivities are relative, results are C′/ε0 times ε0 in aF/µm.

mod arrangement;
mod assembly;
mod bounds;
mod delaunay;
mod domain;
mod dual;
mod elements;
mod error;
mod mixture;
mod outline;
mod potential;
mod primal;
mod refinement;
mod section;
mod solve;
mod triangulation;

use crate::geom::Region;

pub use error::FieldError;
pub use potential::equipotentials;
pub use solve::{solve, solve_variants};

/// Vacuum permittivity in aF/µm (CODATA 2018: 8.8541878128e-12 F/m).
pub const EPSILON_0_AF_PER_UM: f64 = 8.854_187_812_8;

/// One body of a section; what no body covers is vacuum, and a later body wins.
#[derive(Debug, Clone)]
pub struct Body {
    /// Where it is.
    pub region: Region,
    /// What it is.
    pub role: Role,
}

/// What a body is to the field.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Role {
    /// A dielectric of this relative permittivity.
    Dielectric(f64),
    /// Held at the potential of this electrode; same index, same conductor.
    Electrode(usize),
    /// A conductor with no net charge, its potential free; same index, same conductor.
    Floating(usize),
}

/// The upper or lower edge of a section.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Edge {
    /// The half-plane beyond, of the material along the edge, belongs to the problem.
    Open,
    /// A mirror: no flux through it.
    Mirror,
}

/// A section to solve; left and right edges are mirrors.
#[derive(Debug, Clone)]
pub struct Problem {
    /// Left and right edge, in nm.
    pub x: [f64; 2],
    /// Bottom and top edge, in nm.
    pub z: [f64; 2],
    /// The upper edge.
    pub top: Edge,
    /// The lower edge.
    pub bottom: Edge,
    /// The bodies, later ones over earlier ones.
    pub bodies: Vec<Body>,
    /// How many electrodes there are.
    pub electrodes: usize,
}

/// A square matrix by rows.
pub type Matrix = Vec<Vec<f64>>;

/// Maxwell's capacitance matrix with proven bounds, in aF/µm; diagonal positive.
#[derive(Debug, Clone, PartialEq)]
pub struct Capacitance {
    /// The mean of the bounds' energies, far closer than either.
    pub value: Matrix,
    /// No entry of the true matrix is lower.
    pub low: Matrix,
    /// No entry of the true matrix is higher.
    pub high: Matrix,
    /// Triangles of the last mesh.
    pub triangles: usize,
    /// Whether the wanted accuracy was reached.
    pub converged: bool,
}
