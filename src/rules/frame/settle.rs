//! From what the checks handed in to findings: one a fact, waived where a waiver says so, in
//! the order of the text.

use std::collections::{BTreeMap, BTreeSet};

use super::findings::Found;
use super::{Context, Findings, Rule};
use crate::diag::Severity;
use crate::flow::Waiver;
use crate::rules::Finding;

/// Runs rules on one variant.
pub fn run(rules: &[&'static Rule], context: &Context<'_>) -> Vec<Finding> {
    let trays: Vec<Findings<'_>> = rules
        .iter()
        .map(|rule| {
            let mut tray = Findings::of(rule, context);
            if let Some(check) = rule.check {
                check(context, &mut tray);
            }
            tray
        })
        .collect();
    let fired: BTreeSet<_> = trays
        .iter()
        .flat_map(|tray| tray.found.iter().map(|f| (tray.rule.name, f.step, f.site.clone())))
        .collect();
    let told_better = |rule: &Rule, found: &Found| {
        fired.iter().any(|(name, step, site)| {
            rule.yields_to.contains(name)
                && *step == found.step
                && (site.is_none() || found.site.is_none() || *site == found.site)
        })
    };
    let mut findings = Vec::new();
    for (place, tray) in trays.iter().enumerate() {
        let found = tray.found.iter().filter(|found| !told_better(tray.rule, found));
        for finding in gather(tray, found, context) {
            findings.push((finding.span.start, place, finding));
        }
    }
    // Stable: facts of one rule on one step stay in the order of the check.
    findings.sort_by_key(|(start, place, _)| (*start, *place));
    let mut findings: Vec<_> = findings.into_iter().map(|(_, _, finding)| finding).collect();
    findings.extend(missing(&trays, context));
    findings
}

/// Findings of one rule from facts that were found outside its check.
pub fn told(rule: &'static Rule, context: &Context<'_>, found: Vec<Found>) -> Vec<Finding> {
    let tray = Findings { found, ..Findings::of(rule, context) };
    gather(&tray, tray.found.iter(), context)
}

/// One finding a fact; the sites at which it holds become one list.
fn gather<'f>(
    tray: &Findings<'_>,
    found: impl Iterator<Item = &'f Found>,
    context: &Context<'_>,
) -> Vec<Finding> {
    let split = context.variant.split.as_ref().map(|split| split.value.as_str());
    let mut facts: Vec<(&Found, Option<usize>, Vec<&str>)> = Vec::new();
    for one in found {
        let waiver = context
            .flow
            .waivers
            .iter()
            .position(|waiver| waives(waiver, tray.rule.name, one, split, context));
        let same = facts.iter_mut().find(|(other, other_waiver, _)| {
            other.step == one.step
                && other.span == one.span
                && other.severity == one.severity
                && *other_waiver == waiver
                && match (&other.fact, &one.fact) {
                    (None, None) => other.message == one.message,
                    (a, b) => a == b,
                }
        });
        match same {
            Some((kept, _, sites)) => {
                sites.extend(one.site.as_deref());
                if one.weight > kept.weight {
                    *kept = one;
                }
            }
            None => facts.push((one, waiver, one.site.as_deref().into_iter().collect())),
        }
    }
    let severity_set = tray.settings.and_then(|settings| settings.severity);
    facts
        .into_iter()
        .map(|(found, waiver, sites)| Finding {
            rule: tray.rule.name,
            severity: severity_set.or(found.severity).unwrap_or(tray.rule.severity),
            step: found.step,
            split: split.map(str::to_owned),
            site: site_list(&sites, context),
            message: found.message.clone(),
            help: found.help.clone(),
            place: found.place,
            exposed_nm: found.exposed_nm,
            span: found.span,
            waiver,
        })
        .collect()
}

/// Sites in the order of the wafer; none when it is all of them or there was none.
fn site_list(sites: &[&str], context: &Context<'_>) -> Option<String> {
    let all = context.variant.sites();
    let named: Vec<&str> =
        all.iter().map(|site| site.label()).filter(|label| sites.contains(label)).collect();
    let everywhere = named.len() == all.len() && all.len() > 1;
    (!named.is_empty() && !everywhere).then(|| named.join(", "))
}

fn waives(
    waiver: &Waiver,
    rule: &str,
    found: &Found,
    split: Option<&str>,
    context: &Context<'_>,
) -> bool {
    let op = found.step.map(|step| context.variant.steps[step].op);
    waiver.rule.value == rule
        && waiver.on.is_none_or(|on| op == Some(on))
        && waiver.in_split.as_deref().is_none_or(|wanted| split == Some(wanted))
        && waiver.at.as_ref().is_none_or(|at| {
            found.site.as_deref().is_some_and(|site| at.iter().any(|s| s.label() == site))
        })
}

/// What the rules could not judge for lack of numbers, as one note.
fn missing(trays: &[Findings<'_>], context: &Context<'_>) -> Option<Finding> {
    let mut keys: BTreeMap<String, BTreeSet<&str>> = BTreeMap::new();
    for tray in trays {
        for ((owner, key), rule) in &tray.missing {
            keys.entry(format!("{owner}: {key}")).or_default().insert(rule);
        }
    }
    let lines: Vec<String> = keys
        .iter()
        .map(|(key, rules)| {
            let rules: Vec<_> = rules.iter().copied().collect();
            format!("{key} ({})", rules.join(", "))
        })
        .collect();
    (!lines.is_empty()).then(|| Finding {
        rule: crate::rules::data_missing::RULE.name,
        severity: Severity::Note,
        step: None,
        split: context.variant.split.as_ref().map(|split| split.value.clone()),
        site: None,
        message: format!("not judged for want of numbers: {}", lines.join("; ")),
        help: Some("give the numbers in a library file and `use` it".into()),
        place: None,
        exposed_nm: None,
        span: context.variant.wafer.span,
        waiver: None,
    })
}
