//! Rules held against whole flows: the flows of their pages, legitimate ones, ones with
//! mistakes, and shuffled ones.

#![allow(
    clippy::disallowed_methods,
    clippy::disallowed_types,
    clippy::print_stdout,
    clippy::print_stderr,
    reason = "tests read files and time nothing"
)]

mod corners;
mod harness;
mod legitimate;
mod mistakes;
mod pages;
mod registry;
mod shuffled;
