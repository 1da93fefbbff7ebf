//! Plane geometry: points, regions (sets of polygons with holes) and their booleans.
//!
//! x runs across the lines, z upward, lengths in nanometres. Every vertex of a [`Region`]
//! lies on the grid of [`crate::num::tolerance::GRID_PER_NM`].

mod point;
mod region;

pub use point::{Bounds, Point};
pub use region::{Polygon, Region};
