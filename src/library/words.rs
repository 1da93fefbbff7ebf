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

/// A hazard that a material or a process may name, with the caution that goes with it.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Hazard {
    /// As written in a library file.
    pub word: &'static str,
    /// What to print where it applies.
    pub caution: &'static str,
}

/// The hazards, with the usual cautions (common practice).
pub const HAZARDS: &[Hazard] = &[
    Hazard { word: "hf", caution: "hydrofluoric acid: deep, delayed, possibly fatal burns" },
    Hazard { word: "silane", caution: "silanes ignite in air" },
    Hazard { word: "ozone", caution: "ozone: toxic, a strong oxidiser" },
    Hazard {
        word: "fluorine",
        caution: "fluorinated gases (XeF2, WF6, NF3): toxic, give HF with moisture",
    },
    Hazard { word: "chlorine", caution: "chlorine and chlorides: toxic, corrosive with moisture" },
    Hazard {
        word: "decomposition",
        caution: "decomposing polymers: carbon monoxide, aldehydes, acids; vent and abate",
    },
    Hazard { word: "ruthenium-oxide", caution: "RuO4: volatile, toxic" },
    Hazard { word: "solvent", caution: "solvents: flammable vapour, harmful to breathe" },
    Hazard { word: "slurry", caution: "slurries: irritant, some oxidising or corrosive" },
    Hazard { word: "vacuum", caution: "vacuum: implosion, trapped gas" },
    Hazard { word: "heat", caution: "hot surfaces and stored heat: burns" },
];

/// What stands below every list of cautions.
pub const GENERAL_CAUTION: &str = "A planning aid, not a recipe or a qualification. Hazards need \
    trained, licensed staff and site-approved equipment; local codes and safety data sheets decide.";
