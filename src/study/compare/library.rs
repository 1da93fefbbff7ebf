//! What the libraries of two flows say differently: materials, processes, settings, rules.

use std::collections::BTreeMap;

use super::LibraryChange;
use crate::library::{Fact, Library};
use crate::report::library::told;

/// Every key of either library that the other says differently, or not at all.
pub(super) fn changes(before: &Library, after: &Library) -> Vec<LibraryChange> {
    let (before, after) = (said(before), said(after));
    let mut keys: Vec<_> = before.keys().chain(after.keys()).collect();
    keys.sort_unstable();
    keys.dedup();
    let change = |(entry, key): &(String, String)| {
        let at = &(entry.clone(), key.clone());
        let (before, after) = (before.get(at), after.get(at));
        (before != after).then(|| LibraryChange {
            entry: entry.clone(),
            key: key.clone(),
            before: before.cloned(),
            after: after.cloned(),
        })
    };
    keys.into_iter().filter_map(change).collect()
}

/// Everything that a library says, by entry and key.
fn said(library: &Library) -> BTreeMap<(String, String), String> {
    let materials = library.materials.iter().map(|m| (&m.name, m.facts(), &m.source));
    let processes = library.processes.iter().map(|p| (&p.name, p.facts(), &p.source));
    let mut all = BTreeMap::new();
    for (name, facts, source) in materials.chain(processes) {
        let fact = |fact: &Fact| ((name.clone(), fact.path.join(".")), told(fact));
        all.extend(facts.iter().map(fact));
        all.insert((name.clone(), "source".to_owned()), source.clone());
    }
    let width = format!("{} nm", library.settings.closure_width_nm);
    all.insert(("settings".to_owned(), "closure_width_nm".to_owned()), width);
    for (rule, set) in &library.rules {
        let thresholds = set.thresholds.iter().map(|(key, value)| (key.clone(), value.to_string()));
        let severity =
            set.severity.map(|severity| ("severity".to_owned(), format!("{severity:?}")));
        let entry = |(key, value)| ((rule.clone(), key), value);
        all.extend(thresholds.chain(severity).map(entry));
    }
    all
}
