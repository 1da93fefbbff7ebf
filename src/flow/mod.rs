//! A flow with every name, unit and recipe resolved.

mod model;
mod quantity;

pub use model::*;
pub use quantity::{Dimension, Quantity};
