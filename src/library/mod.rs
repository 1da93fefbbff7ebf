//! Materials and processes: what the YAML files say, checked and merged.

mod model;

pub use model::*;
