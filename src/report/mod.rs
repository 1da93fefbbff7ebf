//! One serialisable model of a judged run and, one file each, its formats.

mod build;
pub mod capacitance;
mod columns;
pub mod drawing;
pub mod explain;
pub mod figures;
pub mod geojson;
pub mod html;
mod json;
pub mod library;
pub mod messages;
mod model;
mod paint;
pub mod text;

pub use model::*;
