//! The moving surface: who sees the sky, how species travel, how the surface moves.
//!
//! All of it is plane geometry on plain numbers: no unit, no message, no file. The surface is
//! the boundary of the solid regions that the ambient reaches; upright mirror walls bound the
//! scene left and right, the sky is above, and solid or a mirror is below.

mod advance;
mod closure;
mod directional;
mod erode;
mod exchange;
mod fair;
mod grow;
mod outline;
mod passing;
mod rebuild;
mod remesh;
mod seam;
mod surface;
mod throat;
mod transport;
mod visibility;

pub use erode::{depth_to_reach, erode, penetrate};
pub use exchange::Exchange;
pub use grow::grow;
pub use outline::{Facet, Outline};
pub use transport::{Arrival, Transport};

use crate::geom::{Point, Region};

/// How species arrive, as shares of growth on an open flat that sum to one.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Character {
    /// Share limited by the surface reaction.
    pub conformal: f64,
    /// Share arriving by line of sight, all of it sticking.
    pub directional: f64,
    /// p of cos^p φ of the directional share; `None` is a beam.
    pub exponent: Option<f64>,
    /// Tilt of the directional share, half to each side, in radians.
    pub tilt_rad: f64,
    /// Share arriving as an isotropic gas, partly re-emitted.
    pub neutral: f64,
    /// Sticking probability of the neutral share, 0 < S ≤ 1.
    pub sticking: f64,
}

/// One solid of a scene.
#[derive(Debug, Clone)]
pub struct Solid {
    /// Where it is; solids do not overlap.
    pub region: Region,
    /// Rate of its exposed surface relative to the open flat: growth on it, or its own removal.
    pub rate: f64,
}

/// What the front moves in.
#[derive(Debug, Clone)]
pub struct Scene {
    /// x of the mirror walls, left and right, in nm.
    pub walls: [f64; 2],
    /// The solids; together they reach across the scene at its bottom.
    pub solids: Vec<Solid>,
}

/// How finely the front is resolved.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Resolution {
    /// Facet length wanted on the open surface, in nm.
    pub facet_nm: f64,
    /// A throat narrower than this is closed, in nm.
    pub closure_width_nm: f64,
}

/// A throat that closed during growth.
#[derive(Debug, Clone, PartialEq)]
pub struct Closure {
    /// Open-field thickness at closure, in nm.
    pub thickness_nm: f64,
    /// Middle of the throat where it closed.
    pub throat: Point,
    /// The void that it shut off, seam taken away; empty when nothing remained.
    pub void: Region,
    /// Seam left where fronts met: a line from its lowest to its highest point, if any.
    pub seam: Vec<Point>,
}

/// A throat still open at the end of growth.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Throat {
    /// Its middle.
    pub middle: Point,
    /// Its width, in nm.
    pub width_nm: f64,
}

/// What a growth leaves.
#[derive(Debug, Clone, PartialEq)]
pub struct Growth {
    /// The film, seams included.
    pub film: Region,
    /// Throats that closed, in order of thickness.
    pub closures: Vec<Closure>,
    /// The narrowest place of each space that is still open.
    pub throats: Vec<Throat>,
}

/// What a removal leaves.
#[derive(Debug, Clone, PartialEq)]
pub struct Erosion {
    /// What each solid of the scene lost, in the scene's order.
    pub removed: Vec<Region>,
}

/// Why a front could not be moved.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum FrontError {
    /// The exchange of species did not converge.
    #[error("radiosity residual {residual:e} after {iterations} iterations")]
    NotConverged {
        /// Relative residual.
        residual: f64,
        /// Iterations done.
        iterations: usize,
    },
    /// The front needs more facets than the limit.
    #[error("{facets} facets, limit {limit}")]
    TooFine {
        /// Facets needed.
        facets: usize,
        /// Facets allowed.
        limit: usize,
    },
    /// The front lost its consistency; an internal error.
    #[error("inconsistent front: {0}")]
    Inconsistent(&'static str),
}
