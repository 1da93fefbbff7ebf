//! One serialisable model of a judged run and, one file each, its formats.

pub mod figures;
mod model;

pub use model::*;
