//! `data-missing`: numbers that rules wanted are not in the library.

use crate::diag::Severity;
use super::frame::{Needs, Rule};

pub static RULE: Rule = Rule {
    name: "data-missing",
    severity: Severity::Note,
    needs: Needs::Material,
    thresholds: &[],
    yields_to: &[],
    page: include_str!("../../docs/rules/data-missing.md"),
    check: None,
};
