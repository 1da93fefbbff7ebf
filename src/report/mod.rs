//! One serialisable model of a judged run and, one file each, its formats.

mod model;

pub use model::*;
