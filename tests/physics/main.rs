//! Outside checks of growth and removal: closed forms, converged integral equations, and two
//! independent methods. Each test names its source.

#![allow(
    clippy::disallowed_methods,
    clippy::disallowed_types,
    clippy::print_stdout,
    clippy::print_stderr,
    reason = "tests read files and time nothing"
)]

mod buffers;
mod convergence;
mod dense_array;
mod flux;
mod monte_carlo;
mod moving;
mod rows;
mod scenes;
