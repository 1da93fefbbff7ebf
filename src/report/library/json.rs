//! The library as JSON: the keys of library files, every number as `{value, low, high}`.

use serde_json::{Map, Value, json};

use super::Listing;
use crate::library::{Fact, Told};

/// `{"schema": 1, "tool": …, "materials": {…}, "processes": {…}}`.
pub fn json(listing: &Listing<'_>) -> String {
    let materials = listing.materials.iter().map(|material| {
        let mut entry = facts(&material.facts());
        entry.insert("label".to_owned(), material.label.clone().into());
        entry.insert("source".to_owned(), material.source.clone().into());
        (material.name.clone(), Value::Object(entry))
    });
    let processes = listing.processes.iter().map(|process| {
        let mut entry = facts(&process.facts());
        entry.insert("source".to_owned(), process.source.clone().into());
        (process.name.clone(), Value::Object(entry))
    });
    let whole = json!({
        "schema": 1,
        "tool": concat!("gapwright ", env!("CARGO_PKG_VERSION")),
        "materials": materials.collect::<Map<_, _>>(),
        "processes": processes.collect::<Map<_, _>>(),
    });
    format!("{whole:#}\n")
}

fn facts(facts: &[Fact]) -> Map<String, Value> {
    let mut entry = Map::new();
    for fact in facts {
        let value = match &fact.told {
            Told::Number(range, _) => {
                json!({"value": range.value, "low": range.low, "high": range.high})
            }
            Told::Word(word) => json!(word),
            Told::Words(words) => json!(words),
            Told::Flag(flag) => json!(flag),
        };
        match fact.path.as_slice() {
            [outer, inner] => {
                let table = entry.entry(outer).or_insert_with(|| json!({}));
                table[inner.as_str()] = value;
            }
            path => {
                entry.insert(path.concat(), value);
            }
        }
    }
    entry
}
