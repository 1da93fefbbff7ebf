//! `corner-fails`: what holds at nominal values breaks at the corner of the tolerances.

use crate::diag::Severity;
use super::frame::{Needs, Rule};

pub static RULE: Rule = Rule {
    name: "corner-fails",
    severity: Severity::Warning,
    needs: Needs::Section,
    thresholds: &[],
    yields_to: &[],
    page: include_str!("../../docs/rules/corner-fails.md"),
    check: None,
};
