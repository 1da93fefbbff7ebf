//! Flows from the command line: loaded, their messages shown.

use std::io;

use super::Shared;
use super::output::{self, Failure};
use crate::diag::Diagnostic;
use crate::flow::Flow;
use crate::pipeline::{self, LoadError, Loaded, Messages, RunError};
use crate::report::messages;
use crate::world::World;

/// Loads a flow; notes and warnings about its text go to standard error.
///
/// # Errors
/// When it cannot be used; all of its errors are in the message.
pub(super) fn load(
    world: &dyn World,
    path: &str,
    name_of_stdin: &str,
    shared: &Shared,
) -> Result<Loaded, Failure> {
    let name = if path == "-" { name_of_stdin } else { path };
    load_named(world, path, name, shared)
}

/// Loads a flow that messages call by a name of its own.
///
/// # Errors
/// As [`load`].
pub(super) fn load_named(
    world: &dyn World,
    path: &str,
    name: &str,
    shared: &Shared,
) -> Result<Loaded, Failure> {
    match pipeline::load(world, path, name) {
        Ok(loaded) => {
            for said in &loaded.messages {
                output::tell(&rendered(said, shared));
            }
            Ok(loaded)
        }
        Err(LoadError::Input(said)) => {
            Err(Failure::unusable(said.iter().map(|m| rendered(m, shared)).collect::<String>()))
        }
        Err(LoadError::Read(error)) => Err(Failure::unusable(error)),
    }
}

/// What a run that could not end says, and how the program ends.
pub(super) fn failure(error: RunError, flow: &Flow, shared: &Shared) -> Failure {
    let at_place = |diagnostic: Diagnostic| {
        let said = Messages { source: flow.source.clone(), diagnostics: vec![diagnostic] };
        rendered(&said, shared)
    };
    match error {
        RunError::Unusable(diagnostic) => Failure::unusable(at_place(diagnostic)),
        RunError::Internal(message) => Failure::internal(&message),
    }
}

fn rendered(said: &Messages, shared: &Shared) -> String {
    messages::render(&said.diagnostics, &said.source, shared.colored(&io::stderr()))
}
