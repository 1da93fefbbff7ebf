//! Kernels on plain `f64`, and every numerical tolerance of the program in one place.

pub mod tolerance;
