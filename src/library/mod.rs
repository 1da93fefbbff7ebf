//! Materials and processes: what the YAML files say, checked and merged.

mod built_in;
mod facts;
mod fields;
mod file;
mod merge;
mod model;
mod numbers;
mod read_material;
mod read_process;
mod words;
mod yaml;

pub use built_in::FILES as BUILT_IN_FILES;
pub use facts::{Fact, Told};
pub use file::{KnownRule, LibraryFile, MAX_SHOWN, Placed, Reference, RuleEntry, parse};
pub use model::*;
pub use numbers::{ARRIVAL_NUMBERS, Bounds, MATERIAL_NUMBERS, NumberKey, PROCESS_NUMBERS, Unit};
pub use words::{GENERAL_CAUTION, HAZARDS, Hazard};
pub use yaml::{MAX_BYTES, MAX_DEPTH, MAX_NODES, Place};
