//! Kernels on plain `f64`, constants of nature, and every numerical tolerance of the program in one place.

pub mod constants;
pub mod tolerance;
