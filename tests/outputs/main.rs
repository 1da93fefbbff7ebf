//! What leaves the program: formats held against their standards and snapshots, pictures,
//! comparisons of real revisions.

#![allow(
    clippy::disallowed_methods,
    clippy::disallowed_types,
    clippy::print_stdout,
    clippy::print_stderr,
    reason = "tests read files and time nothing"
)]

mod comparisons;
mod drawings;
mod files;
mod formats;
mod hand;
mod sarif;
mod schema;
mod small;
