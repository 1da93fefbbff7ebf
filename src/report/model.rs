//! The result of `check` as data: exactly the JSON that `--format json` prints.

use schemars::JsonSchema;
use serde::Serialize;

use crate::diag::Severity;
pub use crate::measure::NetReport;
use crate::measure::SiteFigures;
pub use crate::verdict::{LimitReport, Verdict};

/// Version of the JSON form.
pub const SCHEMA_VERSION: u32 = 1;

/// Everything one call of `check` found.
#[derive(Debug, Clone, PartialEq, Serialize, JsonSchema)]
pub struct Report {
    /// Version of this form.
    pub schema: u32,
    /// Name and version of the program.
    pub tool: String,
    /// One entry a flow.
    pub runs: Vec<FlowReport>,
}

/// One flow, judged.
#[derive(Debug, Clone, PartialEq, Serialize, JsonSchema)]
pub struct FlowReport {
    /// Name of the flow.
    pub flow: String,
    /// Its title, when it has one.
    pub title: Option<String>,
    /// File that it was read from.
    pub file: String,
    /// The verdict.
    pub verdict: Verdict,
    /// Names of the splits in the flow, judged or not.
    pub splits: Vec<String>,
    /// Findings, in the order of the text.
    pub findings: Vec<FindingReport>,
    /// Figures of every site of every judged variant.
    pub sites: Vec<SiteFigures>,
    /// Nets.
    pub nets: Vec<NetReport>,
    /// Limits, in the order of the text, one entry a site judged.
    pub limits: Vec<LimitReport>,
    /// Cautions for hazardous steps, once a flow.
    pub cautions: Vec<String>,
}

/// One finding, with its place in the text.
#[derive(Debug, Clone, PartialEq, Serialize, JsonSchema)]
pub struct FindingReport {
    /// Name of the rule.
    pub rule: String,
    /// How grave.
    pub severity: Severity,
    /// Operation number as written.
    pub step: Option<String>,
    /// Split; `null` for the unsplit flow.
    pub split: Option<String>,
    /// Site as the text names it.
    pub site: Option<String>,
    /// What is wrong.
    pub message: String,
    /// What to do about it.
    pub help: Option<String>,
    /// Whether a waiver covers it.
    pub waived: bool,
    /// The waiver's reason.
    pub waived_because: Option<String>,
    /// Where in the section: x, z in nm.
    pub place_nm: Option<[f64; 2]>,
    /// Length of surface exposed there, nm.
    pub exposed_nm: Option<f64>,
    /// First line of the place in the text, from 1.
    pub line: usize,
    /// First column, in characters, from 1.
    pub column: usize,
    /// Last line.
    pub end_line: usize,
    /// One past the last column.
    pub end_column: usize,
}
