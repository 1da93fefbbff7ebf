//! Every example flow does what its comments say (`flows/README.md` lists the forms).

#![allow(
    clippy::disallowed_methods,
    clippy::disallowed_types,
    clippy::print_stdout,
    clippy::print_stderr,
    reason = "tests read files and time nothing"
)]

use std::fs;
use std::path::{Path, PathBuf};

use assert_cmd::Command;
use serde_json::Value;

fn flows_in(folder: &Path) -> Vec<PathBuf> {
    let mut files = Vec::new();
    for entry in fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            files.extend(flows_in(&path));
        } else if path.extension().is_some_and(|e| e == "flow") {
            files.push(path);
        }
    }
    files.sort();
    files
}

fn examples() -> Vec<PathBuf> {
    flows_in(&Path::new(env!("CARGO_MANIFEST_DIR")).join("flows"))
}

fn gapwright(arguments: &[&str]) -> std::process::Output {
    Command::cargo_bin("gapwright").unwrap().args(arguments).output().unwrap()
}

/// One `# expect` line.
#[derive(Debug)]
enum Expectation {
    Exit(i32),
    State { state: String, site: String, split: Option<String> },
    Figure { name: String, value: f64, tolerance: f64, site: String, split: Option<String> },
    Finding { rule: String, step: Option<String>, split: Option<String> },
    NoFindings,
}

/// Splits off ` WORD rest` from the end of a text.
fn clause<'a>(text: &'a str, word: &str) -> (&'a str, Option<String>) {
    match text.split_once(&format!(" {word} ")) {
        Some((head, tail)) => (head, Some(tail.trim().to_owned())),
        None => (text, None),
    }
}

fn expectation(line: &str) -> Expectation {
    let (text, split) = clause(line, "in");
    let words: Vec<_> = text.split_whitespace().collect();
    match words[0] {
        "exit" => Expectation::Exit(words[1].parse().unwrap()),
        "no" => Expectation::NoFindings,
        "finding" => {
            let (_, step) = clause(text, "on");
            Expectation::Finding { rule: words[1].to_owned(), step, split }
        }
        "state" => {
            let (_, site) = clause(text, "at");
            Expectation::State { state: words[1].to_owned(), site: site.unwrap(), split }
        }
        name => {
            let (head, site) = clause(text, "at");
            let numbers: Vec<f64> =
                head.split_whitespace().filter_map(|word| word.parse().ok()).collect();
            let percent = if head.contains('%') { 0.01 } else { 1.0 };
            Expectation::Figure {
                name: name.to_owned(),
                value: numbers[0] * percent,
                tolerance: numbers[1] * percent,
                site: site.unwrap(),
                split,
            }
        }
    }
}

fn expectations(text: &str) -> Vec<Expectation> {
    text.lines().filter_map(|l| l.trim().strip_prefix("# expect ")).map(expectation).collect()
}

fn text_of(value: &Value) -> Option<&str> {
    value.as_str()
}

fn site<'a>(run: &'a Value, site: &str, split: &Option<String>) -> &'a Value {
    let found = run["sites"].as_array().unwrap().iter().find(|entry| {
        text_of(&entry["site"]) == Some(site) && text_of(&entry["split"]) == split.as_deref()
    });
    found.unwrap_or_else(|| panic!("no figures at {site} in {split:?}"))
}

/// The value of a quantity at a site: of the site, of its voids (highest top, lowest bottom, sum of
/// shares), or electrical.
fn quantity(site: &Value, name: &str) -> Option<f64> {
    let key = name.replace('-', "_");
    let of = |entry: &Value, suffix: &str| entry[format!("{key}{suffix}")]["value"].as_f64();
    let voids = || site["voids"].as_array().unwrap().iter();
    let void = |key: &'static str| voids().filter_map(move |v| v[key]["value"].as_f64());
    match name {
        "void-top" => void("top_nm").reduce(f64::max),
        "void-bottom" => void("bottom_nm").reduce(f64::min),
        "void-width" => void("width_nm").reduce(f64::max),
        "void-height" => void("height_nm").reduce(f64::max),
        "void-share" => voids().next().map(|_| void("share").sum()),
        "roof" => void("roof_nm").reduce(f64::min),
        _ => ["_nm", "_af_per_um", "_ohm_per_um", ""]
            .iter()
            .find_map(|suffix| of(site, suffix).or_else(|| of(&site["electrical"], suffix))),
    }
}

fn hold(path: &Path) {
    let text = fs::read_to_string(path).unwrap();
    let expected = expectations(&text);
    assert!(!expected.is_empty(), "{} says nothing of what is expected", path.display());
    let name = path.to_str().unwrap();
    let mut arguments = vec!["check", name, "--format", "json"];
    let splits = text.lines().any(|line| line.starts_with("# expect") && line.contains(" in "));
    if splits {
        arguments.push("--splits");
    }
    let output = gapwright(&arguments);
    let errors = String::from_utf8_lossy(&output.stderr);
    let report: Value = serde_json::from_slice(&output.stdout)
        .unwrap_or_else(|error| panic!("{name}: no JSON ({error}): {errors}"));
    let run = &report["runs"][0];
    let mut expected_findings = Vec::new();
    for expectation in &expected {
        match expectation {
            Expectation::Exit(status) => {
                assert_eq!(output.status.code(), Some(*status), "{name}: {run:#}");
            }
            Expectation::State { state, site: at, split } => {
                let found = &site(run, at, split)["state"];
                assert_eq!(text_of(found), Some(state.as_str()), "{name} at {at} in {split:?}");
            }
            Expectation::Figure { name: quantity_name, value, tolerance, site: at, split } => {
                let found = quantity(site(run, at, split), quantity_name)
                    .unwrap_or_else(|| panic!("{name}: no {quantity_name} at {at}"));
                assert!(
                    (found - value).abs() <= *tolerance,
                    "{name}: {quantity_name} at {at} is {found}, expected {value} ± {tolerance}"
                );
            }
            Expectation::Finding { rule, step, split } => {
                expected_findings.push((rule.clone(), step.clone(), split.clone()));
            }
            Expectation::NoFindings => {}
        }
    }
    findings_match(name, run, &expected_findings);
}

/// Errors and warnings are exactly those named; notes may come with any flow.
fn findings_match(name: &str, run: &Value, expected: &[(String, Option<String>, Option<String>)]) {
    let found: Vec<_> = run["findings"].as_array().unwrap().iter().collect();
    for (rule, step, split) in expected {
        let there = found.iter().any(|f| {
            text_of(&f["rule"]) == Some(rule)
                && (step.is_none() || text_of(&f["step"]) == step.as_deref())
                && text_of(&f["split"]) == split.as_deref()
        });
        assert!(there, "{name}: {rule} on {step:?} in {split:?} is missing: {found:#?}");
    }
    for f in found {
        let grave = text_of(&f["severity"]) != Some("note") && f["waived"] == false;
        let known = expected.iter().any(|(rule, step, split)| {
            text_of(&f["rule"]) == Some(rule)
                && (step.is_none() || text_of(&f["step"]) == step.as_deref())
                && text_of(&f["split"]) == split.as_deref()
        });
        assert!(!grave || known, "{name}: unexpected {f:#}");
    }
}

#[test]
fn every_example_does_what_it_says() {
    let failures: Vec<_> = examples()
        .into_iter()
        .filter(|path| std::panic::catch_unwind(|| hold(path)).is_err())
        .collect();
    assert!(failures.is_empty(), "{failures:#?}");
}

#[test]
fn every_example_is_tidy() {
    for path in examples() {
        let output = gapwright(&["tidy", "--check", path.to_str().unwrap()]);
        assert!(output.status.success(), "{}", path.display());
    }
}

#[test]
fn there_are_examples_of_every_topic() {
    let folders: std::collections::BTreeSet<_> =
        examples().iter().map(|path| path.parent().unwrap().to_owned()).collect();
    assert!(folders.len() >= 9, "{folders:#?}");
}
