//! SARIF 2.1.0 of `check` (OASIS standard, 2020): findings and limits that do not hold, each on
//! its line, for any code host that reads the format.
//!
//! A waived finding is a suppressed result. A broken limit is an error, one that cannot be told a
//! warning. A result's fingerprint is its rule and its place in the flow, not its line, so that a
//! host follows it while lines move.

use serde_json::{Map, Value, json};

use super::{FindingReport, FlowReport, LimitReport, Report, Verdict};
use crate::diag::Severity;
use crate::rules;

/// Rule of a limit that does not hold.
const BROKEN: &str = "limit-broken";
/// Rule of a limit that cannot be told.
const UNTOLD: &str = "limit-not-told";

/// Name of the fingerprint, with its version.
const FINGERPRINT: &str = "gapwrightPlace/v1";

impl Report {
    /// The report as a SARIF log of one run.
    pub fn sarif(&self) -> String {
        let results: Vec<Value> = self.runs.iter().flat_map(results).collect();
        let mut rules: Vec<&str> = results.iter().filter_map(|r| r["ruleId"].as_str()).collect();
        rules.sort_unstable();
        rules.dedup();
        let artifacts = self.runs.iter().map(|run| json!({"location": {"uri": uri(&run.file)}}));
        let log = json!({
            "$schema": "https://docs.oasis-open.org/sarif/sarif/v2.1.0/os/schemas/sarif-schema-2.1.0.json",
            "version": "2.1.0",
            "runs": [{
                "tool": {"driver": {
                    "name": "gapwright",
                    "version": env!("CARGO_PKG_VERSION"),
                    "rules": rules.into_iter().map(descriptor).collect::<Vec<_>>(),
                }},
                "columnKind": "unicodeCodePoints",
                "artifacts": artifacts.collect::<Vec<_>>(),
                "invocations": [{
                    "executionSuccessful": true,
                    "exitCode": i32::from(self.runs.iter().any(|r| r.verdict != Verdict::Pass)),
                }],
                "results": results,
            }],
        });
        // Every key is a string and every number finite: nothing here can fail.
        serde_json::to_string_pretty(&log).expect("a log is always JSON") + "\n"
    }
}

/// What a rule is, with its page as help.
fn descriptor(name: &str) -> Value {
    let described = |summary: &str, page: &str| {
        json!({
            "id": name,
            "shortDescription": {"text": summary},
            "help": {"text": page, "markdown": page},
        })
    };
    match (name, rules::rule(name)) {
        (_, Some(rule)) => {
            let mut rule_ = described(&rule.summary(), rule.page);
            rule_["defaultConfiguration"] = json!({"level": level(rule.severity)});
            rule_
        }
        (BROKEN, None) => {
            described("A limit of the flow is broken.", "The figure lies outside the limit.")
        }
        _ => described(
            "A limit of the flow cannot be told.",
            "The limit lies within the numerical error of the figure. A finer run may tell it: \
             `--accuracy`.",
        ),
    }
}

fn results(run: &FlowReport) -> Vec<Value> {
    let findings = run.findings.iter().map(|finding| of_finding(run, finding));
    let limits = run.limits.iter().filter(|limit| limit.holds != Some(true));
    findings.chain(limits.map(|limit| of_limit(run, limit))).collect()
}

fn of_finding(run: &FlowReport, finding: &FindingReport) -> Value {
    let mut message = format!("{}: {}", finding.title(), finding.message);
    if let Some(help) = &finding.help {
        message.push_str(&format!(" Help: {help}"));
    }
    let region = json!({
        "startLine": finding.line,
        "startColumn": finding.column,
        "endLine": finding.end_line,
        "endColumn": finding.end_column,
    });
    let place = format!("{}/{}/{}", run.flow, finding.rule, finding.place());
    let mut result = result(run, &finding.rule, level(finding.severity), &message, region, &place);
    if finding.waived {
        let mut waiver = Map::from_iter([("kind".to_owned(), json!("inSource"))]);
        let because = finding.waived_because.as_ref();
        waiver.extend(because.map(|because| ("justification".to_owned(), json!(because))));
        result["suppressions"] = json!([waiver]);
    }
    result
}

fn of_limit(run: &FlowReport, limit: &LimitReport) -> Value {
    let (rule, level) = match limit.holds {
        Some(_) => (BROKEN, "error"),
        None => (UNTOLD, "warning"),
    };
    let mut message = format!("{} {}", limit.title(), limit.word());
    let value = limit.shown_value().map(|value| format!(": {value}"));
    let margin = limit.shown_margin().map(|margin| format!(", margin {margin}"));
    let note = limit.note.as_ref().map(|note| format!("; {note}"));
    message.extend([value, margin, note].into_iter().flatten());
    let place = format!("{}/{}", run.flow, limit.title());
    result(run, rule, level, &message, json!({"startLine": limit.line}), &place)
}

fn result(
    run: &FlowReport,
    rule: &str,
    level: &str,
    message: &str,
    region: Value,
    place: &str,
) -> Value {
    json!({
        "ruleId": rule,
        "level": level,
        "message": {"text": message},
        "locations": [{"physicalLocation": {
            "artifactLocation": {"uri": uri(&run.file)},
            "region": region,
        }}],
        "partialFingerprints": {FINGERPRINT: place},
    })
}

fn level(severity: Severity) -> &'static str {
    match severity {
        Severity::Error => "error",
        Severity::Warning => "warning",
        Severity::Note => "note",
    }
}

/// A path as a URI reference (RFC 3986): relative stays relative.
fn uri(path: &str) -> String {
    let plain = |b: u8| b.is_ascii_alphanumeric() || b"-._~/".contains(&b);
    let byte = |b: u8| if plain(b) { char::from(b).to_string() } else { format!("%{b:02X}") };
    let encoded: String = path.bytes().map(byte).collect();
    if path.starts_with('/') { format!("file://{encoded}") } else { encoded }
}

#[cfg(test)]
mod tests {
    use super::uri;

    #[test]
    fn paths_become_uri_references() {
        assert_eq!(uri("flows/a b.flow"), "flows/a%20b.flow");
        assert_eq!(uri("/tmp/µ.flow"), "file:///tmp/%C2%B5.flow");
    }
}
