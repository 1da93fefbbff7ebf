//! Growth to closure against the same physics in straightforward Python.
//!
//! Space and line 32 nm, aspect ratio 3, S = 0.3. With `GAPWRIGHT_PYTHON` naming an interpreter that
//! has `tests/reference/requirements.txt`, runs `tests/reference/growth_baseline.py` too and
//! prints the ratio of the times; nothing is asserted.

#![allow(
    clippy::disallowed_methods,
    clippy::disallowed_types,
    clippy::print_stdout,
    clippy::print_stderr,
    reason = "a bench reads, measures and prints"
)]

#[allow(dead_code, reason = "shared with the tests")]
#[path = "../physics/scenes.rs"]
mod scenes;

use gapwright::front::grow;
use scenes::{Array, figures, mixture, resolution};
use std::process::Command;
use std::time::Instant;

/// Facets at which both are within a per cent of their own limit, in nm.
const FACET_NM: [f64; 2] = [0.8, 1.6];

fn main() {
    let array = Array { s: 32.0, w: 32.0, h: 96.0, taper_deg: 0.0 };
    let start = Instant::now();
    let growth = grow(&array.half(), &mixture(0.0, 0.0, 0.0, 0.3), 40.0, &resolution(FACET_NM[0]));
    let ours = start.elapsed().as_secs_f64();
    match growth.as_ref().map(|growth| figures(&array, growth)) {
        Ok(Some(f)) => println!(
            "gapwright: {ours:.3} s, closes at {:.3} nm, void top {:.3} spaces, share {:.4}",
            f.thickness, f.top, f.share
        ),
        other => println!("gapwright: {ours:.3} s, {other:?}"),
    }
    let Some(python) = std::env::var_os("GAPWRIGHT_PYTHON") else {
        println!("set GAPWRIGHT_PYTHON to compare");
        return;
    };
    let script = concat!(env!("CARGO_MANIFEST_DIR"), "/tests/reference/growth_baseline.py");
    let run = Command::new(python).arg(script).arg(FACET_NM[1].to_string()).output();
    let run = run.expect("the interpreter starts");
    let text = String::from_utf8_lossy(&run.stdout);
    let value: serde_json::Value = serde_json::from_str(&text).expect("one line of JSON");
    let theirs = value["seconds"].as_f64().expect("seconds");
    println!("python:    {}", text.trim());
    println!("ratio:     {:.0}", theirs / ours);
}
