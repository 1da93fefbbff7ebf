//! A message about an input, as data; the renderers live in `report`.

use crate::source::Span;

/// How grave a message is.
#[derive(
    Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, serde::Serialize, schemars::JsonSchema,
)]
#[serde(rename_all = "lowercase")]
pub enum Severity {
    /// Worth knowing; changes nothing.
    Note,
    /// Worth a look; fails only with `--deny warnings`.
    Warning,
    /// Breaks the flow, or the input cannot be used.
    Error,
}

/// One message about one place of one input text.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Diagnostic {
    /// How grave.
    pub severity: Severity,
    /// What is wrong, one sentence without a final stop.
    pub message: String,
    /// The place; `None` when the input as a whole is meant.
    pub span: Option<Span>,
    /// What stands under the marked place.
    pub label: String,
    /// What to do about it.
    pub help: Option<String>,
}

impl Diagnostic {
    /// An error at a place.
    pub fn error(span: Span, message: impl Into<String>) -> Self {
        Self::new(Severity::Error, Some(span), message)
    }

    /// A warning at a place.
    pub fn warning(span: Span, message: impl Into<String>) -> Self {
        Self::new(Severity::Warning, Some(span), message)
    }

    /// A note at a place.
    pub fn note(span: Span, message: impl Into<String>) -> Self {
        Self::new(Severity::Note, Some(span), message)
    }

    /// A message about an input as a whole, or at a place.
    pub fn new(severity: Severity, span: Option<Span>, message: impl Into<String>) -> Self {
        Self { severity, message: message.into(), span, label: String::new(), help: None }
    }

    /// Adds the words that stand under the marked place.
    #[must_use]
    pub fn label(mut self, label: impl Into<String>) -> Self {
        self.label = label.into();
        self
    }

    /// Adds what to do about it.
    #[must_use]
    pub fn help(mut self, help: impl Into<String>) -> Self {
        self.help = Some(help.into());
        self
    }
}

/// The known word that a misspelt one most likely stands for; `None` when none is near.
///
/// A third of the longer word's letters may differ (at least one), counted by insertions,
/// deletions, exchanges of one letter and swaps of two neighbours; capitals count nothing. Of
/// equals the one with as many letters wins, then the first.
pub fn nearest<'a>(word: &str, known: impl IntoIterator<Item = &'a str>) -> Option<&'a str> {
    let word: String = word.to_lowercase().chars().take(64).collect();
    let length = word.chars().count();
    known
        .into_iter()
        .filter_map(|candidate| {
            let other = candidate.to_lowercase();
            let other_length = other.chars().count();
            let allowed = (length.max(other_length) / 3).max(1);
            let all_new = length.min(other_length) <= 1 && word != other;
            if length.abs_diff(other_length) > allowed || all_new {
                return None;
            }
            let distance = strsim::osa_distance(&word, &other);
            let rank = (distance, length.abs_diff(other_length));
            (distance <= allowed).then_some((rank, candidate))
        })
        .min_by_key(|(rank, _)| *rank)
        .map(|(_, candidate)| candidate)
}

#[cfg(test)]
mod tests {
    use super::nearest;

    #[test]
    fn finds_the_word_that_was_meant() {
        let known = ["deposit", "seal", "etch", "polish"];
        assert_eq!(nearest("depsoit", known), Some("deposit"));
        assert_eq!(nearest("Etch", known), Some("etch"));
        assert_eq!(nearest("etsch", known), Some("etch"));
        assert_eq!(nearest("implant", known), None);
        assert_eq!(nearest("", known), None);
    }

    #[test]
    fn one_letter_is_no_misspelling_of_another() {
        assert_eq!(nearest("x", ["A", "C"]), None);
    }
}
