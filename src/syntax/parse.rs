//! Reads a flow file line by line. Cannot fail: a tree always comes back, messages beside it.
//!
//! Cost: linear in the text. One bad statement costs one message; a misspelt or forgotten
//! section word is taken as the section that was meant, so that what follows is still read.

use super::cursor::{Cursor, Parsed};
use super::lex::{LogicalLine, Token, TokenKind, logical_line};
use super::sections::{
    flow_statement, limit_statement, net_statement, split_statement, use_statement,
    waiver_statement,
};
use super::sizes::{MAX_BYTES, MAX_STATEMENTS};
use super::step::step_statement;
use super::tree::{Broken, Content, Line, Statement, Tree};
use super::wafer::wafer_statement;
use super::words::{STATES, STEP_VERBS, Section, WAFER_WORDS};
use crate::diag::nearest;
use crate::diag::{Diagnostic, Severity};
use crate::source::{Source, Span};

/// Reads a flow file.
///
/// Diagnostics come in the order of the text, one at most a statement; all are errors.
pub fn parse(source: &Source) -> (Tree, Vec<Diagnostic>) {
    let mut reader = Reader::default();
    if source.text.len() > MAX_BYTES {
        let message = format!("the file has {} bytes", source.text.len());
        reader.messages.push(
            Diagnostic::new(Severity::Error, None, message)
                .help(format!("the limit is {MAX_BYTES} bytes (1 MiB)")),
        );
        return (reader.tree, reader.messages);
    }
    reader.read(&source.text);
    reader.check_outline(&source.text);
    (reader.tree, reader.messages)
}

#[derive(Default)]
struct Reader {
    tree: Tree,
    messages: Vec<Diagnostic>,
    section: Option<Section>,
    /// Sections opened, with the place.
    opened: Vec<(Section, Span)>,
    /// Where `flow` stands, well-formed or not.
    flow: Option<Span>,
    statements: usize,
}

impl Reader {
    fn read(&mut self, text: &str) {
        let mut at = 0;
        while at < text.len() {
            let (line, next) = logical_line(text, at);
            at = next;
            if !line.tokens.is_empty() {
                self.statements += 1;
                if self.statements == MAX_STATEMENTS + 1 {
                    let span = line.tokens[0].span;
                    self.messages.push(
                        Diagnostic::error(span, "too many statements")
                            .label(format!("a flow file may have {MAX_STATEMENTS} statements")),
                    );
                }
            }
            let line = if self.statements > MAX_STATEMENTS {
                self.broken(text, line, None)
            } else {
                self.line(text, line)
            };
            self.tree.lines.push(line);
        }
    }

    fn line(&mut self, text: &str, line: LogicalLine) -> Line {
        if line.tokens.is_empty() {
            return finish(line, Content::Blank, vec![]);
        }
        if let Some(message) = lexical(text, &line.tokens) {
            self.note_flow(text, &line.tokens);
            return self.broken(text, line, Some(message));
        }
        if let Some(opened) = self.section_word(text, &line.tokens) {
            return match opened {
                Ok(section) => finish(line, Content::Section(section), vec![]),
                Err(message) => self.broken(text, line, Some(message)),
            };
        }
        let mut cursor = Cursor::new(text, &line.tokens);
        match self.statement(text, &line.tokens, &mut cursor) {
            Ok(statement) => {
                let pieces = cursor.into_pieces();
                finish(line, Content::Statement(Box::new(statement)), pieces)
            }
            Err(message) => self.broken(text, line, Some(message)),
        }
    }

    fn broken(&mut self, text: &str, line: LogicalLine, message: Option<Diagnostic>) -> Line {
        self.messages.extend(message.map(|message| match line.cut {
            true => message.help("a comment ends the statement, even after `\\`"),
            false => message,
        }));
        let words = line.tokens.iter().map(|token| text[token.span.start..token.span.end].into());
        let content = Content::Broken(Broken { section: self.section, words: words.collect() });
        finish(line, content, vec![])
    }

    /// A line that holds just a section word, misspelt or with a colon perhaps.
    fn section_word(&mut self, text: &str, tokens: &[Token]) -> Option<Parsed<Section>> {
        let [first, rest @ ..] = tokens else { return None };
        let colon = matches!(rest, [token] if token.kind == TokenKind::Colon);
        if first.kind != TokenKind::Word || !(rest.is_empty() || colon) {
            return None;
        }
        let word = &text[first.span.start..first.span.end];
        if let Some(section) = Section::of_word(word) {
            let result = self.open(section, first.span);
            if colon && result.is_ok() {
                let message = Diagnostic::error(rest[0].span, "a section word stands alone")
                    .label("leave out the colon");
                return Some(Err(message));
            }
            return Some(result.map(|()| section));
        }
        let in_limits = self.section == Some(Section::Limits);
        if in_limits && nearest(word, STATES.iter().copied()).is_some() {
            return None;
        }
        let meant = nearest(word, Section::ALL.iter().map(|section| section.word()))?;
        if let Some(section) = Section::of_word(meant) {
            self.section = Some(section);
            self.opened.push((section, first.span));
        }
        Some(Err(Diagnostic::error(first.span, format!("`{word}` is not a section"))
            .label(format!("did you mean `{meant}`?"))))
    }

    fn open(&mut self, section: Section, span: Span) -> Parsed<()> {
        self.section = Some(section);
        let repeated = self.opened.iter().any(|(opened, _)| *opened == section);
        let before_flow = self.flow.is_none() && self.opened.is_empty();
        self.opened.push((section, span));
        let word = section.word();
        if repeated {
            return Err(Diagnostic::error(span, format!("a second section `{word}`"))
                .label("put its statements into the first one"));
        }
        if before_flow {
            self.flow = Some(span);
            return Err(Diagnostic::error(span, "a section before the `flow` statement")
                .label("a flow begins with `flow NAME`"));
        }
        Ok(())
    }

    fn note_flow(&mut self, text: &str, tokens: &[Token]) {
        if let Some(first) = tokens.first()
            && &text[first.span.start..first.span.end] == "flow"
        {
            self.flow = self.flow.or(Some(first.span));
        }
    }

    fn statement(
        &mut self,
        text: &str,
        tokens: &[Token],
        cursor: &mut Cursor,
    ) -> Parsed<Statement> {
        let Some(first) = tokens.first() else { return Err(cursor.missing("a statement")) };
        match cursor.word() {
            Some("flow") => {
                let earlier = self.flow.is_some();
                self.note_flow(text, tokens);
                return if earlier || self.section.is_some() {
                    Err(Diagnostic::error(first.span, "a second `flow` in one file")
                        .label("one file holds one flow"))
                } else {
                    flow_statement(cursor)
                };
            }
            Some("use") if self.flow.is_some() || self.section.is_some() => {
                return Err(Diagnostic::error(first.span, "`use` stands before `flow`")
                    .label("move it to the top of the file"));
            }
            Some("use") => return use_statement(cursor),
            _ => {}
        }
        if let Some(meant) = self.meant_section(text, tokens) {
            let word = meant.word();
            let known = self.opened.iter().any(|(opened, _)| *opened == meant);
            if !known {
                self.section = Some(meant);
                self.opened.push((meant, first.span));
            }
            return Err(Diagnostic::error(
                first.span,
                format!("a statement of `{word}` outside of its section"),
            )
            .label(if known {
                format!("put it under `{word}`")
            } else {
                format!("write a line `{word}` above it")
            }));
        }
        Ok(match self.section {
            Some(Section::Wafer) => Statement::Wafer(wafer_statement(cursor)?),
            Some(Section::Steps) => Statement::Step(step_statement(cursor)?),
            Some(Section::Splits) => Statement::Split(split_statement(cursor)?),
            Some(Section::Nets) => net_statement(cursor)?,
            Some(Section::Limits) => Statement::Limit(limit_statement(cursor)?),
            Some(Section::Waivers) => Statement::Waiver(waiver_statement(cursor)?),
            None => return Err(self.preamble(text, first.span)),
        })
    }

    /// The section of a statement that can only belong to another than the open one.
    fn meant_section(&self, text: &str, tokens: &[Token]) -> Option<Section> {
        let first = tokens.first()?;
        let word = &text[first.span.start..first.span.end];
        let second = tokens.get(1).map_or("", |token| &text[token.span.start..token.span.end]);
        let numbered = first.kind == TokenKind::Number && STEP_VERBS.contains(&second);
        match self.section {
            None | Some(Section::Wafer | Section::Nets | Section::Limits | Section::Waivers)
                if numbered =>
            {
                Some(Section::Steps)
            }
            None | Some(Section::Steps) if WAFER_WORDS.contains(&word) => Some(Section::Wafer),
            _ => None,
        }
    }

    fn preamble(&mut self, text: &str, span: Span) -> Diagnostic {
        let word = &text[span.start..span.end];
        let known: &[&str] = if self.flow.is_some() { &[] } else { &["flow", "use"] };
        if let Some(meant) = nearest(word, known.iter().copied()) {
            if meant == "flow" {
                self.flow = Some(span);
            }
            return Diagnostic::error(span, format!("`{word}` begins no statement"))
                .label(format!("did you mean `{meant}`?"));
        }
        let sections: Vec<_> = Section::ALL.iter().map(|section| section.word()).collect();
        if self.flow.is_some() {
            Diagnostic::error(span, "a statement outside of any section")
                .label("no section is open here")
                .help(format!("the sections are {}", sections.join(", ")))
        } else {
            Diagnostic::error(span, format!("`{word}` begins no statement"))
                .label("a flow begins with `flow NAME`")
        }
    }

    /// What a file must have.
    fn check_outline(&mut self, text: &str) {
        let Some(first) = self.tree.lines.iter().find_map(|line| line.tokens.first()) else {
            self.messages.push(
                Diagnostic::new(Severity::Error, None, "the file holds no statement").help(
                    "a flow begins with `flow NAME`, and has the sections `wafer` and `steps`",
                ),
            );
            return;
        };
        if self.statements > MAX_STATEMENTS {
            return;
        }
        let Some(flow) = self.flow else {
            let word = &text[first.span.start..first.span.end];
            let reported = self.messages.iter().any(|message| message.span == Some(first.span));
            if !reported {
                self.messages.push(
                    Diagnostic::error(first.span, "the file has no `flow` statement")
                        .label(format!("write `flow NAME` before or instead of `{word}`")),
                );
            }
            return;
        };
        for section in [Section::Wafer, Section::Steps] {
            if !self.opened.iter().any(|(opened, _)| *opened == section) {
                let word = section.word();
                self.messages.push(
                    Diagnostic::error(flow, format!("the flow has no section `{word}`"))
                        .label(format!("`{word}` is missing")),
                );
            }
        }
    }
}

fn finish(line: LogicalLine, content: Content, pieces: Vec<super::tree::Piece>) -> Line {
    Line { span: line.span, tokens: line.tokens, comment: line.comment, content, pieces }
}

/// The message of the first token that is none of the language.
fn lexical(text: &str, tokens: &[Token]) -> Option<Diagnostic> {
    let bad = tokens
        .iter()
        .find(|token| matches!(token.kind, TokenKind::Stray | TokenKind::OpenString))?;
    if bad.kind == TokenKind::OpenString {
        return Some(
            Diagnostic::error(bad.span, "a string without its closing quote")
                .label("a string ends on its line, with `\"`"),
        );
    }
    let stray = &text[bad.span.start..bad.span.end];
    let label = match stray {
        "−" | "–" | "—" => "write `-` for a minus",
        "=" if text[bad.span.end..].starts_with('>') => "write `>=` for at least",
        "<" | "≤" | "=" => "write `<=` for at most",
        ">" | "≥" => "write `>=` for at least",
        "“" | "”" | "„" | "'" | "‘" | "’" | "`" => "write `\"` around a string",
        "." => "a number has digits on both sides of its point",
        "+" => "write `±` or `+-` before a tolerance",
        "\\" => "`\\` stands at the end of a line, to go on in the next",
        "°" => "write `deg` or `C`",
        ";" => "one statement stands on one line",
        _ => "stands for nothing in a flow",
    };
    let shown = match stray.chars().next() {
        Some(c) if c.is_control() => format!("U+{:04X}", c as u32),
        _ => format!("`{stray}`"),
    };
    Some(Diagnostic::error(bad.span, format!("unexpected {shown}")).label(label))
}
