//! Against a general finite-element library: the sections under `tests/reference/sections`,
//! solved by scikit-fem (`tests/reference/values_capacitance.py`).
//!
//! Its matrix comes from an energy on one side only, refined until it moves by less than
//! 3e-4. Ours agrees within 0.2 % of every entry that is a tenth of its diagonal or more, and
//! within 0.02 % of the diagonal for those that are less.

use std::collections::BTreeMap;
use std::path::{Path, PathBuf};

use gapwright::field::solve;
use serde::Deserialize;

use crate::named::section;

#[derive(Deserialize)]
struct Answer {
    electrodes: Vec<String>,
    matrix_af_per_um: Vec<Vec<f64>>,
}

type Answers = BTreeMap<String, Answer>;

fn folder() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/reference")
}

fn answers(folder: &Path) -> Answers {
    let path = folder.join("capacitance.json");
    let text = std::fs::read_to_string(&path)
        .unwrap_or_else(|error| panic!("{}: {error}", path.display()));
    serde_json::from_str(&text).unwrap()
}

fn compare(answers: &Answers) {
    assert!(answers.len() >= 8);
    for (name, answer) in answers {
        let named = section(name);
        let solved = solve(&named.problem, 2e-3).unwrap();
        let at = |name: &String| named.electrodes.iter().position(|other| other == name).unwrap();
        for (i, a) in answer.electrodes.iter().enumerate() {
            for (j, b) in answer.electrodes.iter().enumerate() {
                let (ours, theirs) = (solved.value[at(a)][at(b)], answer.matrix_af_per_um[i][j]);
                let scale = theirs.abs().max(0.1 * answer.matrix_af_per_um[i][i]);
                let off = (ours - theirs).abs() / scale;
                assert!(off <= 2e-3, "{name}: {a}, {b}: {ours}, expected {theirs}");
            }
        }
    }
}

#[test]
fn agrees_with_a_finite_element_library() {
    compare(&answers(&folder().join("values")));
}

#[test]
fn agrees_with_values_made_anew() {
    if let Some(made) = std::env::var_os("GAPWRIGHT_REFERENCE") {
        compare(&answers(Path::new(&made)));
    }
}
