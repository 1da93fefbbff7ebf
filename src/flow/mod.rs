//! A flow with every name, unit and recipe resolved.

mod model;
mod quantity;
mod resolve;
mod step;
mod tolerances;
mod wafer;

pub use model::*;
pub use quantity::{Dimension, Quantity};
pub use resolve::{resolve, uses};
pub use step::*;
pub use tolerances::Tolerance;
pub use wafer::*;
