//! Time of the field on the reference sections and on seven lines; beside what the
//! finite-element script takes, when its timings are given.
//!
//!     python tests/reference/values_capacitance.py FOLDER --time > FOLDER/times
//!     cargo bench --bench field -- FOLDER/times
//!
//! One thread on both sides (`OMP_NUM_THREADS=1`); nothing is asserted.

#![allow(
    clippy::disallowed_methods,
    clippy::disallowed_types,
    clippy::print_stdout,
    clippy::print_stderr,
    reason = "a bench reads, measures and prints"
)]

#[path = "../capacitance/sections.rs"]
#[allow(dead_code, reason = "shared with the tests")]
mod sections;

use std::collections::BTreeMap;
use std::path::Path;
use std::time::Instant;

use gapwright::field::{Problem, solve};
use gapwright::library::Library;
use gapwright::report::geojson::read;

/// The best of a few runs, in ms, and the triangles it took.
fn time(problem: &Problem, accuracy: f64) -> (f64, usize) {
    let run = |_| {
        let start = Instant::now();
        let solved = solve(problem, accuracy).expect("a reference section can be solved");
        (start.elapsed().as_secs_f64() * 1e3, solved.triangles)
    };
    (0..7).map(run).min_by(|a, b| a.0.total_cmp(&b.0)).expect("it ran")
}

fn main() {
    let given = std::env::args().nth(1).filter(|path| Path::new(path).is_file());
    let text = given.map(|path| std::fs::read_to_string(path).expect("it is a file"));
    let theirs: BTreeMap<&str, f64> = text
        .iter()
        .flat_map(|text| text.lines())
        .filter_map(|line| {
            let mut words = line.split_whitespace();
            Some((words.next()?, words.next()?.parse().ok()?))
        })
        .collect();
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/reference/sections");
    let mut files: Vec<_> = std::fs::read_dir(folder)
        .expect("the sections are there")
        .map(|file| file.expect("it can be listed").path())
        .collect();
    files.sort();
    println!("{:<20} {:>9} {:>9} {:>9}", "section", "triangles", "ms", "ratio");
    for path in files {
        let name = path.file_stem().unwrap_or_default().to_string_lossy().into_owned();
        let text = std::fs::read_to_string(&path).expect("a section is a text");
        let section = read(&text).expect("a reference section can be read");
        let named = section.problem(&Library::built_in()).expect("it needs no library");
        let (ms, triangles) = time(&named.problem, 2e-3);
        let ratio = theirs.get(name.as_str()).map(|s| format!("{:.0}", s * 1e3 / ms));
        println!("{name:<20} {triangles:>9} {ms:>9.1} {:>9}", ratio.unwrap_or_default());
    }
    println!("\nseven lines, 3 nm liners, voids");
    for accuracy in [1e-2, 5e-3, 2e-3, 1e-3] {
        let (ms, triangles) = time(&sections::ARRAY.problem(), accuracy);
        println!("{accuracy:<20} {triangles:>9} {ms:>9.1}");
    }
}
