//! Registry, pages and names held against each other.

use std::collections::BTreeSet;
use std::fs;
use std::path::Path;

use gapwright::rules::REGISTRY;

fn names_in(folder: &str, ending: &str) -> BTreeSet<String> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join(folder);
    let files = fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().file_name());
    let names = files.filter_map(|file| {
        file.to_string_lossy().strip_suffix(ending).map(|name| name.replace('_', "-"))
    });
    names.collect()
}

#[test]
fn every_rule_has_its_file_and_its_page_and_no_page_lacks_its_rule() {
    let registered: BTreeSet<_> = REGISTRY.iter().map(|rule| rule.name.to_owned()).collect();
    assert_eq!(registered.len(), REGISTRY.len(), "a name is there twice");
    assert_eq!(names_in("docs/rules", ".md"), registered);
    let machinery = ["mod", "finding", "settings", "waivers", "cautions"];
    let files: BTreeSet<_> = names_in("src/rules", ".rs")
        .into_iter()
        .filter(|name| !machinery.contains(&name.as_str()))
        .collect();
    assert_eq!(files, registered);
}

#[test]
fn pages_have_their_parts_and_name_every_other_rule_right() {
    for rule in REGISTRY {
        assert!(rule.page.starts_with(&format!("# {}\n", rule.name)), "{}", rule.name);
        let parts = ["## Why", "## A flow that breaks it", "## A flow that passes", "## Source"];
        for part in parts {
            assert!(rule.page.contains(part), "{}: no {part}", rule.name);
        }
        assert!(!rule.summary().is_empty(), "{}", rule.name);
        for other in rule.yields_to {
            assert!(REGISTRY.iter().any(|r| r.name == *other), "{} yields to {other}", rule.name);
        }
    }
}

#[test]
fn thresholds_carry_their_unit_or_are_plain_numbers() {
    const UNITS: &[&str] =
        &["_nm", "_c", "_gpa", "_kpa", "_deg", "_n_per_m", "_share", "_below", "_rate"];
    for rule in REGISTRY {
        for threshold in rule.thresholds {
            let known = UNITS.iter().any(|unit| threshold.key.ends_with(unit));
            assert!(known, "{}: {}", rule.name, threshold.key);
        }
    }
}
