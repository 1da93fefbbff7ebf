//! Whole flows with two or three mistakes of different classes: exactly the right findings.
//! Each says in its head what is wrong; the same flow without the mistakes is in `corrected`.

use std::fs;

use gapwright::diag::Severity;
use gapwright::rules::Finding;
use rayon::prelude::*;

use crate::harness::{findings, line, resolve};
use crate::legitimate::flows_in;

/// Findings with their help, and what is expected, both as text.
fn shown(name: &str, text: &str) -> (String, Vec<String>, Vec<String>) {
    let flow = resolve(name, text, None);
    let found = findings(&flow).unwrap_or_else(|error| panic!("{name}: {error}"));
    let op = |f: &Finding| f.step.map_or("-", |s| flow.variants[0].steps[s].op_text.as_str());
    let help = |f: &Finding| f.help.as_ref().map_or(String::new(), |h| format!("    help: {h}\n"));
    let shown = found.iter().map(|f| format!("{}\n{}", line(&flow, f), help(f))).collect();
    let grave = found.iter().filter(|f| f.severity > Severity::Note);
    let got = grave.map(|f| format!("{} on {}", f.rule, op(f))).collect();
    let expected = text.lines().filter_map(|line| line.strip_prefix("# expect "));
    (shown, got, expected.map(str::to_owned).collect())
}

#[test]
fn mistakes_are_found_and_nothing_else() {
    assert_eq!(flows_in("mistakes").len(), 8);
    assert_eq!(flows_in("corrected").len(), 8);
    let found: Vec<_> = flows_in("mistakes")
        .into_par_iter()
        .map(|file| {
            let name = file.file_stem().unwrap().to_string_lossy().into_owned();
            let (shown, got, expected) = shown(&name, &fs::read_to_string(&file).unwrap());
            (format!("{name}\n\n{shown}\n"), got == expected)
        })
        .collect();
    let wrong: Vec<_> = found.iter().filter(|(_, right)| !right).map(|(s, _)| s.clone()).collect();
    let all: String = found.into_iter().map(|(shown, _)| shown).collect();
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
    insta::assert_snapshot!("mistakes", all);
}
