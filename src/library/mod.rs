//! Materials and processes: what the YAML files say, checked and merged.

mod built_in;
mod fields;
mod file;
mod merge;
mod model;
mod numbers;
mod yaml;

pub use built_in::FILES as BUILT_IN_FILES;
pub use file::{LibraryFile, MAX_DEFECTS_SHOWN, Placed, Reference, RuleEntry, parse};
pub use model::*;
pub use numbers::{ARRIVAL_NUMBERS, Bounds, MATERIAL_NUMBERS, NumberKey, PROCESS_NUMBERS, Unit};
pub use yaml::{MAX_BYTES, MAX_DEPTH, MAX_NODES, Place};

/// The hazards that a material or process may name.
pub const HAZARDS: &[&str] = &[
    "hf",
    "silane",
    "ozone",
    "fluorine",
    "chlorine",
    "decomposition",
    "ruthenium-oxide",
    "solvent",
    "slurry",
    "vacuum",
    "heat",
];
