//! Reads a flow and the libraries that it uses.

use std::path::Path;
use std::sync::Arc;

use crate::diag::{Diagnostic, Severity};
use crate::flow::{self, Flow};
use crate::library::Library;
use crate::rules;
use crate::source::Source;
use crate::syntax;
use crate::world::{ReadError, World, read_text};

/// Messages about one text.
#[derive(Debug, Clone)]
pub struct Messages {
    /// The text.
    pub source: Arc<Source>,
    /// What is said of it.
    pub diagnostics: Vec<Diagnostic>,
}

/// Why a flow could not be loaded.
#[derive(Debug, thiserror::Error)]
pub enum LoadError {
    /// A file could not be read.
    #[error(transparent)]
    Read(#[from] ReadError),
    /// Texts with errors; each is shown with its place.
    #[error("{} cannot be used", .0.first().map_or("the input", |m| m.source.name.as_str()))]
    Input(Vec<Messages>),
}

/// A flow ready to run, and what was said on the way: notes and warnings only.
#[derive(Debug, Clone)]
pub struct Loaded {
    /// The flow.
    pub flow: Flow,
    /// Notes and warnings, by text.
    pub messages: Vec<Messages>,
}

/// Reads a flow and the libraries that it uses.
///
/// # Errors
/// When a file cannot be read, or a text has errors; all of them are given.
pub fn load(world: &dyn World, path: &str, name: &str) -> Result<Loaded, LoadError> {
    let source = Arc::new(read_text(world, path, name)?);
    let (tree, mut wrong) = syntax::parse(&source);
    let mut messages = Vec::new();
    let mut library = (*Library::built_in()).clone();
    for file in flow::uses(&tree) {
        match use_library(world, path, &file.value, &library) {
            Ok((next, notes)) => {
                library = next;
                messages.push(notes);
            }
            Err(LoadError::Read(error)) => {
                wrong.push(Diagnostic::error(file.span, error.to_string()).label("used here"));
            }
            Err(LoadError::Input(more)) => messages.extend(more),
        }
    }
    let resolved = flow::resolve(&tree, source.clone(), Arc::new(library));
    let flow = match resolved {
        Ok((flow, said)) => {
            wrong.extend(said);
            Some(flow)
        }
        Err(more) => {
            wrong.extend(more);
            None
        }
    };
    wrong.sort_by_key(|d| d.span);
    messages.insert(0, Messages { source, diagnostics: wrong });
    messages.retain(|m| !m.diagnostics.is_empty());
    let broken = |m: &Messages| m.diagnostics.iter().any(|d| d.severity == Severity::Error);
    match flow {
        Some(flow) if !messages.iter().any(broken) => Ok(Loaded { flow, messages }),
        _ => Err(LoadError::Input(messages)),
    }
}

/// Adds one library file, named relative to the flow that uses it.
fn use_library(
    world: &dyn World,
    flow_path: &str,
    file: &str,
    onto: &Library,
) -> Result<(Library, Messages), LoadError> {
    let path = beside(flow_path, file);
    let source = Arc::new(read_text(world, &path, &path)?);
    let input =
        |diagnostics| LoadError::Input(vec![Messages { source: Arc::clone(&source), diagnostics }]);
    let (library, diagnostics) = rules::lay_over(onto, &source).map_err(input)?;
    Ok((library, Messages { source: Arc::clone(&source), diagnostics }))
}

/// The path of a file named in a flow: relative to the folder of the flow.
fn beside(flow_path: &str, file: &str) -> String {
    let folder = Path::new(flow_path).parent().unwrap_or(Path::new(""));
    folder.join(file).to_string_lossy().into_owned()
}
