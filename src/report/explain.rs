//! Pages on rules, quantities, materials and processes, from what is compiled in and loaded.

use std::fmt::Write;

use serde::Serialize;

use super::library::{Listing, entries};
use crate::flow::Quantity;
use crate::library::Library;
use crate::measure;
use crate::rules::{self, REGISTRY, Rule};

/// All names that have a page: rules, quantities, materials, processes.
pub fn names(library: &Library) -> Vec<&str> {
    let rules = REGISTRY.iter().map(|rule| rule.name);
    let quantities = Quantity::ALL.iter().map(|quantity| quantity.name());
    let materials = library.materials.iter().map(|material| material.name.as_str());
    let processes = library.processes.iter().map(|process| process.name.as_str());
    rules.chain(quantities).chain(materials).chain(processes).collect()
}

/// The list of all pages, a line each, by kind.
pub fn list(library: &Library) -> String {
    let rules = REGISTRY.iter().map(|rule| (rule.name.to_owned(), first_sentence(&rule.summary())));
    let quantities = Quantity::ALL.iter().map(|&quantity| {
        (quantity.name().to_owned(), first_sentence(&first_paragraph(measure::page(quantity))))
    });
    let materials = library.materials.iter().map(|m| (m.name.clone(), m.label.clone()));
    let processes = library.processes.iter().map(|process| {
        let what = format!("{} {}", process.verb_word(), process.materials.join(", "));
        (process.name.clone(), what.trim_end().to_owned())
    });
    let mut text = String::new();
    section(&mut text, "Rules", rules.collect());
    section(&mut text, "Quantities", quantities.collect());
    section(&mut text, "Materials", materials.collect());
    section(&mut text, "Processes", processes.collect());
    text
}

fn section(text: &mut String, title: &str, lines: Vec<(String, String)>) {
    if !text.is_empty() {
        text.push('\n');
    }
    let _ = writeln!(text, "{title}");
    let width = lines.iter().map(|(name, _)| name.chars().count()).max().unwrap_or(0);
    for (name, what) in lines {
        let line = format!("  {name:width$}  {what}");
        let _ = writeln!(text, "{}", line.trim_end());
    }
}

/// The page of a name; `None` where nothing has that name.
pub fn page(name: &str, library: &Library) -> Option<String> {
    if let Some(rule) = rules::rule(name) {
        return Some(rule_page(rule, library));
    }
    if let Some(&quantity) = Quantity::ALL.iter().find(|quantity| quantity.name() == name) {
        return Some(measure::page(quantity).to_owned());
    }
    let material = library.material_id(name).map(|id| library.material(id));
    let process = library.process(name);
    let listing = Listing {
        materials: material.into_iter().collect(),
        processes: process.into_iter().collect(),
    };
    (material.is_some() || process.is_some()).then(|| entry_page(name, &listing))
}

/// A rule's page, after it what it needs and its settings as loaded.
fn rule_page(rule: &Rule, library: &Library) -> String {
    let set = library.rules.get(rule.name);
    let mut text = format!("{}\n## Settings\n\n", rule.page);
    let severity = set.and_then(|set| set.severity);
    let _ = writeln!(
        text,
        "- severity: {}{}",
        word(&severity.unwrap_or(rule.severity)),
        if severity.is_some() {
            format!(" (default {})", word(&rule.severity))
        } else {
            String::new()
        },
    );
    let _ = writeln!(text, "- judged from: {}", rule.needs.name());
    for threshold in rule.thresholds {
        let own = set.and_then(|set| set.thresholds.get(threshold.key));
        let default = threshold.default;
        let value = match own {
            Some(own) => format!("{own} (default {default})"),
            None => default.to_string(),
        };
        let _ = writeln!(text, "- {}: {value}; {}", threshold.key, threshold.meaning);
    }
    let _ = write!(text, "\nA library file sets them under `rules: {}:`.\n", rule.name);
    text
}

/// Key by key, with ranges, source and cautions.
fn entry_page(name: &str, listing: &Listing<'_>) -> String {
    format!("# {name}\n\n{}", entries(listing, false))
}

/// The word by which a value is written in files.
fn word(value: &impl Serialize) -> String {
    match serde_json::to_value(value) {
        Ok(serde_json::Value::String(word)) => word,
        _ => String::new(),
    }
}

fn first_sentence(paragraph: &str) -> String {
    let end = paragraph.find(". ").map_or(paragraph.len(), |at| at + 1);
    paragraph[..end].to_owned()
}

fn first_paragraph(page: &str) -> String {
    let mut paragraphs = page.split("\n\n").map(str::trim);
    let first = paragraphs.find(|text| !text.is_empty() && !text.starts_with('#'));
    first.unwrap_or_default().split_whitespace().collect::<Vec<_>>().join(" ")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_name_of_the_list_has_a_page_that_opens_with_it() {
        let library = Library::built_in();
        let list = list(&library);
        for name in names(&library) {
            let page = page(name, &library).unwrap();
            assert_eq!(page.lines().next(), Some(format!("# {name}").as_str()));
            assert!(list.contains(&format!("  {name}  ")), "{name}");
        }
    }
}
