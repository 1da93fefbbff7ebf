//! The flow language, from text to a resolved flow.

#![allow(
    clippy::disallowed_methods,
    clippy::disallowed_types,
    clippy::print_stdout,
    clippy::print_stderr,
    reason = "tests read files and time nothing"
)]

mod layout;
mod mistakes;
mod page;
mod read;
mod resolved;
