//! Lays library files over one another, name by name, and holds them against each other.

use std::collections::BTreeSet;

use super::fields::Defects;
use super::file::{LibraryFile, Placed, Reference, located};
use super::words::KINDS;
use super::yaml::Place;
use super::{Library, Material, Process, Settings};
use crate::diag::{Diagnostic, Severity};
use crate::source::Source;

impl Library {
    /// This library with a file on top: an entry of the file replaces the one of its name whole.
    ///
    /// The messages, none of them an error, say what was replaced and which names the file
    /// mentions that neither it nor an earlier library has.
    pub fn with(&self, file: LibraryFile, source: &Source) -> (Self, Vec<Diagnostic>) {
        let mut library = self.clone();
        let mut found = Defects::default();
        let mut references = references(&file.materials);
        references.extend(self::references(&file.processes));
        for process in file.processes.iter().filter(|process| process.value.default) {
            yield_default(&mut library.processes, process, &mut found);
        }
        merge(&mut library.materials, file.materials, "material", &mut found);
        merge(&mut library.processes, file.processes, "process", &mut found);
        for Placed { value: entry, place, .. } in file.rules {
            if library.rules.contains_key(&entry.rule) {
                replaced(place, "rule", &entry.rule, &mut found);
            }
            library.rules.insert(entry.rule, entry.settings);
        }
        if let Some(closure_width_nm) = file.closure_width_nm {
            library.settings = Settings { closure_width_nm };
        }
        library.report_strangers(&references, &mut found);
        found.0.sort_by_key(|defect| defect.place);
        let mut messages = file.notes;
        messages.extend(located(found.0, source));
        (library, messages)
    }

    /// Warns of names that are neither a material nor, where that will do, a family.
    fn report_strangers(&self, references: &[(String, Reference)], found: &mut Defects) {
        let mut families: BTreeSet<&str> =
            self.materials.iter().map(|m| m.family.as_str()).collect();
        // A material that names no family has its kind's word for one.
        families.extend(KINDS.iter().map(|(word, _)| *word));
        for (owner, reference) in references {
            let name = reference.name.as_str();
            let family = reference.or_family && families.contains(name);
            if family || self.material_id(name).is_some() {
                continue;
            }
            let wanted = if reference.or_family { "material or family" } else { "material" };
            let message = format!("`{}` of {owner}: no {wanted} is called `{name}`", reference.key);
            let allowed = families.iter().copied().filter(|_| reference.or_family);
            let materials = self.materials.iter().map(|material| material.name.as_str());
            let help = found.hint(name, materials.chain(allowed));
            found.push(Severity::Warning, reference.place, message, "unknown name", help);
        }
    }
}

/// What a library keeps by name.
trait Named {
    fn name(&self) -> &str;
}

impl Named for Material {
    fn name(&self) -> &str {
        &self.name
    }
}

impl Named for Process {
    fn name(&self) -> &str {
        &self.name
    }
}

/// Lays `upper` over `lower`, which stays in order of name.
fn merge<T: Named>(lower: &mut Vec<T>, upper: Vec<Placed<T>>, what: &str, found: &mut Defects) {
    let mut new = Vec::new();
    for Placed { value, place, .. } in upper {
        match lower.binary_search_by(|known| known.name().cmp(value.name())) {
            Ok(at) => {
                replaced(place, what, value.name(), found);
                lower[at] = value;
            }
            Err(_) => new.push(value),
        }
    }
    lower.extend(new);
    lower.sort_by(|a, b| a.name().cmp(b.name()));
}

fn replaced(place: Place, what: &str, name: &str, found: &mut Defects) {
    let message = format!("{what} {name} replaces the one of that name in an earlier library");
    found.push(Severity::Note, place, message, "", None);
}

/// A new default takes the verb over from the earlier one.
fn yield_default(lower: &mut [Process], upper: &Placed<Process>, found: &mut Defects) {
    let (verb, name) = (upper.value.verb, &upper.value.name);
    for other in lower.iter_mut().filter(|other| other.default && other.verb == verb) {
        other.default = false;
        if other.name != *name {
            let message = format!("{name} is the default now, no longer {}", other.name);
            found.push(Severity::Note, upper.place, message, "", None);
        }
    }
}

fn references<T: Named>(placed: &[Placed<T>]) -> Vec<(String, Reference)> {
    let owned = |entry: &Placed<T>| {
        let owner = entry.value.name().to_owned();
        entry.refers_to.iter().map(move |to| (owner.clone(), to.clone())).collect::<Vec<_>>()
    };
    placed.iter().flat_map(owned).collect()
}
