//! The library as CSV (RFC 4180): one line a key of an entry.

use super::{Listing, key, number, said};
use crate::library::{Fact, Told};
use crate::report::csv::quoted;

/// Columns entry, name, key, value, low, high, unit, source.
pub fn csv(listing: &Listing<'_>) -> String {
    let mut text = String::from("entry,name,key,value,low,high,unit,source\n");
    for material in &listing.materials {
        lines(&mut text, ["material", &material.name], &material.facts(), &material.source);
    }
    for process in &listing.processes {
        lines(&mut text, ["process", &process.name], &process.facts(), &process.source);
    }
    text
}

fn lines(text: &mut String, entry: [&str; 2], facts: &[Fact], source: &str) {
    for fact in facts {
        let (low, high, unit) = match &fact.told {
            Told::Number(range, unit) => {
                (number(range.low), number(range.high), unit.symbol().to_owned())
            }
            _ => Default::default(),
        };
        let [what, name] = entry;
        let cells = [what, name, &key(fact), &said(&fact.told), &low, &high, &unit, source];
        text.push_str(&cells.map(quoted).join(","));
        text.push('\n');
    }
}
