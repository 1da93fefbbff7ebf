//! From a judged run to the model: names and places as people read them.

use super::{FindingReport, FlowReport, Report, SCHEMA_VERSION};
use crate::flow::Flow;
use crate::rules::{self, Caution, Finding};
use crate::verdict::Verdict;

impl Report {
    /// A report on some flows.
    pub fn of(runs: Vec<FlowReport>) -> Self {
        let tool = format!("gapwright {}", env!("CARGO_PKG_VERSION"));
        Self { schema: SCHEMA_VERSION, tool, runs }
    }
}

impl FlowReport {
    /// A report on a flow of which nothing is known yet.
    pub fn of(flow: &Flow) -> Self {
        let splits = flow.variants.iter().filter_map(|variant| variant.split.as_ref());
        Self {
            flow: flow.name.clone(),
            title: flow.title.clone(),
            file: flow.source.name.clone(),
            verdict: Verdict::Undecided,
            splits: splits.map(|split| split.value.clone()).collect(),
            findings: Vec::new(),
            sites: Vec::new(),
            nets: Vec::new(),
            limits: Vec::new(),
            cautions: rules::cautions(flow, &flow.variants[0]).iter().map(words).collect(),
        }
    }
}

fn words(caution: &Caution) -> String {
    format!("{}: {}", caution.steps.join(", "), caution.text)
}

impl FindingReport {
    /// A finding with its place in the text of its flow.
    pub fn of(flow: &Flow, finding: &Finding) -> Self {
        let start = flow.source.position(finding.span.start);
        let end = flow.source.position(finding.span.end);
        let split = |name: &String| {
            flow.variants.iter().find(|v| v.split.as_ref().is_some_and(|s| s.value == *name))
        };
        let variant = finding.split.as_ref().and_then(split).unwrap_or(&flow.variants[0]);
        let waiver = finding.waiver.map(|place| &flow.waivers[place]);
        Self {
            rule: finding.rule.to_owned(),
            severity: finding.severity,
            step: finding.step.map(|step| variant.steps[step].op_text.clone()),
            split: finding.split.clone(),
            site: finding.site.clone(),
            message: finding.message.clone(),
            help: finding.help.clone(),
            waived: waiver.is_some(),
            waived_because: waiver.map(|waiver| waiver.because.clone()),
            place_nm: finding.place.map(|p| [p.x, p.z]),
            exposed_nm: finding.exposed_nm,
            line: start.line,
            column: start.column,
            end_line: end.line,
            end_column: end.column,
        }
    }
}
