//! The sections under `tests/reference/sections`, by name.

use std::path::Path;

use gapwright::field::Role;
use gapwright::library::Library;
use gapwright::report::geojson::{NamedProblem, read};

/// Reads a section. What the file calls `floating` is held by nothing.
pub fn section(name: &str) -> NamedProblem {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/reference/sections");
    let text = std::fs::read_to_string(folder.join(format!("{name}.geojson"))).unwrap();
    let mut named = read(&text).unwrap().problem(&Library::built_in()).unwrap();
    if let Some(at) = named.electrodes.iter().position(|name| name == "floating") {
        named.electrodes.remove(at);
        named.problem.electrodes -= 1;
        for body in &mut named.problem.bodies {
            body.role = match body.role {
                Role::Electrode(e) if e == at => Role::Floating(0),
                Role::Electrode(e) if e > at => Role::Electrode(e - 1),
                other => other,
            };
        }
    }
    named
}
