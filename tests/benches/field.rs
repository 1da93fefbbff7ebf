//! Time of the field on the reference sections and on seven lines, and beside it what a script
//! around a general finite-element library takes for the same accuracy.
//!
//! With `GAPWRIGHT_PYTHON` naming an interpreter that has `tests/reference/requirements.txt`, runs
//! `tests/reference/values_capacitance.py` too, one thread on both sides. Both are held against
//! a run of ours whose bounds are proven to 0.02 %; an error is that of the worst entry, over
//! itself or a tenth of its diagonal. The script is given the first round of refinement that is as
//! accurate as asked (CPU time from outlines to matrix, imports left out), ours the loosest
//! setting that is. Nothing is asserted.

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

#[path = "../capacitance/named.rs"]
mod named;

use std::collections::BTreeMap;
use std::path::Path;
use std::process::Command;
use std::time::Instant;

use gapwright::field::{Problem, solve};
use gapwright::report::geojson::NamedProblem;
use serde::Deserialize;

/// Settings that ours chooses from, loosest first.
const SETTINGS: [f64; 6] = [4e-2, 2e-2, 1e-2, 5e-3, 2e-3, 1e-3];

/// Setting of the run that errors are taken against.
const EXACT: f64 = 2e-4;

/// Errors that are asked of both.
const ASKED: [f64; 2] = [2e-3, 5e-4];

/// One round of refinement of the script.
#[derive(Deserialize)]
struct Round {
    section: String,
    seconds: f64,
    electrodes: Vec<String>,
    matrix_af_per_um: Vec<Vec<f64>>,
}

/// The best of a few runs, in ms.
fn time_ms(problem: &Problem, accuracy: f64) -> f64 {
    let run = |_| {
        let (wall, cpu) = (Instant::now(), cpu_ns());
        solve(problem, accuracy).expect("a reference section can be solved");
        let spent = cpu_ns().zip(cpu).map(|(after, before)| (after - before) as f64 * 1e-6);
        spent.unwrap_or(wall.elapsed().as_secs_f64() * 1e3)
    };
    (0..9).map(run).fold(f64::INFINITY, f64::min)
}

/// What this thread has had of a processor, in ns, where the kernel tells (proc(5), schedstat):
/// on a shared machine the clock on the wall counts others too.
fn cpu_ns() -> Option<u64> {
    let told = std::fs::read_to_string("/proc/thread-self/schedstat").ok()?;
    told.split_whitespace().next()?.parse().ok()
}

/// Error of the worst entry.
fn error(matrix: &[Vec<f64>], exact: &[Vec<f64>]) -> f64 {
    let mut worst = 0.0_f64;
    for (i, (row, exact)) in matrix.iter().zip(exact).enumerate() {
        for (value, exact_value) in row.iter().zip(exact) {
            let scale = exact_value.abs().max(0.1 * exact[i]);
            worst = worst.max((value - exact_value).abs() / scale);
        }
    }
    worst
}

/// A round's matrix in our order of electrodes.
fn in_order(round: &Round, named: &NamedProblem) -> Vec<Vec<f64>> {
    let at = |name: &String| round.electrodes.iter().position(|other| other == name);
    let order: Vec<_> =
        named.electrodes.iter().map(|name| at(name).expect("both know the electrode")).collect();
    let row = |i: &usize| order.iter().map(|j| round.matrix_af_per_um[*i][*j]).collect();
    order.iter().map(row).collect()
}

/// The rounds of the script by section; none without an interpreter.
fn script() -> BTreeMap<String, Vec<Round>> {
    let mut rounds: BTreeMap<String, Vec<Round>> = BTreeMap::new();
    let Some(python) = std::env::var_os("GAPWRIGHT_PYTHON") else {
        println!("set GAPWRIGHT_PYTHON to compare\n");
        return rounds;
    };
    let folder = tempfile::tempdir().expect("a folder for the script's values");
    let run = Command::new(python)
        .arg(concat!(env!("CARGO_MANIFEST_DIR"), "/tests/reference/values_capacitance.py"))
        .arg(folder.path())
        .arg("--rounds")
        .envs(["OMP_NUM_THREADS", "OPENBLAS_NUM_THREADS"].map(|name| (name, "1")))
        .output()
        .expect("the interpreter starts");
    assert!(run.status.success(), "{}", String::from_utf8_lossy(&run.stderr));
    for line in String::from_utf8_lossy(&run.stdout).lines() {
        let round: Round = serde_json::from_str(line).expect("a round is a line of JSON");
        rounds.entry(round.section.clone()).or_default().push(round);
    }
    rounds
}

fn main() {
    let rounds = script();
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/reference/sections");
    let mut names: Vec<_> = std::fs::read_dir(folder)
        .expect("the sections are there")
        .map(|file| file.expect("it can be listed").path())
        .map(|path| path.file_stem().unwrap_or_default().to_string_lossy().into_owned())
        .collect();
    names.sort();
    println!("CPU time in ms, one thread; the error asked of both is that of the worst entry\n");
    print!("{:<18}", "section");
    for asked in ASKED {
        print!("   {:>5.2} %: {:>8} {:>8} {:>6}", 100.0 * asked, "script", "ours", "ratio");
    }
    println!();
    let mut ratios: Vec<f64> = Vec::new();
    for name in &names {
        let named = named::section(name);
        let exact = solve(&named.problem, EXACT).expect("it can be solved").value;
        print!("{name:<18}");
        for asked in ASKED {
            let accurate = |setting: &&f64| {
                let solved = solve(&named.problem, **setting).expect("it can be solved");
                error(&solved.value, &exact) <= asked
            };
            let setting = SETTINGS.iter().find(accurate).unwrap_or(&EXACT);
            let ours = time_ms(&named.problem, *setting);
            let enough = |round: &&Round| error(&in_order(round, &named), &exact) <= asked;
            let theirs = rounds.get(name).and_then(|all| all.iter().find(enough));
            match theirs.map(|round| 1e3 * round.seconds) {
                Some(theirs) => {
                    ratios.push(theirs / ours);
                    print!("            {theirs:>8.0} {ours:>8.1} {:>6.0}", theirs / ours);
                }
                None => print!("            {:>8} {ours:>8.1} {:>6}", "-", ""),
            }
        }
        println!();
    }
    if !ratios.is_empty() {
        let logs: f64 = ratios.iter().map(|ratio| ratio.ln()).sum();
        println!(
            "\nratio: least {:.1}, geometric mean {:.1}",
            ratios.iter().copied().fold(f64::INFINITY, f64::min),
            (logs / ratios.len() as f64).exp()
        );
    }
    println!("\nseven lines, 3 nm liners, voids: bounds asked, ms");
    for accuracy in [1e-2, 5e-3, 2e-3, 1e-3] {
        println!("{accuracy:<10} {:>8.1}", time_ms(&sections::ARRAY.problem(), accuracy));
    }
}
