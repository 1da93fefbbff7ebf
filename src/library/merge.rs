//! Lays library files over one another, name by name, and holds them against each other.

use std::collections::BTreeSet;

use super::fields::{Defect, Defects};
use super::file::{LibraryFile, Placed, located};
use super::{Library, Settings};
use crate::diag::{Diagnostic, Severity, nearest};
use crate::source::Source;

impl Library {
    /// This library with a file on top: an entry of the file replaces the one of its name whole.
    ///
    /// The messages, none of them an error, say what was replaced and which names the file
    /// mentions that no library has.
    pub fn with(&self, file: LibraryFile, source: &Source) -> (Self, Vec<Diagnostic>) {
        let mut library = self.clone();
        let mut found = Defects::default();
        let references: Vec<_> = refer(&file.materials).chain(refer(&file.processes)).collect();
        for material in file.materials {
            let Placed { value, place, .. } = material;
            match library.materials.binary_search_by(|known| known.name.cmp(&value.name)) {
                Ok(at) => {
                    replaced(&mut found, place, "material", &value.name);
                    library.materials[at] = value;
                }
                Err(at) => library.materials.insert(at, value),
            }
        }
        for process in file.processes {
            let Placed { value, place, .. } = process;
            if value.default {
                let others = library.processes.iter_mut().filter(|other| {
                    other.default && other.verb == value.verb && other.name != value.name
                });
                for other in others {
                    other.default = false;
                    let message =
                        format!("{} is the default now, no longer {}", value.name, other.name);
                    found.push(Severity::Note, place, message, "", None);
                }
            }
            match library.processes.binary_search_by(|known| known.name.cmp(&value.name)) {
                Ok(at) => {
                    replaced(&mut found, place, "process", &value.name);
                    library.processes[at] = value;
                }
                Err(at) => library.processes.insert(at, value),
            }
        }
        for rule in file.rules {
            let entry = rule.value;
            if library.rules.insert(entry.rule.clone(), entry.settings).is_some() {
                replaced(&mut found, rule.place, "rule", &entry.rule);
            }
        }
        if let Some(closure_width_nm) = file.closure_width_nm {
            library.settings = Settings { closure_width_nm };
        }
        library.report_strangers(&references, &mut found);
        let mut messages = file.notes;
        found.0.sort_by_key(|defect: &Defect| defect.place);
        messages.extend(located(found.0, source));
        (library, messages)
    }

    /// Warns of names that are neither a material nor, where that will do, a family.
    fn report_strangers(
        &self,
        references: &[(String, super::file::Reference)],
        found: &mut Defects,
    ) {
        let mut families: BTreeSet<&str> =
            self.materials.iter().map(|m| m.family.as_str()).collect();
        // A material that names no family has its kind's word for one.
        families.extend(super::file::KINDS.iter().map(|(word, _)| *word));
        for (owner, reference) in references {
            let name = reference.name.as_str();
            let family = reference.or_family && families.contains(name);
            if family || self.material_id(name).is_some() {
                continue;
            }
            let wanted = if reference.or_family { "material or family" } else { "material" };
            let message = format!("`{}` of {owner}: no {wanted} is called `{name}`", reference.key);
            let names = self.materials.iter().map(|material| material.name.as_str());
            let near = if reference.or_family {
                nearest(name, names.chain(families.iter().copied()))
            } else {
                nearest(name, names)
            };
            let help = near.map(|near| format!("did you mean `{near}`?"));
            found.push(Severity::Warning, reference.place, message, "unknown name", help);
        }
    }
}

fn refer<T: Named>(placed: &[Placed<T>]) -> impl Iterator<Item = (String, super::file::Reference)> {
    placed.iter().flat_map(|entry| {
        entry.refers_to.iter().map(|reference| (entry.value.name().to_owned(), reference.clone()))
    })
}

trait Named {
    fn name(&self) -> &str;
}

impl Named for super::Material {
    fn name(&self) -> &str {
        &self.name
    }
}

impl Named for super::Process {
    fn name(&self) -> &str {
        &self.name
    }
}

fn replaced(found: &mut Defects, place: super::yaml::Place, what: &str, name: &str) {
    let message = format!("{what} {name} replaces the one of that name in an earlier library");
    found.push(Severity::Note, place, message, "", None);
}
