//! Several runs of the same pipeline, set beside each other.

pub mod compare;
