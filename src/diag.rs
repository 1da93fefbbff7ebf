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
/// Nearness is the Damerau–Levenshtein distance, case ignored, at most a third of the word's
/// length but at least one; the first of equally near words is taken.
pub fn nearest<'a>(word: &str, known: impl IntoIterator<Item = &'a str>) -> Option<&'a str> {
    let word = word.to_lowercase();
    let most = (word.chars().count() / 3).max(1);
    known
        .into_iter()
        .map(|candidate| (strsim::damerau_levenshtein(&word, &candidate.to_lowercase()), candidate))
        .filter(|(distance, _)| *distance <= most)
        .min_by_key(|(distance, _)| *distance)
        .map(|(_, candidate)| candidate)
}
