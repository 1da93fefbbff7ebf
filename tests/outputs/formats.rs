//! Markdown, JUnit XML, CSV and text of a report made by hand, as snapshots; what they must keep of
//! a real one.

use super::{hand, small::small};

#[test]
fn markdown() {
    insta::assert_snapshot!(hand::report().markdown());
}

/// `.ci/run` holds the same form against a published schema.
#[test]
fn junit() {
    insta::assert_snapshot!(hand::report().junit());
}

#[test]
fn csv() {
    insta::assert_snapshot!(hand::report().csv());
}

#[test]
fn text() {
    insta::assert_snapshot!(gapwright::report::text::render(&hand::report(), false));
}

#[test]
fn csv_holds_every_figure_of_the_json_in_full() {
    let csv = small().report().csv();
    let lines: Vec<Vec<&str>> = csv.lines().map(|line| line.split(',').collect()).collect();
    let sites = &small().judged.report.sites;
    for site in sites {
        let split = site.split.as_deref().unwrap_or_default();
        let of = |quantity: &str| -> f64 {
            let row = lines.iter().find(|c| c[1] == split && c[2] == site.site && c[4] == quantity);
            row.unwrap_or_else(|| panic!("no {quantity}"))[6].parse().unwrap()
        };
        assert_eq!(of("void-top"), site.highest_top_nm().unwrap().value);
        assert_eq!(of("coupling"), site.electrical.as_ref().unwrap().coupling_af_per_um.value);
    }
    assert!(lines.iter().all(|cells| cells.len() == 9), "{csv}");
}

#[test]
fn junit_counts_what_it_says() {
    let junit = small().report().junit();
    let limits = small().judged.report.limits.len();
    let findings = small().judged.report.findings.len();
    assert_eq!(junit.matches("<testcase ").count(), limits + findings);
    assert!(junit.contains(&format!("tests=\"{}\"", limits + findings)));
    let failures = junit.matches("<failure ").count();
    assert!(failures > 0 && junit.contains(&format!("failures=\"{failures}\"")));
}
