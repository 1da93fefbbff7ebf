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
    let breaks: Vec<usize> = source.text.match_indices('\n').map(|(at, _)| at).collect();
    let mut out = String::new();
    for message in messages {
        if !out.is_empty() {
            out.push('\n');
        }
        out.push_str(&renderer.render(&[group(message, source, &breaks)]));
        out.push('\n');
    }
    out
}

fn group<'a>(message: &'a Diagnostic, source: &'a Source, breaks: &[usize]) -> Group<'a> {
    let level = match message.severity {
        Severity::Error => Level::ERROR,
        Severity::Warning => Level::WARNING,
        Severity::Note => Level::NOTE,
    };
    let title = level.primary_title(message.message.as_str());
    let group = match message.span {
        Some(span) => title.element(snippet(span, &message.label, source, breaks)),
        None => title.element(annotate_snippets::Origin::path(source.name.as_str())),
    };
    match &message.help {
        Some(help) => group.element(Level::HELP.message(help.as_str())),
        None => group,
    }
}

/// Only the marked lines are handed over: what is far away in a long file costs nothing.
/// `breaks` are the places of all line feeds.
fn snippet<'a>(
    span: Span,
    label: &'a str,
    source: &'a Source,
    breaks: &[usize],
) -> Snippet<'a, annotate_snippets::Annotation<'a>> {
    let text = &source.text;
    let start = floor(text, span.start);
    let end = floor(text, span.end.max(span.start)).max(start);
    let line = breaks.partition_point(|&at| at < start);
    let first = line.checked_sub(1).map_or(0, |before| breaks[before] + 1);
    let last_line = breaks.partition_point(|&at| at < end);
    let last = breaks.get(last_line).copied().unwrap_or(text.len());
    let lines = text[first..last].strip_suffix('\r').unwrap_or(&text[first..last]);
    let annotation = AnnotationKind::Primary.span(start - first..end - first);
    let annotation = if label.is_empty() { annotation } else { annotation.label(label) };
    Snippet::source(lines).line_start(line + 1).path(source.name.as_str()).annotation(annotation)
}

/// The nearest character boundary at or before an offset.
fn floor(text: &str, offset: usize) -> usize {
    let mut offset = offset.min(text.len());
    while !text.is_char_boundary(offset) {
        offset -= 1;
    }
    offset
}
