//! Capacitance against values from outside: closed forms, integral equations, finite elements.

#![allow(
    clippy::disallowed_methods,
    clippy::disallowed_types,
    clippy::print_stdout,
    clippy::print_stderr,
    reason = "tests read files and time nothing"
)]

mod accuracy;
mod closed_forms;
mod command;
mod gates;
mod geojson;
mod named;
mod reference;
mod sections;
mod shapes;
