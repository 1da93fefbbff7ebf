//! The library as tables: what is loaded, with ranges and sources; one file a format.

mod csv;
mod json;
mod markdown;
mod text;

pub use csv::csv;
pub use json::json;
pub use markdown::markdown;
pub use text::{entries, overview};

use crate::diag::nearest;
use crate::library::{Fact, Library, Material, Process, Ranged, Told};

/// The entries to show.
#[derive(Debug, Clone)]
pub struct Listing<'l> {
    /// Materials in order of name.
    pub materials: Vec<&'l Material>,
    /// Processes in order of name.
    pub processes: Vec<&'l Process>,
}

/// A word that fits no entry.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[error("nothing in the library fits `{word}`{}", .near.as_ref().map_or(String::new(), |near| format!("; did you mean `{near}`?")))]
pub struct NothingFits {
    /// The word.
    pub word: String,
    /// The nearest name.
    pub near: Option<String>,
}

impl<'l> Listing<'l> {
    /// The whole library, or where words are given the entries whose name, family or verb is
    /// one of them; a word that is none of these takes the entries whose name holds it.
    /// Capitals count nothing.
    ///
    /// # Errors
    /// A word fits no entry.
    pub fn of(library: &'l Library, words: &[String]) -> Result<Self, NothingFits> {
        let materials = library.materials.iter().map(|m| (m.name.as_str(), m.family.as_str()));
        let processes = library.processes.iter().map(|p| (p.name.as_str(), p.verb_word()));
        let entries: Vec<(&str, &str)> = materials.chain(processes).collect();
        let mut chosen = vec![words.is_empty(); entries.len()];
        for word in words {
            let is = |known: &str| known.to_lowercase() == word.to_lowercase();
            let holds = |known: &str| known.to_lowercase().contains(&word.to_lowercase());
            let whole = entries.iter().any(|(name, class)| is(name) || is(class));
            let fits: Vec<bool> = entries
                .iter()
                .map(|(name, class)| if whole { is(name) || is(class) } else { holds(name) })
                .collect();
            if !fits.contains(&true) {
                let near = nearest(word, entries.iter().map(|(name, _)| *name));
                return Err(NothingFits { word: word.clone(), near: near.map(str::to_owned) });
            }
            chosen.iter_mut().zip(fits).for_each(|(chosen, fits)| *chosen |= fits);
        }
        let (of_materials, of_processes) = chosen.split_at(library.materials.len());
        Ok(Self {
            materials: kept(&library.materials, of_materials),
            processes: kept(&library.processes, of_processes),
        })
    }

    /// Hazards of the entries, each once, in order of first mention.
    fn hazards(&self) -> Vec<&'l str> {
        let materials = self.materials.iter().flat_map(|m| &m.hazards);
        let mut words: Vec<&str> = Vec::new();
        for word in materials.chain(self.processes.iter().flat_map(|p| &p.hazards)) {
            if !words.contains(&word.as_str()) {
                words.push(word);
            }
        }
        words
    }
}

fn kept<'l, T>(all: &'l [T], chosen: &[bool]) -> Vec<&'l T> {
    all.iter().zip(chosen).filter(|(_, chosen)| **chosen).map(|(entry, _)| entry).collect()
}

/// A number in the shortest form that reads back the same; powers of ten for the far ends.
fn number(value: f64) -> String {
    if value != 0.0 && !(1e-4..1e7).contains(&value.abs()) {
        format!("{value:e}")
    } else {
        value.to_string()
    }
}

/// A range: `4.1 to 4.5`; nothing where the number has none.
fn range(ranged: &Ranged) -> String {
    if ranged.low == ranged.high {
        String::new()
    } else {
        format!("{} to {}", number(ranged.low), number(ranged.high))
    }
}

/// A number with its range in brackets: `4.2 (4.1 to 4.5)`.
fn ranged(number_: &Ranged) -> String {
    let range = range(number_);
    let value = number(number_.value);
    if range.is_empty() { value } else { format!("{value} ({range})") }
}

/// What a fact says, without its range and unit.
fn said(told: &Told) -> String {
    match told {
        Told::Number(value, _) => number(value.value),
        Told::Word(word) => word.clone(),
        Told::Words(words) => words.join(", "),
        Told::Flag(flag) => flag.to_string(),
    }
}

/// What a fact says, range and unit included: `4.2 (4.1 to 4.5) nm`.
pub fn told(fact: &Fact) -> String {
    match &fact.told {
        Told::Number(number, unit) => format!("{} {}", ranged(number), unit.symbol()),
        _ => said(&fact.told),
    }
    .trim_end()
    .to_owned()
}

/// Key of a fact as one word: `rates.SiN`.
fn key(fact: &Fact) -> String {
    fact.path.join(".")
}

#[cfg(test)]
mod tests {
    use super::*;

    fn names(words: &[&str]) -> Result<Vec<String>, NothingFits> {
        let library = Library::built_in();
        let words: Vec<String> = words.iter().map(|&word| word.to_owned()).collect();
        let listing = Listing::of(&library, &words)?;
        let materials = listing.materials.iter().map(|m| m.name.clone());
        Ok(materials.chain(listing.processes.iter().map(|p| p.name.clone())).collect())
    }

    #[test]
    fn a_word_is_a_name_a_family_a_verb_or_part_of_a_name() {
        assert_eq!(names(&["cu"]).unwrap(), ["Cu"]);
        assert_eq!(names(&["nitride", "polish"]).unwrap(), ["SiN", "SiN-lpcvd", "cmp"]);
        assert_eq!(names(&["-hf"]).unwrap(), ["dilute-hf", "vapor-hf"]);
        let unknown = names(&["silan-pecvd"]).unwrap_err().to_string();
        assert_eq!(
            unknown,
            "nothing in the library fits `silan-pecvd`; did you mean `silane-pecvd`?"
        );
    }

    #[test]
    fn every_format_tells_range_unit_and_source() {
        let library = Library::built_in();
        let listing = Listing::of(&library, &["SiCN".to_owned()]).unwrap();
        let source = "from memory; textbook range; stable to 500 °C confirmed by look-up";
        let csv = csv(&listing);
        let line = format!("material,SiCN,youngs_modulus_gpa,110,80,150,GPa,{source}");
        assert!(csv.lines().any(|written| written == line), "{csv}");
        let markdown = markdown(&listing);
        assert!(markdown.contains("| youngs_modulus_gpa | 110 | 80 to 150 | GPa |"), "{markdown}");
        let json: serde_json::Value = serde_json::from_str(&json(&listing)).unwrap();
        assert_eq!(json["materials"]["SiCN"]["youngs_modulus_gpa"]["high"], 150.0);
        assert_eq!(json["materials"]["SiCN"]["source"], source);
        let entries = entries(&listing, false);
        let words: Vec<&str> = entries.split_whitespace().collect();
        assert!(words.join(" ").contains("youngs_modulus_gpa 110 GPa 80 to 150"), "{entries}");
        assert!(overview(&listing, false).contains("110 (80 to 150)"));
    }

    #[test]
    fn far_numbers_take_powers_of_ten() {
        assert_eq!(number(5e18), "5e18");
        assert_eq!(number(1e-6), "1e-6");
        assert_eq!(number(0.0), "0");
        assert_eq!(number(-150.0), "-150");
        assert_eq!(ranged(&Ranged { value: 2.0, low: 1.5, high: 3.0 }), "2 (1.5 to 3)");
    }
}
