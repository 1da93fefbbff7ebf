//! Load, run, judge: what `check` does, for every caller.

mod corners;
mod load;
mod refine;
mod run;

pub use load::{LoadError, Loaded, Messages, load};
pub use run::{Judged, Options, Run, RunError, judge, trace};
