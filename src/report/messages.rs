//! Messages about an input as text: file, line, column, the line with the place marked, what
//! stands there, and what to do.

use annotate_snippets::{AnnotationKind, Group, Level, Renderer, Snippet};

use crate::diag::{Diagnostic, Severity};
use crate::source::{Source, Span};

/// Widest text of a message that is not on a terminal, in characters.
const WIDTH: usize = 140;

/// Renders messages, one blank line between; empty for none. Without colour the text is the
/// same on every terminal.
pub fn render(messages: &[Diagnostic], source: &Source, color: bool) -> String {
    let renderer = if color { Renderer::styled() } else { Renderer::plain() }.term_width(WIDTH);
    let mut out = String::new();
    for message in messages {
        if !out.is_empty() {
            out.push('\n');
        }
        out.push_str(&renderer.render(&[group(message, source)]));
        out.push('\n');
    }
    out
}

fn group<'a>(message: &'a Diagnostic, source: &'a Source) -> Group<'a> {
    let level = match message.severity {
        Severity::Error => Level::ERROR,
        Severity::Warning => Level::WARNING,
        Severity::Note => Level::NOTE,
    };
    let title = level.primary_title(message.message.as_str());
    let group = match message.span {
        Some(span) => title.element(snippet(span, &message.label, source)),
        None => title.element(annotate_snippets::Origin::path(source.name.as_str())),
    };
    match &message.help {
        Some(help) => group.element(Level::HELP.message(help.as_str())),
        None => group,
    }
}

/// Only the marked lines are handed over: what is far away in a long file costs nothing.
fn snippet<'a>(
    span: Span,
    label: &'a str,
    source: &'a Source,
) -> Snippet<'a, annotate_snippets::Annotation<'a>> {
    let text = &source.text;
    let start = floor(text, span.start);
    let end = floor(text, span.end.max(span.start)).max(start);
    let first = text[..start].rfind('\n').map_or(0, |at| at + 1);
    let last = text[end..].find('\n').map_or(text.len(), |at| end + at);
    let annotation = AnnotationKind::Primary.span(start - first..end - first);
    let annotation = if label.is_empty() { annotation } else { annotation.label(label) };
    Snippet::source(&text[first..last])
        .line_start(source.position(start).line)
        .path(source.name.as_str())
        .annotation(annotation)
}

/// The nearest character boundary at or before an offset.
fn floor(text: &str, offset: usize) -> usize {
    let mut offset = offset.min(text.len());
    while !text.is_char_boundary(offset) {
        offset -= 1;
    }
    offset
}
