//! Findings: new, gone, waived since.

use super::paired::paired;
use super::{Change, FindingChange};
use crate::report::FindingReport;

/// Every finding of either report; a finding is known by its rule and its place in the flow.
pub(super) fn changes(before: &[FindingReport], after: &[FindingReport]) -> Vec<FindingChange> {
    let key = |finding: &'_ FindingReport| finding.title();
    let change = |(before, after): (Option<&FindingReport>, Option<&FindingReport>)| {
        let same = |a: &FindingReport, b: &FindingReport| {
            if a.word() == b.word() { Change::Same } else { Change::Changed }
        };
        FindingChange {
            change: Change::of(before, after, same),
            before: before.cloned(),
            after: after.cloned(),
        }
    };
    paired(before, after, key).into_iter().map(change).collect()
}
