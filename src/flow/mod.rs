//! A flow with every name, unit and recipe resolved.

mod model;
mod quantity;
mod resolve;

pub use model::*;
pub use quantity::{Dimension, Quantity};
pub use resolve::{resolve, uses};
