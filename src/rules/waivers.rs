//! What is said once a run, after all its variants.

use super::{Finding, REGISTRY, corner_fails, data_missing, rule, stale_waiver};
use crate::diag::nearest;
use crate::flow::{Flow, Waiver};

/// Ends a run: missing numbers are told once, waivers that waived nothing are found.
///
/// `judged` are the indices of the variants whose findings are given. A waiver is stale when
/// nothing it names was found in the variants it speaks of; while some of these were not
/// judged, it cannot be told and is not. The same holds for `corner-fails` while no `corners` were
/// judged.
pub fn finish(
    flow: &Flow,
    judged: &[usize],
    corners: bool,
    mut findings: Vec<Finding>,
) -> Vec<Finding> {
    let mut told: Vec<String> = Vec::new();
    findings.retain(|finding| {
        let again = finding.rule == data_missing::RULE.name && told.contains(&finding.message);
        if finding.rule == data_missing::RULE.name && !again {
            told.push(finding.message.clone());
        }
        !again
    });
    for (place, waiver) in flow.waivers.iter().enumerate() {
        let used = findings.iter().any(|finding| finding.waiver == Some(place));
        let was_judged = corners || waiver.rule.value != corner_fails::RULE.name;
        if !used && was_judged && all_judged(flow, waiver, judged) {
            findings.push(stale(flow, waiver));
        }
    }
    findings
}

/// Whether every variant of which a waiver speaks was judged; references never are.
fn all_judged(flow: &Flow, waiver: &Waiver, judged: &[usize]) -> bool {
    let referred = |at: usize| {
        flow.limits.iter().any(|limit| {
            matches!(limit.against, Some(crate::flow::Against::Split(split)) if split == at)
        })
    };
    flow.variants.iter().enumerate().all(|(at, variant)| {
        let split = variant.split.as_ref().map(|split| split.value.as_str());
        let speaks = waiver.in_split.as_deref().is_none_or(|wanted| split == Some(wanted));
        !speaks || referred(at) || judged.contains(&at)
    })
}

fn stale(flow: &Flow, waiver: &Waiver) -> Finding {
    let name = &waiver.rule.value;
    let (message, help) = if rule(name).is_none() {
        let near = nearest(name, REGISTRY.iter().map(|rule| rule.name));
        let help = near.map(|near| format!("the nearest rule is `{near}`"));
        (format!("there is no rule `{name}` to waive"), help)
    } else {
        let help = "take it out, or correct the operation, site or split that it names";
        (format!("the waiver of {name} matches no finding"), Some(help.to_owned()))
    };
    let rule = &stale_waiver::RULE;
    let settings = flow.library.rules.get(rule.name);
    Finding {
        rule: rule.name,
        severity: settings.and_then(|s| s.severity).unwrap_or(rule.severity),
        step: None,
        split: waiver.in_split.clone(),
        site: None,
        message,
        help,
        place: None,
        exposed_nm: None,
        span: waiver.span,
        waiver: None,
    }
}
