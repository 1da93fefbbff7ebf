//! Comparisons: two judged flows, and a real history of two commits.

use std::fs;
use std::path::Path;
use std::process::Command;

use gapwright::study::compare::{self, Change, Comparison, Judged, Sections};
use serde_json::Value;

use super::hand;
use super::small::{Small, small, thicker};

fn side(small: &'static Small, name: &'static str) -> Judged<'static> {
    Judged { name, flow: &small.flow, report: &small.judged.report }
}

fn compared() -> (Comparison, Vec<Sections<'static>>) {
    let (old, new) = (side(small(), "old.flow"), side(thicker(), "new.flow"));
    let sections = compare::sections((old, &small().grown()), (new, &thicker().grown()));
    (compare::compare(old, new), sections)
}

#[test]
fn a_flow_against_itself_is_quiet() {
    let comparison = compare::compare(side(small(), "a"), side(small(), "a"));
    assert!(comparison.statements.is_empty() && comparison.library.is_empty());
    assert!(comparison.figures.iter().all(|figure| figure.change == Change::Same));
    assert!(comparison.markdown(&[]).contains("Nothing changed"));
}

/// The texts of two real flows, the figures of two reports made by hand.
fn by_hand() -> Comparison {
    let (old, new) = (hand::report(), hand::changed());
    let side = |small: &'static Small, name, report| Judged { name, flow: &small.flow, report };
    compare::compare(
        side(small(), "a.flow at HEAD~1", &old.runs[0]),
        side(thicker(), "a.flow", &new.runs[0]),
    )
}

#[test]
fn markdown() {
    insta::assert_snapshot!(by_hand().markdown(&[]));
}

#[test]
fn text() {
    insta::assert_snapshot!(by_hand().text(&[], false));
}

#[test]
fn text_figures_and_flipped_limits_are_told() {
    let (comparison, sections) = compared();
    let keys: Vec<_> = comparison.statements.iter().map(|s| s.key.as_str()).collect();
    assert_eq!(keys, ["010", "void-top <="]);
    let figure = |name: &str| {
        let mut all = comparison.figures.iter();
        all.find(|figure| figure.quantity == name && figure.split.is_none()).unwrap()
    };
    // Two nm more on each side leave less to close, so less seal closes it.
    let seal = figure("seal-thickness");
    assert_eq!(seal.change, Change::Changed);
    assert!(seal.difference.unwrap().high < 0.0);
    // The wafer did not change: neither did its lines.
    assert_eq!(figure("resistance").change, Change::Same);
    let of_limit = |claim: &str| {
        let changes = comparison.limits.iter();
        let after = |change: &compare::LimitChange| change.after.as_ref().unwrap().text.clone();
        let named = changes.filter(|change| after(change).starts_with(claim));
        named.map(|change| change.change).collect::<Vec<_>>()
    };
    assert_eq!(
        of_limit("void-top"),
        [Change::Changed; 2],
        "the wider limit holds, in the split too"
    );
    assert_eq!(of_limit("sealed"), [Change::Same; 2]);
    let markdown = comparison.markdown(&sections);
    assert!(
        markdown.contains("### Text")
            && markdown.contains("before")
            && markdown.contains("```text")
    );
    let page = comparison.html(&sections);
    assert_eq!(page.matches("<figcaption><strong>before").count(), sections.len());
    assert!(comparison.text(&sections, false).contains("limits whose verdict changed"));
}

/// A repository with commits of its own making.
struct Repository(tempfile::TempDir);

impl Repository {
    fn new() -> Self {
        let repository = Self(tempfile::tempdir().unwrap());
        repository.git(&["init", "--quiet"]);
        repository
    }

    fn path(&self) -> &Path {
        self.0.path()
    }

    fn git(&self, arguments: &[&str]) -> String {
        let output = Command::new("git")
            .arg("-C")
            .arg(self.path())
            .args(["-c", "user.name=a", "-c", "user.email=a@example.org"])
            .args(arguments)
            .output()
            .unwrap();
        assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stderr));
        String::from_utf8(output.stdout).unwrap()
    }

    fn commit(&self, files: &[(&str, &str)]) {
        for (name, text) in files {
            let path = self.path().join(name);
            fs::create_dir_all(path.parent().unwrap()).unwrap();
            fs::write(path, text).unwrap();
        }
        self.git(&["add", "--all"]);
        self.git(&["commit", "--quiet", "--message", "a step"]);
    }

    fn compare(&self, arguments: &[&str]) -> std::process::Output {
        let mut command = Command::new(env!("CARGO_BIN_EXE_gapwright"));
        command.current_dir(self.path()).arg("compare").args(arguments).output().unwrap()
    }
}

const LIBRARY: &str = "rules:\n  polish-opens-void: {margin_nm: 10}\n";

#[test]
fn a_history_of_two_commits_is_read_without_checking_anything_out() {
    let repository = Repository::new();
    let old = format!("use \"../house.yaml\"\n\n{}", super::small::TEXT);
    let new = old.replace("60 ± 4 nm SiO2", "30 nm SiO2").replace("# One space", "# A space");
    let loose = LIBRARY.replace("10", "5");
    repository.commit(&[("flows/a.flow", &old), ("house.yaml", LIBRARY)]);
    repository.commit(&[("flows/a.flow", &new), ("house.yaml", &loose)]);

    let output = repository.compare(&["flows/a.flow", "--since", "HEAD~1", "--format", "json"]);
    let said = String::from_utf8_lossy(&output.stderr);
    let json: Value = serde_json::from_slice(&output.stdout).unwrap_or_else(|_| panic!("{said}"));
    assert_eq!(json["before"]["name"], "flows/a.flow at HEAD~1");
    let statements = json["statements"].as_array().unwrap();
    assert_eq!(statements.len(), 1, "comments count nothing: {statements:#?}");
    assert_eq!(statements[0]["key"], "020");
    let library = json["library"].as_array().unwrap();
    assert_eq!(library.len(), 1, "the library comes from the same revision: {library:#?}");
    assert_eq!((&library[0]["before"], &library[0]["after"]), (&"10".into(), &"5".into()));
    assert_eq!(repository.git(&["status", "--porcelain"]), "");
    assert_eq!(fs::read_to_string(repository.path().join("flows/a.flow")).unwrap(), new);
}

/// The script of docs/review.md, on a change of a flow.
#[test]
fn the_documented_script_leaves_what_it_says() {
    let page = include_str!("../../docs/review.md");
    let script = page.split("```sh\n").nth(1).unwrap().split("```").next().unwrap();
    let repository = Repository::new();
    let plain = super::small::TEXT.split("splits").next().unwrap();
    repository.commit(&[("a.flow", plain)]);
    repository.commit(&[("a.flow", &plain.replace("2 nm SiN", "3 nm SiN"))]);
    let folder = Path::new(env!("CARGO_BIN_EXE_gapwright")).parent().unwrap();
    let path = format!("{}:{}", folder.display(), std::env::var("PATH").unwrap());
    let output = Command::new("sh")
        .args(["-c", script])
        .current_dir(repository.path())
        .envs([("BASE", "HEAD~1"), ("PATH", &path)])
        .output()
        .unwrap();
    let said = String::from_utf8_lossy(&output.stderr);
    assert!(matches!(output.status.code(), Some(0 | 1)), "{said}");
    let left = |name: &str| fs::read_to_string(repository.path().join("reports").join(name));
    assert!(left("a.sarif").unwrap().contains("\"version\": \"2.1.0\""), "{said}");
    assert!(left("a.html").unwrap().starts_with("<!DOCTYPE html>"));
    assert!(left("comment.md").unwrap().contains("| changed | steps 010 |"));
}

#[test]
fn what_git_does_not_have_is_said() {
    let repository = Repository::new();
    repository.commit(&[("other.flow", "flow other\n")]);
    fs::write(repository.path().join("a.flow"), super::small::TEXT).unwrap();
    let said = |arguments: &[&str]| {
        let output = repository.compare(arguments);
        assert_eq!(output.status.code(), Some(2));
        assert!(output.stdout.is_empty());
        String::from_utf8(output.stderr).unwrap()
    };
    assert!(said(&["a.flow", "--since", "HEAD"]).contains("not in revision"));
    assert!(said(&["a.flow", "--since", "no-such"]).contains("it names no commit"));
    assert!(said(&["a.flow", "--since=--upload-pack=x"]).contains("it names no commit"));
}
