//! Pages on rules, quantities, materials and processes, from what is compiled in and loaded.

use std::fmt::Write;

use serde::Serialize;

use crate::flow::Quantity;
use crate::library::{
    ARRIVAL_NUMBERS, CopperBarrier, Exponent, Library, MATERIAL_NUMBERS, Material, NumberKey,
    PROCESS_NUMBERS, Process, Ranged,
};
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
    let rules = REGISTRY.iter().map(|rule| (rule.name.to_owned(), rule.summary()));
    let quantities = Quantity::ALL
        .iter()
        .map(|&quantity| (quantity.name().to_owned(), first_paragraph(measure::page(quantity))));
    let materials = library.materials.iter().map(|m| (m.name.clone(), m.label.clone()));
    let processes = library.processes.iter().map(|process| {
        let what = format!("{} {}", word(&process.verb), process.materials.join(", "));
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
    if let Some(id) = library.material_id(name) {
        return Some(material_page(library.material(id)));
    }
    library.process(name).map(process_page)
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

fn material_page(material: &Material) -> String {
    let mut text = format!("# {}\n\n{}\n\n", material.name, material.label);
    let mut fact = |key: &str, value: String| {
        if !value.is_empty() {
            let _ = writeln!(text, "- {key}: {value}");
        }
    };
    fact("kind", word(&material.kind));
    fact("family", material.family.clone());
    for number in MATERIAL_NUMBERS {
        fact(number.name, shown(number, material));
    }
    fact("oxidizes", word(&material.oxidizes));
    fact("needs-barrier", if material.needs_barrier { "yes".into() } else { String::new() });
    fact(
        "copper-barrier",
        match material.copper_barrier {
            CopperBarrier::No => "no".into(),
            CopperBarrier::Yes => "yes".into(),
            CopperBarrier::FromNm(nm) => format!("from {nm} nm"),
        },
    );
    fact("passes", material.passes.map_or_else(String::new, |passes| word(&passes)));
    fact(
        "leaves-at",
        match material.leaves_at_c {
            Some([low, high]) => format!("{low} to {high} °C"),
            None => String::new(),
        },
    );
    fact("poor-adhesion-to", material.poor_adhesion_to.join(", "));
    fact("hazards", material.hazards.join(", "));
    let _ = write!(text, "\n## Source\n\n{}\n", material.source);
    text
}

fn process_page(process: &Process) -> String {
    let materials = if process.materials.is_empty() {
        "any material".to_owned()
    } else {
        process.materials.join(", ")
    };
    let verb = word(&process.verb);
    let default = if process.default { ", taken without `by`" } else { "" };
    let mut text = format!("# {}\n\n{verb}: {materials}{default}\n\n", process.name);
    let mut fact = |key: &str, value: String| {
        if !value.is_empty() {
            let _ = writeln!(text, "- {key}: {value}");
        }
    };
    for number in PROCESS_NUMBERS {
        fact(number.name, shown(number, process));
    }
    fact("ambient", process.ambient.iter().map(word).collect::<Vec<_>>().join(", "));
    if let Some(arrival) = &process.arrival {
        for number in ARRIVAL_NUMBERS {
            fact(number.name, shown(number, process));
        }
        if arrival.exponent == Exponent::Vertical {
            fact("exponent", "vertical".into());
        }
    }
    fact("drawn-openings", if process.drawn_openings { "yes".into() } else { String::new() });
    let table = |numbers: &std::collections::BTreeMap<String, Ranged>| {
        numbers
            .iter()
            .map(|(name, number)| format!("{name} {}", ranged(*number)))
            .collect::<Vec<_>>()
            .join("; ")
    };
    fact("grows-on", table(&process.grows_on));
    fact("rates", table(&process.rates));
    fact("hazards", process.hazards.join(", "));
    let _ = write!(text, "\n## Source\n\n{}\n", process.source);
    text
}

fn shown<T>(number: &NumberKey<T>, of: &T) -> String {
    let unit = number.unit.symbol();
    (number.get)(of)
        .map_or_else(String::new, |n| format!("{} {unit}", ranged(n)).trim_end().to_owned())
}

/// `4.2`, or with its range `4.2 (4.1 to 4.5)`.
fn ranged(number: Ranged) -> String {
    if number.low == number.high {
        number.value.to_string()
    } else {
        format!("{} ({} to {})", number.value, number.low, number.high)
    }
}

/// The word by which a value is written in files.
fn word(value: &impl Serialize) -> String {
    match serde_json::to_value(value) {
        Ok(serde_json::Value::String(word)) => word,
        _ => String::new(),
    }
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
