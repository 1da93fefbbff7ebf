//! The library as Markdown: a heading an entry, a table of its keys.

use super::{Listing, key, range, said};
use crate::library::{Fact, GENERAL_CAUTION, HAZARDS, Told};
use crate::report::markdown::cell;

/// One section an entry, cautions at the end.
pub fn markdown(listing: &Listing<'_>) -> String {
    let mut text = String::new();
    if !listing.materials.is_empty() {
        text.push_str("# Materials\n\n");
    }
    for material in &listing.materials {
        section(&mut text, &material.name, &material.label, &material.facts(), &material.source);
    }
    if !listing.processes.is_empty() {
        text.push_str("# Processes\n\n");
    }
    for process in &listing.processes {
        section(&mut text, &process.name, "", &process.facts(), &process.source);
    }
    let hazards = listing.hazards();
    if !hazards.is_empty() {
        text.push_str("# Cautions\n\n");
        for hazard in HAZARDS.iter().filter(|hazard| hazards.contains(&hazard.word)) {
            text.push_str(&format!("- {}\n", hazard.caution));
        }
        text.push_str(&format!("\n{GENERAL_CAUTION}\n"));
    }
    text
}

fn section(text: &mut String, name: &str, label: &str, facts: &[Fact], source: &str) {
    text.push_str(&format!("## {}\n\n", cell(name)));
    if !label.is_empty() {
        text.push_str(&format!("{}\n\n", cell(label)));
    }
    text.push_str("| key | value | range | unit |\n|---|---|---|---|\n");
    for fact in facts {
        let (range, unit) = match &fact.told {
            Told::Number(number, unit) => (range(number), unit.symbol()),
            _ => (String::new(), ""),
        };
        let (key, said) = (cell(&key(fact)), cell(&said(&fact.told)));
        text.push_str(&format!("| {key} | {said} | {range} | {unit} |\n"));
    }
    text.push_str(&format!("\nSource: {}\n\n", cell(source)));
}
