//! One serialisable model of a judged run and, one file each, its formats.

pub mod capacitance;
mod columns;
pub mod figures;
pub mod geojson;
pub mod messages;
mod model;
mod paint;
pub mod text;

pub use model::*;
