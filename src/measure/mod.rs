//! Quantities of a traced cell, each with its numerical error; one file a quantity.

mod model;

pub use model::*;
