//! From a tree to a flow: names, recipes and sites found, and every variant put together.
//!
//! All that is wrong is told in one pass. A line that could not be read is no reason for
//! further messages: what it may have said is not missed elsewhere.

mod context;
mod draft;
mod limits;
mod nets;
mod sites;
mod steps;
mod wafer;
mod with;

use std::sync::Arc;

use context::Context;
use draft::Draft;

use super::{Flow, Variant, Wafer};
use crate::diag::{Diagnostic, Severity};
use crate::library::Library;
use crate::source::{Source, Spanned};
use crate::syntax::{Statement, Tree};

/// The library files that a flow uses, in the order of the text.
pub fn uses(tree: &Tree) -> Vec<Spanned<String>> {
    tree.statements()
        .filter_map(|(statement, _)| match statement {
            Statement::Use(file) => Some(file.clone()),
            _ => None,
        })
        .collect()
}

/// Resolves a tree against a library; beside the flow come notes and warnings.
///
/// # Errors
/// Everything that is wrong with names, recipes and sites, in the order of the text. The
/// messages of [`crate::syntax::parse`] stand beside these; a tree with a broken line resolves
/// to no flow, even when the list is empty.
pub fn resolve(
    tree: &Tree,
    source: Arc<Source>,
    library: Arc<Library>,
) -> Result<(Flow, Vec<Diagnostic>), Vec<Diagnostic>> {
    let mut context = Context::new(&source, &library);
    let flow = flow(tree, &mut context, &source, &library);
    let mut messages = context.into_messages();
    messages.sort_by_key(|message| message.span);
    match flow {
        Some(flow) if messages.iter().all(|message| message.severity != Severity::Error) => {
            Ok((flow, messages))
        }
        _ => {
            messages.retain(|message| message.severity == Severity::Error);
            Err(messages)
        }
    }
}

fn flow(
    tree: &Tree,
    context: &mut Context,
    source: &Arc<Source>,
    library: &Arc<Library>,
) -> Option<Flow> {
    let draft = Draft::of(tree, context);
    let wafers = draft.wafers(context);
    let places = sites::Places::of(&wafers, &draft);
    let variants = variants(&draft, wafers, &places, context);
    let (nets, next_level) = nets::resolve(&draft, &places, context);
    let limits = limits::limits(&draft, &variants, &nets, &places, context);
    let waivers = limits::waivers(&draft, &places, context);
    steps::note_free_masks(&draft, context);
    let complete = !tree.is_broken() && variants.iter().all(Option::is_some);
    let name = draft.name.clone().filter(|_| complete)?;
    Some(Flow {
        name: name.value,
        title: draft.title.clone(),
        source: source.clone(),
        library: library.clone(),
        variants: variants.into_iter().flatten().collect(),
        nets,
        next_level,
        limits,
        waivers,
    })
}

/// The unsplit flow and the splits, each with its own wafer and steps; `None` where one of
/// them cannot be put together.
fn variants(
    draft: &Draft,
    wafers: Vec<Option<Wafer>>,
    places: &sites::Places,
    context: &mut Context,
) -> Vec<Option<Variant>> {
    let mut variants = vec![];
    for (at, wafer) in wafers.into_iter().enumerate() {
        let split = at.checked_sub(1).map(|at| &draft.splits[at]);
        context.enter(split);
        let steps = steps::resolve(draft, split, at, wafer.as_ref(), places, context);
        variants.push(match (wafer, steps) {
            (Some(wafer), Some(steps)) => {
                Some(Variant { split: split.map(|split| split.name.clone()), wafer, steps })
            }
            _ => None,
        });
    }
    context.enter(None);
    variants
}
