//! Step by step through a flow. The only place where units become plain numbers.

mod blueprint;
mod dose;
mod draw;
mod error;
mod fold;
#[cfg(test)]
mod hand;
mod hermetic;
mod morphology;
mod operation;
mod passage;
mod seam;
mod section;
mod simulator;
mod spaces;
mod steps;
mod surface;
#[cfg(test)]
mod tests;
mod trace;

pub use error::SimError;
pub use section::{Body, Drawn, DrawnLine, Origin, Seam, Section, Space};
pub use simulator::{Grain, Simulator, run};
pub use trace::{Cell, CellTrace, Event, Exposure, Stage};
