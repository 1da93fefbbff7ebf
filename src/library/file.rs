//! One library file: from its tree to materials, processes, settings and rules.

use super::fields::{Defect, Defects, Fields, choose};
use super::numbers::Bounds;
use super::read_material::materials;
use super::read_process::processes;
use super::words::HAZARDS;
use super::yaml::{self, Node, Place, Value};
use super::{Material, Process, RuleSettings};
use crate::diag::{Diagnostic, Severity};
use crate::source::{Source, Span};

/// Most messages about one file that are shown.
pub const MAX_SHOWN: usize = 500;
/// Bytes read again to find the places of the messages: each costs a reading of the text, so
/// that of the largest files only the first four are shown.
const MAX_BYTES_REREAD: usize = 4 * yaml::MAX_BYTES;

/// The name of a rule and those of its thresholds, as who holds the rules knows them.
pub type KnownRule<'a> = (&'a str, &'a [&'a str]);

impl LibraryFile {
    /// Errors for rules and thresholds that nobody knows. The library itself knows no rules.
    pub fn unknown_rules(&self, known: &[KnownRule<'_>], source: &Source) -> Vec<Diagnostic> {
        let mut defects = Defects::default();
        for entry in &self.rules {
            let rule = &entry.value.rule;
            let Some((_, thresholds)) = known.iter().find(|(name, _)| name == rule) else {
                let help = defects.hint(rule, known.iter().map(|(name, _)| *name));
                let message = format!("there is no rule `{rule}`");
                defects.push(Severity::Error, entry.place, message, "unknown rule", help);
                continue;
            };
            for (name, place) in &entry.value.threshold_places {
                if !thresholds.contains(&name.as_str()) {
                    let known = thresholds.iter().copied().chain(["severity"]);
                    let help = defects.hint(name, known);
                    let message = format!("rule {rule} has no setting `{name}`");
                    defects.push(Severity::Error, *place, message, "unknown setting", help);
                }
            }
        }
        located(defects.0, source)
    }
}

/// What one file says, checked by itself; [`super::Library::with`] checks it against the rest.
#[derive(Debug, Clone, Default)]
pub struct LibraryFile {
    /// Materials in the order of the text.
    pub materials: Vec<Placed<Material>>,
    /// Processes in the order of the text.
    pub processes: Vec<Placed<Process>>,
    /// `settings.closure_width_nm`, where it is given.
    pub closure_width_nm: Option<f64>,
    /// Settings of rules in the order of the text.
    pub rules: Vec<Placed<RuleEntry>>,
    /// What is worth knowing about the file.
    pub notes: Vec<Diagnostic>,
}

/// A value with the place of its name in the file.
#[derive(Debug, Clone)]
pub struct Placed<T> {
    /// The value.
    pub value: T,
    /// Where its name stands; [`Placed::span`] finds it.
    pub place: Place,
    /// Names that the value refers to, with their places.
    pub refers_to: Vec<Reference>,
}

impl<T> Placed<T> {
    /// Where its name stands in the text that it was read from.
    pub fn span(&self, source: &Source) -> Option<Span> {
        yaml::locate(source, self.place)
    }
}

/// A name that an entry refers to.
#[derive(Debug, Clone)]
pub struct Reference {
    /// The key under which it stands.
    pub key: &'static str,
    /// The name.
    pub name: String,
    /// Whether a family will do.
    pub or_family: bool,
    /// Where it stands.
    pub place: Place,
}

/// What a file sets for one rule.
#[derive(Debug, Clone)]
pub struct RuleEntry {
    /// Name of the rule as written; who holds the rules knows whether there is such a one.
    pub rule: String,
    /// Severity and thresholds.
    pub settings: RuleSettings,
    /// Places of the thresholds' names.
    pub threshold_places: Vec<(String, Place)>,
}

/// Reads a library file; all defects of a readable file come in one pass, in the order of the text.
///
/// # Errors
/// The file is not YAML, too large, too deep, or says something that cannot be.
pub fn parse(source: &Source) -> Result<LibraryFile, Vec<Diagnostic>> {
    let root = yaml::read(source).map_err(|error| vec![error])?;
    let mut defects = Defects::default();
    let mut file = LibraryFile::default();
    if let Some(mut fields) = Fields::open(&root, "a library file", &mut defects) {
        if let Some(node) = fields.take("materials") {
            file.materials = materials(node, &mut defects);
        }
        if let Some(node) = fields.take("processes") {
            file.processes = processes(node, &mut defects);
        }
        if let Some(node) = fields.take("settings") {
            file.closure_width_nm = settings(node, &mut defects);
        }
        if let Some(node) = fields.take("rules") {
            file.rules = rules(node, &mut defects);
        }
        fields.close(&mut defects);
    }
    let mut found = defects.0;
    found.sort_by_key(|defect| defect.place);
    if found.iter().any(|defect| defect.severity == Severity::Error) {
        found.retain(|defect| defect.severity == Severity::Error);
        return Err(located(found, source));
    }
    file.notes = located(found, source);
    Ok(file)
}

/// Gives defects their places; what exceeds [`MAX_SHOWN`] is counted.
pub(super) fn located(mut defects: Vec<Defect>, source: &Source) -> Vec<Diagnostic> {
    let shown = MAX_SHOWN.min(MAX_BYTES_REREAD / source.text.len().max(1));
    let rest = defects.split_off(shown.min(defects.len()));
    let mut messages: Vec<_> = defects
        .into_iter()
        .map(|defect| Diagnostic {
            severity: defect.severity,
            span: yaml::locate(source, defect.place),
            message: defect.message,
            label: defect.label,
            help: defect.help,
        })
        .collect();
    if let Some(gravest) = rest.iter().map(|defect| defect.severity).max() {
        let message = format!("and {} more in this file", rest.len());
        messages.push(Diagnostic::new(gravest, None, message));
    }
    messages
}

/// Whether a word can stand as a name in a flow: a letter, then letters, digits, `-`.
fn is_name(word: &str) -> bool {
    word.starts_with(|c: char| c.is_ascii_alphabetic())
        && word.chars().all(|c| c.is_ascii_alphanumeric() || c == '-')
}

/// The entries of `materials`, `processes` or `rules`, with names that a flow can write.
pub(super) fn named<'n>(
    node: &'n Node,
    what: &'static str,
    defects: &mut Defects,
) -> Vec<(&'n str, Place, &'n Node)> {
    let Some(table) = Fields::open(node, format!("`{what}`"), defects) else { return Vec::new() };
    let entries: Vec<_> = table.names().collect();
    for (name, place, _) in entries.iter().filter(|(name, ..)| !is_name(name)) {
        let message = format!("`{name}` cannot be a name in a flow");
        defects.error(*place, message, "a letter, then letters, digits and `-`");
    }
    entries
}

fn settings(node: &Node, defects: &mut Defects) -> Option<f64> {
    let mut fields = Fields::open(node, "`settings`", defects)?;
    let bounds = Bounds::above_to(0.0, 1000.0);
    let width = fields.number("closure_width_nm", bounds, defects);
    fields.close(defects);
    width.map(|width| width.value)
}

fn rules(node: &Node, defects: &mut Defects) -> Vec<Placed<RuleEntry>> {
    let severities =
        [("note", Severity::Note), ("warning", Severity::Warning), ("error", Severity::Error)];
    let mut read = Vec::new();
    for (rule, place, node) in named(node, "rules", defects) {
        let what = format!("rule {rule}");
        let Some(fields) = Fields::open(node, what.clone(), defects) else { continue };
        let mut settings = RuleSettings::default();
        let mut threshold_places = Vec::new();
        for (name, name_place, value) in fields.names() {
            match (name, &value.value) {
                ("severity", Value::Text(word)) => {
                    settings.severity = choose(word, value.place, name, &severities, defects);
                }
                ("severity", other) => {
                    let message = format!("`severity` of {what} is {}", other.kind());
                    defects.error(value.place, message, "note, warning or error belongs here");
                }
                (_, Value::Number(number)) if Bounds::NOT_NEGATIVE.allow(*number) => {
                    settings.thresholds.insert(name.to_owned(), *number);
                    threshold_places.push((name.to_owned(), name_place));
                }
                (_, other) => {
                    let found = match other {
                        Value::Number(number) => number.to_string(),
                        other => other.kind().to_owned(),
                    };
                    let message = format!("`{name}` of {what} cannot be {found}");
                    defects.error(value.place, message, "a number of at least 0 belongs here");
                }
            }
        }
        let value = RuleEntry { rule: rule.to_owned(), settings, threshold_places };
        read.push(Placed { value, place, refers_to: Vec::new() });
    }
    read
}

pub(super) fn references(
    key: &'static str,
    or_family: bool,
    names: &[(String, Place)],
) -> Vec<Reference> {
    names
        .iter()
        .map(|(name, place)| Reference { key, name: name.clone(), or_family, place: *place })
        .collect()
}

pub(super) fn hazards(fields: &mut Fields<'_>, defects: &mut Defects) -> Vec<String> {
    let words: Vec<(&str, &str)> =
        HAZARDS.iter().map(|hazard| (hazard.word, hazard.word)).collect();
    fields
        .texts("hazards", defects)
        .into_iter()
        .filter_map(|(word, place)| choose(&word, place, "hazards", &words, defects))
        .map(str::to_owned)
        .collect()
}

pub(super) fn source_of(fields: &mut Fields<'_>, place: Place, defects: &mut Defects) -> String {
    let text = fields.text("source", defects).unwrap_or_default();
    if text.trim().is_empty() {
        let message = "no `source`: where do these numbers come from?";
        defects.push(Severity::Note, place, message, "", None);
    }
    text
}
