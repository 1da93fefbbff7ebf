//! A library file laid over a library, its `rules:` held against those that there are.

use super::REGISTRY;
use crate::diag::Diagnostic;
use crate::library::{self, KnownRule, Library};
use crate::source::Source;

/// Reads a library file and lays it over a library.
///
/// The messages, none of them an error, say what was replaced and what is doubtful.
///
/// # Errors
/// The file cannot be read, says what cannot be, or names a rule or threshold that is none.
pub fn lay_over(
    lower: &Library,
    source: &Source,
) -> Result<(Library, Vec<Diagnostic>), Vec<Diagnostic>> {
    let file = library::parse(source)?;
    let thresholds: Vec<Vec<&str>> = REGISTRY
        .iter()
        .map(|rule| rule.thresholds.iter().map(|threshold| threshold.key).collect())
        .collect();
    let known: Vec<KnownRule<'_>> = REGISTRY
        .iter()
        .zip(&thresholds)
        .map(|(rule, thresholds)| (rule.name, thresholds.as_slice()))
        .collect();
    let unknown = file.unknown_rules(&known, source);
    if unknown.is_empty() { Ok(lower.with(file, source)) } else { Err(unknown) }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn rules_of_a_library_file_must_exist() {
        let over = |text| lay_over(&Library::built_in(), &Source::new("ours.yaml", text));
        let message = |text| over(text).unwrap_err()[0].message.clone();
        assert!(over("rules: {roof-too-thin: {minimum_nm: 12, severity: error}}").is_ok());
        assert_eq!(message("rules: {roof-to-thin: {}}"), "there is no rule `roof-to-thin`");
        assert_eq!(
            message("rules: {roof-too-thin: {minimum: 12}}"),
            "rule roof-too-thin has no setting `minimum`"
        );
    }
}
