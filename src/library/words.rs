//! The words that a library file may use, one list a key.

use super::{Ambient, Kind, Oxidation, Passes, Verb};

/// The word of a value.
pub(super) fn word_of<T: Copy + PartialEq>(
    words: &[(&'static str, T)],
    value: Option<T>,
) -> &'static str {
    words.iter().find(|(_, known)| Some(*known) == value).map_or("", |(word, _)| word)
}

pub(super) const KINDS: [(&str, Kind); 5] = [
    ("dielectric", Kind::Dielectric),
    ("conductor", Kind::Conductor),
    ("semiconductor", Kind::Semiconductor),
    ("sacrificial", Kind::Sacrificial),
    ("resist", Kind::Resist),
];

pub(super) const OXIDATIONS: [(&str, Oxidation); 4] = [
    ("none", Oxidation::None),
    ("low", Oxidation::Low),
    ("medium", Oxidation::Medium),
    ("high", Oxidation::High),
];

pub(super) const PASSES: [(&str, Passes); 4] = [
    ("hermetic", Passes::Hermetic),
    ("low", Passes::Low),
    ("permeable", Passes::Permeable),
    ("open", Passes::Open),
];

pub(super) const VERBS: [(&str, Verb); 11] = [
    ("deposit", Verb::Deposit),
    ("etch", Verb::Etch),
    ("convert", Verb::Convert),
    ("fill", Verb::Fill),
    ("release", Verb::Release),
    ("strip", Verb::Strip),
    ("polish", Verb::Polish),
    ("anneal", Verb::Anneal),
    ("cure", Verb::Cure),
    ("clean", Verb::Clean),
    ("via", Verb::Via),
];

pub(super) const AMBIENTS: [(&str, Ambient); 14] = [
    ("inert", Ambient::Inert),
    ("oxidizing", Ambient::Oxidizing),
    ("reducing", Ambient::Reducing),
    ("hydrogen-plasma", Ambient::HydrogenPlasma),
    ("oxygen-plasma", Ambient::OxygenPlasma),
    ("ozone", Ambient::Ozone),
    ("fluorine", Ambient::Fluorine),
    ("fluorocarbon", Ambient::Fluorocarbon),
    ("hf", Ambient::Hf),
    ("chlorine", Ambient::Chlorine),
    ("wet", Ambient::Wet),
    ("plasma", Ambient::Plasma),
    ("vacuum", Ambient::Vacuum),
    ("slurry", Ambient::Slurry),
];

/// The hazards that a material or a process may name.
pub const HAZARDS: &[&str] = &[
    "hf",
    "silane",
    "ozone",
    "fluorine",
    "chlorine",
    "decomposition",
    "ruthenium-oxide",
    "solvent",
    "slurry",
    "vacuum",
    "heat",
];
