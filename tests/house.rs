//! The house holds itself to its drawing: layers, towers, file sizes, top level.

#![allow(
    clippy::disallowed_methods,
    clippy::disallowed_types,
    clippy::print_stdout,
    clippy::print_stderr,
    reason = "tests read files and time nothing"
)]

use std::fs;
use std::path::{Path, PathBuf};

/// Rooms by layer, lowest first; `DEVELOPERS.md` says what each is for.
const LAYERS: &[&[&str]] = &[
    &["diag", "num", "source", "units", "world"],
    &["geom", "syntax"],
    &["field", "flow", "front", "library"],
    &["graph"],
    &["sim"],
    &["measure", "rules", "verdict"],
    &["report", "study"],
    &["cli", "pipeline", "server"],
];

/// What may be used inside one layer, besides a room's own files.
const BESIDE: &[(&str, &str)] = &[
    ("diag", "source"),
    ("world", "source"),
    ("flow", "library"),
    ("rules", "measure"),
    ("verdict", "measure"),
    ("study", "report"),
    ("cli", "pipeline"),
    ("server", "pipeline"),
];

/// The tower of words and the tower of numbers never meet below `sim`.
const WORDS: &[&str] = &["diag", "source", "units", "world", "syntax", "flow", "library", "graph"];
const NUMBERS: &[&str] = &["num", "geom", "front", "field"];

/// Settings of a library speak of the closure width; its default stands with the tolerances.
const MEETING: &[(&str, &str)] = &[("library", "num")];

fn sources(folder: &Path) -> Vec<PathBuf> {
    let mut files = Vec::new();
    for entry in fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            files.extend(sources(&path));
        } else if path.extension().is_some_and(|e| e == "rs") {
            files.push(path);
        }
    }
    files.sort();
    files
}

fn root() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR"))
}

fn room(path: &Path) -> String {
    let inside = path.strip_prefix(root().join("src")).unwrap();
    let first = inside.components().next().unwrap().as_os_str().to_string_lossy();
    first.trim_end_matches(".rs").to_owned()
}

fn layer(room: &str) -> Option<usize> {
    LAYERS.iter().position(|rooms| rooms.contains(&room))
}

/// Rooms named by `crate::…` paths in a file's code.
fn used(text: &str) -> Vec<String> {
    let code = text.lines().filter(|line| !line.trim_start().starts_with("//"));
    let code: String = code.flat_map(|line| [line, "\n"]).collect();
    let name = |rest: &str| -> String {
        rest.chars().take_while(|c| c.is_alphanumeric() || *c == '_').collect()
    };
    code.split("crate::").skip(1).map(name).filter(|name| !name.is_empty()).collect()
}

/// Every use of one room by another, as (file, from, to).
fn uses() -> Vec<(PathBuf, String, String)> {
    let mut all = Vec::new();
    for path in sources(&root().join("src")) {
        let from = room(&path);
        if from == "lib" || from == "main" {
            continue;
        }
        for to in used(&fs::read_to_string(&path).unwrap()) {
            if to != from && layer(&to).is_some() {
                all.push((path.clone(), from.clone(), to));
            }
        }
    }
    all
}

#[test]
fn every_room_has_a_place() {
    for path in sources(&root().join("src")) {
        let name = room(&path);
        assert!(name == "lib" || name == "main" || layer(&name).is_some(), "{name}");
    }
}

#[test]
fn lower_layers_never_import_higher_ones() {
    let wrong: Vec<_> = uses()
        .into_iter()
        .filter(|(_, from, to)| {
            let (own, other) = (layer(from), layer(to));
            other > own || (other == own && !BESIDE.contains(&(from, to)))
        })
        .collect();
    assert!(wrong.is_empty(), "{wrong:#?}");
}

#[test]
fn the_towers_stand_apart() {
    let across = |from: &str, to: &str| {
        (WORDS.contains(&from) && NUMBERS.contains(&to))
            || (NUMBERS.contains(&from) && WORDS.contains(&to))
    };
    let wrong: Vec<_> = uses()
        .into_iter()
        .filter(|(_, from, to)| across(from, to) && !MEETING.contains(&(from, to)))
        .collect();
    assert!(wrong.is_empty(), "{wrong:#?}");
}

#[test]
fn no_file_holds_two_subjects() {
    let long: Vec<_> = sources(&root().join("src"))
        .into_iter()
        .map(|path| (fs::read_to_string(&path).unwrap().lines().count(), path))
        .filter(|(lines, _)| *lines > 600)
        .collect();
    assert!(long.is_empty(), "over 600 lines: {long:#?}");
}

#[test]
fn the_top_level_is_what_was_agreed() {
    const AGREED: &[&str] = &[
        "Cargo.lock",
        "Cargo.toml",
        "DEVELOPERS.md",
        "LICENSE",
        "README.md",
        "docs",
        "flows",
        "src",
        "target",
        "tests",
    ];
    for entry in fs::read_dir(root()).unwrap() {
        let name = entry.unwrap().file_name().to_string_lossy().into_owned();
        assert!(name.starts_with('.') || AGREED.contains(&name.as_str()), "{name}");
    }
}
