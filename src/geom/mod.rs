//! Plane geometry: points, regions (sets of polygons with holes) and their booleans.
//!
//! x runs across the lines, z upward, lengths in nanometres. Every vertex of a [`Region`]
//! lies on the grid of [`crate::num::tolerance::GRID_PER_NM`].

mod conform;
mod distance;
mod hairs;
mod inside;
mod point;
mod region;
mod scanline;

pub use conform::conform;
pub use hairs::shaved;
pub use inside::Inside;
pub use point::{Bounds, Point};
pub use region::{Polygon, Region};
pub use scanline::{Intervals, covered};
