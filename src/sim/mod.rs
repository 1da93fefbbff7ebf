//! Step by step through a flow. The only place where units become plain numbers.

mod section;
mod trace;

pub use section::{Body, Drawn, DrawnLine, Origin, Seam, Section};
pub use trace::{Cell, CellTrace, Event, Exposure, Stage};
