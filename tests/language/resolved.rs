//! What a text resolves to.

use std::sync::Arc;

use gapwright::diag::Diagnostic;
use gapwright::flow::{self, Flow};
use gapwright::library::Library;
use gapwright::report::messages::render;
use gapwright::source::Source;
use gapwright::syntax::parse;

const EXAMPLE: &str = include_str!("dense-copper-gap.flow");

/// Resolves a text; what is wrong is shown as a user sees it.
fn resolved(text: &str) -> (Flow, Vec<Diagnostic>) {
    let source = Arc::new(Source::new("test.flow", text));
    let (tree, messages) = parse(&source);
    assert!(messages.is_empty(), "{}", render(&messages, &source, false));
    flow::resolve(&tree, source.clone(), Library::built_in())
        .unwrap_or_else(|messages| panic!("{}", render(&messages, &source, false)))
}

#[test]
fn the_example_resolves() {
    let (flow, notes) = resolved(EXAMPLE);
    assert_eq!(notes.len(), 1);
    assert_eq!(flow.variants.len(), 4);
}
