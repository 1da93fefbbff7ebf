//! What a rule found, as data.

use crate::diag::Severity;
use crate::geom::Point;
use crate::source::Span;

/// One finding of one rule on one variant.
#[derive(Debug, Clone, PartialEq)]
pub struct Finding {
    /// Name of the rule.
    pub rule: &'static str,
    /// How grave, settings applied.
    pub severity: Severity,
    /// Index of the step in the variant.
    pub step: Option<usize>,
    /// Split; `None` for the unsplit flow.
    pub split: Option<String>,
    /// The site as the text names it, or several (`32 nm, 48 nm`); `None` when it holds for
    /// all or for none.
    pub site: Option<String>,
    /// What is wrong, one sentence without a final stop.
    pub message: String,
    /// What to do about it.
    pub help: Option<String>,
    /// Where in the section, in nm.
    pub place: Option<Point>,
    /// Length of surface exposed there, in nm.
    pub exposed_nm: Option<f64>,
    /// Where in the text.
    pub span: Span,
    /// What waives it: its place in the flow's waivers.
    pub waiver: Option<usize>,
}
