//! SARIF against the schema that OASIS publishes (sarif-schema-2.1.0.json, carried by the crate
//! serde-sarif) and against that crate's own types.

use std::fs;
use std::process::Command;

use serde_json::Value;

use super::{hand, small::small};

/// The published schema, out of the sources of serde-sarif.
fn published() -> Value {
    let out = |command: &mut Command| String::from_utf8(command.output().unwrap().stdout).unwrap();
    // Only what this machine's builds need has been fetched.
    let version = out(Command::new("rustc").arg("-vV"));
    let host = version.lines().find_map(|line| line.strip_prefix("host: ")).unwrap();
    let manifest = concat!(env!("CARGO_MANIFEST_DIR"), "/Cargo.toml");
    let metadata = out(Command::new(env!("CARGO"))
        .args(["metadata", "--format-version", "1", "--offline"])
        .args(["--filter-platform", host, "--manifest-path", manifest]));
    let metadata: Value = serde_json::from_str(&metadata).unwrap();
    let packages = metadata["packages"].as_array().unwrap();
    let carrier = packages.iter().find(|package| package["name"] == "serde-sarif").unwrap();
    let manifest = std::path::Path::new(carrier["manifest_path"].as_str().unwrap());
    let schema = fs::read_to_string(manifest.with_file_name("src").join("schema.json")).unwrap();
    // A stray bracket in a published pattern: lenient engines read it as itself, strict ones do not.
    let schema: Value = serde_json::from_str(&schema.replace("{2}]?$", r"{2}\\]?$")).unwrap();
    let id = schema["$id"].as_str().unwrap();
    assert!(id.contains("oasis-tcs") && id.ends_with("sarif-schema-2.1.0.json"), "{id}");
    schema
}

#[test]
fn logs_are_valid_under_the_published_schema() {
    let validator = jsonschema::validator_for(&published()).unwrap();
    for log in [small().report().sarif(), hand::report().sarif()] {
        let value: Value = serde_json::from_str(&log).unwrap();
        let errors: Vec<_> = validator.iter_errors(&value).map(|e| e.to_string()).collect();
        assert!(errors.is_empty(), "{errors:#?}");
        let typed: serde_sarif::sarif::Sarif = serde_json::from_str(&log).unwrap();
        assert!(!typed.runs[0].results.as_ref().unwrap().is_empty());
    }
    let mut broken: Value = serde_json::from_str(&hand::report().sarif()).unwrap();
    broken["runs"][0]["results"][0]["level"] = "grave".into();
    assert!(!validator.is_valid(&broken), "the validator tells a wrong log");
}

#[test]
fn every_finding_and_every_limit_that_does_not_hold_has_its_line() {
    let log: Value = serde_json::from_str(&hand::report().sarif()).unwrap();
    let results = log["runs"][0]["results"].as_array().unwrap();
    let told: Vec<_> = results
        .iter()
        .map(|result| {
            let region = &result["locations"][0]["physicalLocation"]["region"];
            (
                result["ruleId"].as_str().unwrap(),
                result["level"].as_str().unwrap(),
                region["startLine"].as_u64().unwrap(),
                result["suppressions"].is_array(),
            )
        })
        .collect();
    let wanted = [
        ("bare-metal-in-oxidizer", "error", 9, false),
        ("polish-opens-void", "warning", 10, true),
        ("limit-broken", "error", 20, false),
        ("limit-not-told", "warning", 21, false),
    ];
    assert_eq!(told, wanted);
    let rules = log["runs"][0]["tool"]["driver"]["rules"].as_array().unwrap();
    let of_rule = |name: &str| rules.iter().find(|rule| rule["id"] == name).unwrap();
    for (rule, ..) in wanted {
        assert!(of_rule(rule)["help"]["text"].as_str().is_some_and(|text| !text.is_empty()));
    }
}
