//! Limits: verdicts that flipped, limits that came or went.

use super::paired::paired;
use super::{Change, LimitChange};
use crate::report::LimitReport;

/// Every limit of either report. A limit whose amount changed is still the same limit.
pub(super) fn changes(before: &[LimitReport], after: &[LimitReport]) -> Vec<LimitChange> {
    let key = |limit: &'_ LimitReport| (claim(&limit.text), limit.place());
    let change = |(before, after): (Option<&LimitReport>, Option<&LimitReport>)| {
        let same = |a: &LimitReport, b: &LimitReport| {
            if a.holds == b.holds { Change::Same } else { Change::Changed }
        };
        LimitChange {
            change: Change::of(before, after, same),
            before: before.cloned(),
            after: after.cloned(),
        }
    };
    paired(before, after, key).into_iter().map(change).collect()
}

/// What a limit claims, without its amount and its sites: they may change, the claim stays.
pub(super) fn claim(text: &str) -> String {
    const CLAUSES: &[&str] = &["for", "between", "against", "after"];
    let mut words = text.split_whitespace();
    let mut claim: Vec<&str> = words.next().into_iter().collect();
    while let Some(word) = words.next() {
        if ["<=", ">="].contains(&word) {
            claim.push(word);
        } else if CLAUSES.contains(&word) {
            claim.extend([word, words.next().unwrap_or_default()]);
        }
    }
    claim.join(" ")
}

#[cfg(test)]
mod tests {
    use super::claim;

    #[test]
    fn amounts_and_sites_are_no_part_of_a_claim() {
        assert_eq!(claim("void-top <= 35 nm at 32 nm in 99 % of spread"), "void-top <=");
        assert_eq!(
            claim("coupling-drop >= 20 % at 32 nm against no-gap"),
            "coupling-drop >= against no-gap"
        );
        assert_eq!(claim("sealed at 32, 48 nm"), "sealed");
        assert_eq!(claim("delay <= 60 ps for bus"), "delay <= for bus");
    }
}
