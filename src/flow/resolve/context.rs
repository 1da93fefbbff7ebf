//! What every part of the resolution looks things up in, and where its messages go.

use std::collections::{BTreeMap, BTreeSet};
use std::sync::Arc;

use super::draft::Split;
use crate::diag::{Diagnostic, nearest};
use crate::flow::{Quantity, State};
use crate::library::{Library, Material, MaterialId, Process, Verb};
use crate::source::{Source, Span};
use crate::syntax::Name;

/// The library, the text, and the messages so far.
pub(super) struct Context<'a> {
    pub source: &'a Source,
    pub library: &'a Library,
    messages: Vec<Diagnostic>,
    said: BTreeSet<(Option<Span>, String)>,
    /// Names that are known to be unknown, so that each is searched for once.
    unknown: BTreeSet<Span>,
    split: Option<(String, Vec<Span>)>,
    processes: BTreeMap<String, Arc<Process>>,
}

impl<'a> Context<'a> {
    pub fn new(source: &'a Source, library: &'a Library) -> Self {
        Self {
            source,
            library,
            messages: vec![],
            said: BTreeSet::new(),
            unknown: BTreeSet::new(),
            split: None,
            processes: BTreeMap::new(),
        }
    }

    /// From here on the statements are those of this split.
    pub fn enter(&mut self, split: Option<&Split>) {
        self.split = split.map(|split| {
            let own = split.changes.iter().map(|statement| statement.span);
            (split.name.value.clone(), own.collect())
        });
    }

    /// Adds a message, once however many variants say it. What only a split says of a
    /// statement that is not its own names the split.
    pub fn say(&mut self, mut message: Diagnostic) {
        if !self.said.insert((message.span, message.message.clone())) {
            return;
        }
        let inside = |own: &Span| {
            message.span.is_some_and(|span| own.start <= span.start && span.end <= own.end)
        };
        if let Some((split, own)) = &self.split
            && !own.iter().any(inside)
        {
            message.message = format!("{}, in the split `{split}`", message.message);
        }
        self.messages.push(message);
    }

    pub fn into_messages(self) -> Vec<Diagnostic> {
        self.messages
    }

    /// The text of a span.
    pub fn text(&self, span: Span) -> &'a str {
        &self.source.text[span.start..span.end]
    }

    /// The material of a name.
    pub fn material(&mut self, name: &Name) -> Option<MaterialId> {
        let found = self.library.material_id(&name.value);
        if found.is_none() && self.unknown.insert(name.span) {
            let known = self.library.materials.iter().map(|material| material.name.as_str());
            let message =
                Diagnostic::error(name.span, format!("no material is called `{}`", name.value));
            let message = match nearest(&name.value, known) {
                Some(meant) => message.label(format!("did you mean `{meant}`?")),
                None => message.label("not in the library"),
            };
            self.say(message.help(
                "`gapwright library` lists the materials; a file named by `use` can add one",
            ));
        }
        found
    }

    /// The process of a step: the one named, else the default of its verb.
    pub fn process(
        &mut self,
        by: Option<&Name>,
        verb: Verb,
        word: &Name,
        material: Option<MaterialId>,
    ) -> Option<Arc<Process>> {
        let library = self.library;
        let material = material.map(|id| library.material(id));
        let Some(by) = by else {
            let default = library.default_process(verb);
            if default.is_none() {
                self.say(
                    Diagnostic::error(
                        word.span,
                        format!("`{}` has no default process in this library", word.value),
                    )
                    .label("write `by PROCESS`"),
                );
            }
            return default.map(|process| self.shared(process));
        };
        let Some(process) = library.process(&by.value) else {
            if self.unknown.insert(by.span) {
                self.unknown_process(by, verb, word, material);
            }
            return None;
        };
        if !process.serves(verb) {
            let own = verb_words(process.verb);
            self.say(
                self.suggest(
                    Diagnostic::error(
                        by.span,
                        format!("`{}` is no process for `{}`", by.value, word.value),
                    )
                    .label(format!("it serves {own}")),
                    verb,
                    material,
                ),
            );
            return None;
        }
        if let Some(material) = material
            && !process.handles(material)
        {
            self.say(
                self.suggest(
                    Diagnostic::error(
                        by.span,
                        format!("`{}` is not for `{}`", by.value, material.name),
                    )
                    .label(format!("it is for {}", process.materials.join(", "))),
                    verb,
                    Some(material),
                ),
            );
            return None;
        }
        Some(self.shared(process))
    }

    fn shared(&mut self, process: &Process) -> Arc<Process> {
        if let Some(shared) = self.processes.get(&process.name) {
            return shared.clone();
        }
        let shared = Arc::new(process.clone());
        self.processes.insert(process.name.clone(), shared.clone());
        shared
    }

    fn unknown_process(&mut self, by: &Name, verb: Verb, word: &Name, material: Option<&Material>) {
        let fitting = fitting(self.library, verb, None);
        let all = self.library.processes.iter().map(|process| process.name.as_str());
        let meant = nearest(&by.value, fitting.iter().copied()).or_else(|| nearest(&by.value, all));
        let message = Diagnostic::error(by.span, format!("no process is called `{}`", by.value));
        self.say(match meant {
            Some(meant) => message.label(format!("did you mean `{meant}`?")),
            None => {
                let label = format!("`{}` needs a process of the library", word.value);
                self.suggest(message.label(label), verb, material)
            }
        });
    }

    /// Adds the processes that a step could name.
    fn suggest(&self, message: Diagnostic, verb: Verb, material: Option<&Material>) -> Diagnostic {
        let fitting = fitting(self.library, verb, material);
        let of = material.map_or(String::new(), |material| format!(" for `{}`", material.name));
        match fitting.as_slice() {
            [] => message.help(format!("the library has no process{of} here")),
            [one] => message.help(format!("the process{of} here is {one}")),
            many => message.help(format!("processes{of} here are {}", many.join(", "))),
        }
    }

    /// A name that the flow gives must not be a quantity; grammar and units are checked
    /// where it is read.
    pub fn check_new_name(&mut self, name: &Name, what: &str) {
        if Quantity::ALL.iter().any(|quantity| quantity.name() == name.value) {
            self.say(
                Diagnostic::error(
                    name.span,
                    format!("`{}` is a quantity and cannot name {what}", name.value),
                )
                .label("choose another name"),
            );
        }
    }
}

/// Processes that serve a verb, and handle a material if one is given.
fn fitting<'l>(library: &'l Library, verb: Verb, material: Option<&Material>) -> Vec<&'l str> {
    library
        .processes
        .iter()
        .filter(|process| process.serves(verb))
        .filter(|process| material.is_none_or(|material| process.handles(material)))
        .map(|process| process.name.as_str())
        .collect()
}

/// The words of a flow that a verb of the library answers to.
fn verb_words(verb: Verb) -> &'static str {
    match verb {
        Verb::Deposit => "`deposit`, `seal` and `cap`",
        Verb::Etch => "`etch`",
        Verb::Convert => "`convert`",
        Verb::Fill => "`fill` and `mask`",
        Verb::Release => "`release`",
        Verb::Strip => "`strip` and `release`",
        Verb::Polish => "`polish`",
        Verb::Anneal => "`anneal`",
        Verb::Cure => "`cure`",
        Verb::Clean => "`clean`",
        Verb::Via => "`via`",
    }
}

/// The state of a word.
pub(super) fn state(word: &str) -> Option<State> {
    [State::Solid, State::Sealed, State::Hermetic, State::Open]
        .into_iter()
        .find(|state| state.name() == word)
}

/// Where a word that nothing is called most likely comes from.
pub(super) fn unknown<'k>(
    name: &Name,
    message: String,
    known: impl IntoIterator<Item = &'k str>,
    what: &str,
) -> Diagnostic {
    let known: Vec<&str> = known.into_iter().collect();
    let message = Diagnostic::error(name.span, message);
    match nearest(&name.value, known.iter().copied()) {
        Some(meant) => message.label(format!("did you mean `{meant}`?")),
        None if known.is_empty() => message.label(format!("the flow has no {what}")),
        None => message.label(format!("known are {}", known.join(", "))),
    }
}
