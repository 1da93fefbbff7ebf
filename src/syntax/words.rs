//! The words of the language.

use crate::units::Unit;

macro_rules! sections {
    ($($(#[$doc:meta])* $variant:ident $word:literal;)+) => {
        /// A section of a flow.
        #[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
        pub enum Section {
            $($(#[$doc])* $variant,)+
        }

        impl Section {
            /// All sections.
            pub const ALL: &[Self] = &[$(Self::$variant,)+];

            /// The word that opens it.
            pub const fn word(self) -> &'static str {
                match self { $(Self::$variant => $word,)+ }
            }

            /// The section that a word opens.
            pub fn of_word(word: &str) -> Option<Self> {
                Self::ALL.iter().copied().find(|section| section.word() == word)
            }
        }
    };
}

sections! {
    /// What the module finds, bottom to top.
    Wafer "wafer";
    /// The steps, in process order.
    Steps "steps";
    /// Flows that differ in a few statements.
    Splits "splits";
    /// Nets, for the electrical figures.
    Nets "nets";
    /// What must hold.
    Limits "limits";
    /// Findings that are accepted, with the reason.
    Waivers "waivers";
}

/// First words of the statements of `wafer`.
pub(super) const WAFER_WORDS: &[&str] =
    &["bulk", "plane", "film", "lines", "row", "layer", "liner", "between", "over"];

/// Verbs of steps.
pub const STEP_VERBS: &[&str] = &[
    "deposit", "seal", "cap", "etch", "convert", "mask", "fill", "release", "strip", "polish",
    "anneal", "cure", "clean", "via",
];

/// The verbs on which `only at` stands.
pub const SELECTIVE_VERBS: &[&str] = &["etch", "convert", "strip", "release", "clean", "via"];

/// States of a space.
pub(super) const STATES: &[&str] = &["solid", "sealed", "hermetic", "open"];

/// Words of the grammar that are neither sections, first words of `wafer`, verbs nor states.
const CLAUSE_WORDS: &[&str] = &[
    "use",
    "flow",
    "width",
    "space",
    "pitch",
    "taper",
    "corner-radius",
    "as",
    "to",
    "above",
    "below",
    "floor",
    "by",
    "until",
    "overetch",
    "overlay",
    "with",
    "in",
    "only",
    "at",
    "after",
    "before",
    "skip",
    "length",
    "driver",
    "load",
    "next-level",
    "for",
    "against",
    "of",
    "spread",
    "on",
    "because",
];

/// Every word of the grammar. Units and quantities are reserved as well.
pub const RESERVED: &[&[&str]] = &[WAFER_WORDS, STEP_VERBS, STATES, CLAUSE_WORDS];

/// Whether a word of the grammar or a unit; such a word cannot name a net, split, row or
/// layer. Quantities are reserved too and known to `flow`.
pub fn is_reserved(word: &str) -> bool {
    RESERVED.iter().any(|words| words.contains(&word))
        || Section::of_word(word).is_some()
        || Unit::of_symbol(word).is_some()
}

/// Whether a word has the form of a name: an ASCII letter, then ASCII letters, digits and `-`.
pub fn is_name(word: &str) -> bool {
    word.starts_with(|c: char| c.is_ascii_alphabetic())
        && word.chars().all(|c| c.is_ascii_alphanumeric() || c == '-')
}
