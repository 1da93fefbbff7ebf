//! What a flow is held against: one rule a file, one line each in the registry.

mod finding;

pub use finding::Finding;
