//! The library as text for a terminal: an overview, or entries key by key.

use super::{Listing, key, range, ranged, said};
use crate::library::{Arrival, Exponent, Fact, GENERAL_CAUTION, HAZARDS, Process, Ranged, Told};
use crate::report::columns::{Cell, columns};
use crate::report::paint::Paint;

/// One line an entry: what a flow needs to choose, with ranges.
pub fn overview(listing: &Listing<'_>, color: bool) -> String {
    let paint = Paint { on: color };
    let mut text = String::new();
    let number = |of: &Option<Ranged>| of.as_ref().map_or(String::new(), ranged);
    if !listing.materials.is_empty() {
        let mut rows = vec![heading(
            paint,
            &[
                "MATERIAL", "FAMILY", "K", "UOHM CM", "E GPA", "UP TO C", "PASSES", "LABEL",
                "SOURCE",
            ],
        )];
        rows.extend(listing.materials.iter().map(|material| {
            let passes = material.facts().into_iter().find(|fact| fact.path == ["passes"]);
            let mut row = vec![
                Cell::plain(&material.name),
                Cell::plain(&material.family),
                Cell::plain(number(&material.permittivity)),
                Cell::plain(number(&material.resistivity_uohm_cm)),
                Cell::plain(number(&material.youngs_modulus_gpa)),
                Cell::plain(number(&material.highest_temperature_c)),
                Cell::plain(passes.map_or(String::new(), |fact| said(&fact.told))),
                Cell::plain(&material.label),
            ];
            row.push(Cell::painted(&material.source, |source| paint.faint(source)));
            row
        }));
        text.push_str(&columns(&rows, 0));
    }
    if !listing.processes.is_empty() {
        if !text.is_empty() {
            text.push('\n');
        }
        let mut rows = vec![heading(
            paint,
            &["PROCESS", "VERB", "C", "ARRIVAL", "AMBIENT", "MATERIALS", "SOURCE"],
        )];
        rows.extend(listing.processes.iter().map(|process| {
            let verb = match process.default {
                true => format!("{} (default)", process.verb_word()),
                false => process.verb_word().to_owned(),
            };
            let mut row = vec![
                Cell::plain(&process.name),
                Cell::plain(verb),
                Cell::plain(number(&process.temperature_c)),
                Cell::plain(arrival(process)),
                Cell::plain(process.ambient_words().join(", ")),
                Cell::plain(materials(process)),
            ];
            row.push(Cell::painted(&process.source, |source| paint.faint(source)));
            row
        }));
        text.push_str(&columns(&rows, 0));
    }
    text
}

/// Entries key by key, each with its range, unit and source, and the cautions that apply.
pub fn entries(listing: &Listing<'_>, color: bool) -> String {
    let paint = Paint { on: color };
    let materials = listing.materials.iter().map(|material| {
        entry(&material.name, &material.label, &material.facts(), &material.source, paint)
    });
    let processes = listing
        .processes
        .iter()
        .map(|process| entry(&process.name, "", &process.facts(), &process.source, paint));
    let mut text = materials.chain(processes).collect::<Vec<_>>().join("\n");
    let hazards = listing.hazards();
    if !hazards.is_empty() {
        text.push('\n');
        for hazard in HAZARDS.iter().filter(|hazard| hazards.contains(&hazard.word)) {
            text.push_str(&format!("{} {}\n", paint.doubtful("caution:"), hazard.caution));
        }
        text.push_str(&format!("{GENERAL_CAUTION}\n"));
    }
    text
}

fn entry(name: &str, label: &str, facts: &[Fact], source: &str, paint: Paint) -> String {
    let rows: Vec<_> = facts
        .iter()
        .map(|fact| {
            let mut row = vec![Cell::plain(key(fact)), Cell::plain(said(&fact.told))];
            if let Told::Number(number, unit) = &fact.told {
                row.extend([Cell::plain(unit.symbol()), Cell::plain(range(number))]);
            }
            row
        })
        .collect();
    let title = format!("{}  {label}", paint.heading(name));
    let source = if source.is_empty() { "none given" } else { source };
    format!("{}\n{}  source: {source}\n", title.trim_end(), columns(&rows, 2))
}

fn heading(paint: Paint, words: &[&str]) -> Vec<Cell> {
    words.iter().map(|word| Cell::painted(word, |word| paint.heading(word))).collect()
}

fn materials(process: &Process) -> String {
    if process.materials.is_empty() { "any".to_owned() } else { process.materials.join(", ") }
}

/// The character of a process in a few words: `neutral 0.9 S 0.4 (0.3 to 0.6), directional 0.1`.
fn arrival(process: &Process) -> String {
    let Some(arrival) = &process.arrival else { return String::new() };
    let Arrival { conformal, directional, exponent, sticking, .. } = arrival;
    let mut parts = Vec::new();
    if conformal.value > 0.0 {
        parts.push(format!("conformal {}", ranged(conformal)));
    }
    if directional.value > 0.0 {
        let spread = match exponent {
            Exponent::Cosine(power) => format!("p {}", ranged(power)),
            Exponent::Vertical => "vertical".to_owned(),
        };
        parts.push(format!("directional {} {spread}", ranged(directional)));
    }
    if arrival.neutral() > 0.0 {
        parts.push(format!("sticking {}", ranged(sticking)));
    }
    parts.join(", ")
}
