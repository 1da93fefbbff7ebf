//! One serialisable model of a judged run and, one file each, its formats.

mod build;
pub mod capacitance;
pub(crate) mod columns;
mod csv;
pub mod drawing;
pub mod explain;
pub mod figures;
pub mod geojson;
pub mod html;
mod json;
mod junit;
pub mod library;
pub(crate) mod markdown;
pub mod messages;
mod model;
pub(crate) mod paint;
pub mod rows;
mod sarif;
pub mod text;
mod words;

pub use json::schema;
pub use model::*;
