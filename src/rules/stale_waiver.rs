//! `stale-waiver`: a waiver matches no finding.

use crate::diag::Severity;
use super::frame::{Needs, Rule};

pub static RULE: Rule = Rule {
    name: "stale-waiver",
    severity: Severity::Warning,
    needs: Needs::Order,
    thresholds: &[],
    yields_to: &[],
    page: include_str!("../../docs/rules/stale-waiver.md"),
    check: None,
};
