//! Reading as the program does it, for the tests of this folder.

use std::sync::Arc;

use gapwright::diag::Diagnostic;
use gapwright::flow::{self, Flow};
use gapwright::library::Library;
use gapwright::report::messages::render;
use gapwright::source::Source;
use gapwright::syntax::parse;

/// The example of the language page.
pub const EXAMPLE: &str = include_str!("dense-copper-gap.flow");

/// The example with one place changed.
pub fn changed(from: &str, to: &str) -> String {
    assert!(EXAMPLE.contains(from), "{from:?} is not in the example");
    EXAMPLE.replacen(from, to, 1)
}

/// Resolves a text; what is wrong is shown as a user sees it.
pub fn resolved(text: &str) -> (Flow, Vec<Diagnostic>) {
    let source = Arc::new(Source::new("test.flow", text));
    let (tree, messages) = parse(&source);
    assert!(messages.is_empty(), "{}", render(&messages, &source, false));
    flow::resolve(&tree, source.clone(), Library::built_in())
        .unwrap_or_else(|messages| panic!("{}", render(&messages, &source, false)))
}

/// All errors of a text, as a user sees them.
pub fn errors(text: &str) -> String {
    errors_of("test.flow", text)
}

/// All errors of a text of a name.
pub fn errors_of(name: &str, text: &str) -> String {
    let source = Arc::new(Source::new(name, text));
    let (tree, mut messages) = parse(&source);
    let resolved = flow::resolve(&tree, source.clone(), Library::built_in());
    messages.extend(resolved.err().unwrap_or_default());
    messages.sort_by_key(|message| message.span);
    render(&messages, &source, false)
}
