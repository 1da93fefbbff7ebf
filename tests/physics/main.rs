//! Outside checks of growth and removal: closed forms, converged integral equations, and two
//! independent methods. Each test names its source.

mod buffers;
mod dense_array;
mod flux;
mod monte_carlo;
mod moving;
mod scenes;
