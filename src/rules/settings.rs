//! What library files may set: rules and thresholds that exist, thresholds that can be.

use super::{REGISTRY, rule};
use crate::diag::nearest;
use crate::library::Library;

/// Whether a rule has a threshold of this key.
pub fn known_threshold(rule_name: &str, key: &str) -> bool {
    rule(rule_name).is_some_and(|rule| rule.thresholds.iter().any(|t| t.key == key))
}

/// What the `rules:` of the loaded library files name and no rule has, each with its nearest.
pub fn check_settings(library: &Library) -> Vec<String> {
    let mut wrong = Vec::new();
    for (name, settings) in &library.rules {
        let Some(rule) = rule(name) else {
            let near = nearest(name, REGISTRY.iter().map(|rule| rule.name));
            wrong.push(format!("there is no rule `{name}`{}", hint(near)));
            continue;
        };
        for (key, value) in &settings.thresholds {
            if !known_threshold(name, key) {
                let near = nearest(key, rule.thresholds.iter().map(|t| t.key));
                wrong.push(format!("rule `{name}` has no threshold `{key}`{}", hint(near)));
            } else if !(value.is_finite() && *value >= 0.0) {
                wrong.push(format!("threshold `{key}` of rule `{name}` must not be negative"));
            }
        }
    }
    wrong
}

fn hint(near: Option<&str>) -> String {
    near.map_or_else(String::new, |near| format!("; nearest is `{near}`"))
}
