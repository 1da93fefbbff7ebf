//! JUnit XML of `check`: a suite a flow, a case a limit and a case a finding, in the form that
//! build servers read (held against the published schema of one of them in `.ci/run`).
//!
//! A broken limit, one that cannot be told and an error finding fail; what is waived is skipped; a
//! warning or a note passes and says itself in the case's output.

use std::fmt::Write as _;

use super::{FindingReport, FlowReport, LimitReport, Report};

impl Report {
    /// The report as JUnit XML.
    pub fn junit(&self) -> String {
        let suites: Vec<Suite> = self.runs.iter().map(Suite::of).collect();
        let mut text = String::from("<?xml version=\"1.0\" encoding=\"UTF-8\"?>\n");
        let _ = writeln!(
            text,
            "<testsuites name=\"gapwright\" tests=\"{}\" failures=\"{}\" errors=\"0\">",
            suites.iter().map(|suite| suite.cases.len()).sum::<usize>(),
            suites.iter().map(|suite| suite.count(Outcome::is_failed)).sum::<usize>(),
        );
        suites.iter().for_each(|suite| suite.write(&mut text));
        text.push_str("</testsuites>\n");
        text
    }
}

struct Suite<'a> {
    run: &'a FlowReport,
    cases: Vec<Case>,
}

/// One `testcase`.
struct Case {
    class: String,
    name: String,
    outcome: Outcome,
}

enum Outcome {
    Passed { said: String },
    Skipped { because: String },
    Failed { kind: &'static str, message: String, said: String },
}

impl Outcome {
    fn is_failed(&self) -> bool {
        matches!(self, Self::Failed { .. })
    }

    fn is_skipped(&self) -> bool {
        matches!(self, Self::Skipped { .. })
    }
}

impl<'a> Suite<'a> {
    fn of(run: &'a FlowReport) -> Self {
        let limits = run.limits.iter().map(|limit| of_limit(run, limit));
        let findings = run.findings.iter().map(|finding| of_finding(run, finding));
        Self { run, cases: limits.chain(findings).collect() }
    }

    fn count(&self, is: fn(&Outcome) -> bool) -> usize {
        self.cases.iter().filter(|case| is(&case.outcome)).count()
    }

    fn write(&self, text: &mut String) {
        let _ = writeln!(
            text,
            "  <testsuite name=\"{}\" file=\"{}\" tests=\"{}\" failures=\"{}\" errors=\"0\" \
             skipped=\"{}\">",
            escape(&self.run.flow),
            escape(&self.run.file),
            self.cases.len(),
            self.count(Outcome::is_failed),
            self.count(Outcome::is_skipped),
        );
        for case in &self.cases {
            let (class, name) = (escape(&case.class), escape(&case.name));
            let _ = write!(text, "    <testcase classname=\"{class}\" name=\"{name}\"");
            match &case.outcome {
                Outcome::Passed { said } if said.is_empty() => text.push_str("/>\n"),
                Outcome::Passed { said } => {
                    let said = escape(said);
                    let _ = writeln!(text, "><system-out>{said}</system-out></testcase>");
                }
                Outcome::Skipped { because } => {
                    let because = escape(because);
                    let _ = writeln!(text, "><skipped message=\"{because}\"/></testcase>");
                }
                Outcome::Failed { kind, message, said } => {
                    let (message, said) = (escape(message), escape(said));
                    let _ = writeln!(
                        text,
                        "><failure type=\"{kind}\" message=\"{message}\">{said}</failure></testcase>"
                    );
                }
            }
        }
        text.push_str("  </testsuite>\n");
    }
}

fn of_limit(run: &FlowReport, limit: &LimitReport) -> Case {
    let mut said = limit.shown_value().unwrap_or_default();
    if let Some(margin) = limit.shown_margin() {
        let _ = write!(said, ", margin {margin}");
    }
    if let Some(note) = &limit.note {
        let gap = if said.is_empty() { "" } else { "; " };
        let _ = write!(said, "{gap}{note}");
    }
    let place = format!("{}:{}", run.file, limit.line);
    let outcome = match limit.holds {
        Some(true) => Outcome::Passed { said },
        holds => Outcome::Failed {
            kind: if holds.is_some() { "limit-broken" } else { "limit-not-told" },
            message: format!("{}: {said}", limit.word()),
            said: place,
        },
    };
    Case { class: format!("{}.limits", run.flow), name: limit.title(), outcome }
}

fn of_finding(run: &FlowReport, finding: &FindingReport) -> Case {
    let place = format!("{}:{}:{}", run.file, finding.line, finding.column);
    let help = finding.help.as_ref().map_or(String::new(), |help| format!("\nhelp: {help}"));
    let outcome = match finding.word() {
        "waived" => Outcome::Skipped {
            because: format!(
                "waived because {}",
                finding.waived_because.as_deref().unwrap_or_default()
            ),
        },
        "error" => Outcome::Failed {
            kind: "finding",
            message: finding.message.clone(),
            said: format!("{place}{help}"),
        },
        word => Outcome::Passed { said: format!("{word}: {}\n{place}{help}", finding.message) },
    };
    Case { class: format!("{}.findings", run.flow), name: finding.title(), outcome }
}

/// Text for content and attributes; what XML 1.0 cannot hold is left out.
fn escape(text: &str) -> String {
    let allowed = |c: &char| !c.is_control() || matches!(c, '\n' | '\t');
    let mut out = String::with_capacity(text.len());
    for c in text.chars().filter(allowed) {
        match c {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '"' => out.push_str("&quot;"),
            '\n' => out.push_str("&#10;"),
            _ => out.push(c),
        }
    }
    out
}
