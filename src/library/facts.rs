//! An entry of the library told key by key, for tables and pages.

use std::collections::BTreeMap;

use super::numbers::{ARRIVAL_NUMBERS, MATERIAL_NUMBERS, PROCESS_NUMBERS, Unit};
use super::words::{AMBIENTS, KINDS, OXIDATIONS, PASSES, VERBS, word_of};
use super::{CopperBarrier, Exponent, Material, Process, Ranged, Verb};

/// One key of an entry and what it says.
#[derive(Debug, Clone, PartialEq)]
pub struct Fact {
    /// Its keys from the entry inward: `["rates", "SiN"]`.
    pub path: Vec<String>,
    /// What it says.
    pub told: Told,
}

/// What a key says.
#[derive(Debug, Clone, PartialEq)]
pub enum Told {
    /// A number with its range and unit.
    Number(Ranged, Unit),
    /// A word or a text.
    Word(String),
    /// Names.
    Words(Vec<String>),
    /// True or false.
    Flag(bool),
}

impl Fact {
    fn new(path: &[&str], told: Told) -> Self {
        Self { path: path.iter().map(|&key| key.to_owned()).collect(), told }
    }

    fn word(key: &str, word: &str) -> Self {
        Self::new(&[key], Told::Word(word.to_owned()))
    }

    fn words(key: &str, words: &[String]) -> Option<Self> {
        (!words.is_empty()).then(|| Self::new(&[key], Told::Words(words.to_vec())))
    }
}

impl Material {
    /// What it is, as written in a library file.
    pub fn kind_word(&self) -> &'static str {
        word_of(&KINDS, Some(self.kind))
    }

    /// All that is given of it but name, label and source, in the order of the documentation.
    pub fn facts(&self) -> Vec<Fact> {
        let mut facts =
            vec![Fact::word("kind", self.kind_word()), Fact::word("family", &self.family)];
        facts.extend(MATERIAL_NUMBERS.iter().filter_map(|number| {
            let range = (number.get)(self)?;
            Some(Fact::new(&[number.key], Told::Number(range, number.unit)))
        }));
        facts.push(Fact::word("oxidizes", word_of(&OXIDATIONS, Some(self.oxidizes))));
        facts.push(Fact::new(
            &["copper_barrier"],
            match self.copper_barrier {
                CopperBarrier::No => Told::Flag(false),
                CopperBarrier::Yes => Told::Flag(true),
                CopperBarrier::FromNm(nm) => Told::Number(Ranged::exact(nm), Unit::Nanometre),
            },
        ));
        facts.push(Fact::new(&["needs_barrier"], Told::Flag(self.needs_barrier)));
        if let Some(passes) = self.passes {
            facts.push(Fact::word("passes", word_of(&PASSES, Some(passes))));
        }
        if let Some([low, high]) = self.leaves_at_c {
            let end = |key, at| {
                Fact::new(&["leaves_at_c", key], Told::Number(Ranged::exact(at), Unit::Celsius))
            };
            facts.extend([end("low", low), end("high", high)]);
        }
        facts.extend(Fact::words("poor_adhesion_to", &self.poor_adhesion_to));
        facts.extend(Fact::words("hazards", &self.hazards));
        facts
    }
}

impl Process {
    /// The verb that it serves, as written in a library file.
    pub fn verb_word(&self) -> &'static str {
        word_of(&VERBS, Some(self.verb))
    }

    /// The ambients, as written in a library file.
    pub fn ambient_words(&self) -> Vec<String> {
        self.ambient.iter().map(|at| word_of(&AMBIENTS, Some(*at)).to_owned()).collect()
    }

    /// What is given of it but name and source, in the order of the documentation.
    pub fn facts(&self) -> Vec<Fact> {
        let mut facts = vec![Fact::word("verb", self.verb_word())];
        facts.push(Fact::new(&["default"], Told::Flag(self.default)));
        facts.extend(Fact::words("materials", &self.materials));
        facts.extend(Fact::words("ambient", &self.ambient_words()));
        // What concerns one verb only is told of that verb only.
        let mute = |key: &str| key == "shrinks" && self.verb != Verb::Cure;
        let numbers = PROCESS_NUMBERS.iter().filter(|number| !mute(number.key));
        facts.extend(numbers.filter_map(|number| {
            let range = (number.get)(self)?;
            Some(Fact::new(&[number.key], Told::Number(range, number.unit)))
        }));
        facts.extend(ARRIVAL_NUMBERS.iter().filter_map(|number| {
            let range = (number.get)(self)?;
            Some(Fact::new(&["arrival", number.key], Told::Number(range, number.unit)))
        }));
        if self.arrival.as_ref().is_some_and(|arrival| arrival.exponent == Exponent::Vertical) {
            facts.push(Fact::new(&["arrival", "exponent"], Told::Word("vertical".to_owned())));
        }
        facts.extend(table("grows_on", &self.grows_on));
        facts.extend(table("rates", &self.rates));
        if self.verb == Verb::Release {
            facts.push(Fact::new(&["drawn_openings"], Told::Flag(self.drawn_openings)));
        }
        facts.extend(Fact::words("hazards", &self.hazards));
        facts
    }
}

fn table(key: &str, numbers: &BTreeMap<String, Ranged>) -> impl Iterator<Item = Fact> {
    numbers
        .iter()
        .map(move |(name, range)| Fact::new(&[key, name], Told::Number(*range, Unit::One)))
}
