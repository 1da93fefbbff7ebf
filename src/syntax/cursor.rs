//! Walks the tokens of one statement, notes how they are laid out, and words what is missing.

use super::lex::{Token, TokenKind};
use super::tree::{Gap, Name, Op, Piece};
use super::words::{is_name, is_reserved};
use crate::diag::Diagnostic;
use crate::diag::nearest;
use crate::source::{Span, Spanned};

/// What reading a part of a statement gives: the part, or the statement's one message.
pub(super) type Parsed<T> = Result<T, Diagnostic>;

/// Pieces before the clauses rank below this.
const CLAUSE_RANK: u8 = 10;

/// A place in the tokens of one statement.
pub(super) struct Cursor<'a> {
    text: &'a str,
    tokens: &'a [Token],
    at: usize,
    form: &'static str,
    pieces: Vec<Piece>,
}

impl<'a> Cursor<'a> {
    /// At the first token.
    pub fn new(text: &'a str, tokens: &'a [Token]) -> Self {
        Self { text, tokens, at: 0, form: "", pieces: vec![] }
    }

    /// Sets the form of the statement, which messages show as help.
    pub fn form(&mut self, form: &'static str) {
        self.form = form;
    }

    /// A piece of the layout begins at the next token.
    pub fn piece(&mut self, rank: u8, gap: Gap) {
        self.pieces.push(Piece { first: self.at, rank, gap });
    }

    /// Like [`Self::clause`]; the clause becomes a piece, in the order of `allowed`.
    pub fn clause_piece(
        &mut self,
        allowed: &[&'static str],
        gap: Gap,
    ) -> Parsed<Option<&'static str>> {
        let first = self.at;
        let clause = self.clause(allowed)?;
        if let Some(rank) = allowed.iter().position(|&word| Some(word) == clause) {
            self.pieces.push(Piece { first, rank: CLAUSE_RANK + rank as u8, gap });
        }
        Ok(clause)
    }

    /// The pieces noted.
    pub fn into_pieces(self) -> Vec<Piece> {
        self.pieces
    }

    /// The text of a span.
    pub fn text(&self, span: Span) -> &'a str {
        &self.text[span.start..span.end]
    }

    /// The next token.
    pub fn peek(&self) -> Option<Token> {
        self.tokens.get(self.at).copied()
    }

    /// Whether the next token is of this kind.
    pub fn sees(&self, kind: TokenKind) -> bool {
        self.peek().is_some_and(|token| token.kind == kind)
    }

    /// Takes the next token.
    pub fn next(&mut self) -> Option<Token> {
        let token = self.peek()?;
        self.at += 1;
        Some(token)
    }

    /// Takes the next token if it is of this kind.
    pub fn eat(&mut self, kind: TokenKind) -> Option<Token> {
        if self.sees(kind) { self.next() } else { None }
    }

    /// The next token, if it is a word.
    pub fn word(&self) -> Option<&'a str> {
        self.peek().filter(|token| token.kind == TokenKind::Word).map(|token| self.text(token.span))
    }

    /// Takes the next token if it is this word.
    pub fn eat_word(&mut self, word: &str) -> bool {
        let found = self.word() == Some(word);
        self.at += usize::from(found);
        found
    }

    /// Takes this word of the grammar.
    pub fn need_word(&mut self, word: &'static str) -> Parsed<()> {
        if self.eat_word(word) {
            return Ok(());
        }
        let mut message = self.missing(&format!("`{word}`"));
        if self.word().is_some_and(|found| nearest(found, [word]).is_some()) {
            message = message.label(format!("did you mean `{word}`?"));
        }
        Err(message)
    }

    /// Takes one of these words of the grammar, or nothing at the end of the statement.
    pub fn clause(&mut self, allowed: &[&'static str]) -> Parsed<Option<&'static str>> {
        let Some(token) = self.peek() else { return Ok(None) };
        if let Some(found) = self.word() {
            if let Some(&word) = allowed.iter().find(|&&word| word == found) {
                self.at += 1;
                return Ok(Some(word));
            }
            if let Some(meant) = nearest(found, allowed.iter().copied()) {
                return Err(self.with_form(
                    Diagnostic::error(token.span, format!("`{found}` means nothing here"))
                        .label(format!("did you mean `{meant}`?")),
                ));
            }
        }
        Err(self.surplus(token))
    }

    /// Nothing may follow.
    pub fn end(&self) -> Parsed<()> {
        self.peek().map_or(Ok(()), |token| Err(self.surplus(token)))
    }

    fn surplus(&self, token: Token) -> Diagnostic {
        if let Some(message) = self.decimal_comma() {
            return message;
        }
        let found = self.text(token.span);
        self.with_form(
            Diagnostic::error(token.span, format!("`{found}` means nothing here"))
                .label("not part of this statement"),
        )
    }

    /// A comma between two numbers with no blank on either side, as in `1,5 nm`.
    pub fn decimal_comma(&self) -> Option<Diagnostic> {
        let [before, comma, after] = self.tokens.get(self.at.checked_sub(1)?..)?.first_chunk()?;
        let kinds = [before.kind, comma.kind, after.kind];
        let close = before.span.end == comma.span.start && comma.span.end == after.span.start;
        (close && kinds == [TokenKind::Number, TokenKind::Comma, TokenKind::Number]).then(|| {
            Diagnostic::error(before.span.to(after.span), "a decimal comma")
                .label("write a point; a comma separates the items of a list")
        })
    }

    /// Takes a name.
    pub fn name(&mut self, what: &str) -> Parsed<Name> {
        match self.peek() {
            Some(token) if token.kind == TokenKind::Word => {
                let word = self.text(token.span);
                if !is_name(word) {
                    let message = Diagnostic::error(token.span, format!("`{word}` is not a name"));
                    let hyphenated = word.replace('_', "-");
                    return Err(message.label(if is_name(&hyphenated) {
                        format!("write `{hyphenated}`")
                    } else {
                        "a letter from a to z, then such letters, digits and `-`".to_owned()
                    }));
                }
                self.at += 1;
                Ok(Spanned::new(word.to_owned(), token.span))
            }
            Some(token) if token.kind == TokenKind::String => Err(Diagnostic::error(
                token.span,
                format!("expected {what}, found {}", self.text(token.span)),
            )
            .label("a name stands without quotes")),
            _ => Err(self.missing(what)),
        }
    }

    /// Takes a name that this statement gives; a reserved word is none.
    pub fn new_name(&mut self, what: &str) -> Parsed<Name> {
        let name = self.name(&format!("the name of {what}"))?;
        if is_reserved(&name.value) {
            return Err(Diagnostic::error(
                name.span,
                format!("`{}` is a word of the language and cannot name {what}", name.value),
            )
            .label("choose another name"));
        }
        Ok(name)
    }

    /// Takes an operation number.
    pub fn op(&mut self) -> Parsed<Op> {
        let Some(token) = self.peek().filter(|token| token.kind == TokenKind::Number) else {
            return Err(self.missing("an operation number"));
        };
        let text = self.text(token.span);
        let digits = text.bytes().all(|byte| byte.is_ascii_digit());
        match text.parse() {
            Ok(number) if digits && text.len() <= 6 => {
                self.at += 1;
                Ok(Op { number, text: text.to_owned(), span: token.span })
            }
            _ => Err(Diagnostic::error(token.span, format!("`{text}` is not an operation number"))
                .label("one to six digits")),
        }
    }

    /// Takes a string and resolves its escapes.
    pub fn string(&mut self, what: &str) -> Parsed<Spanned<String>> {
        let Some(token) = self.eat(TokenKind::String) else {
            let message = self.missing(what);
            return Err(if self.word().is_some() {
                message.label("put it in double quotes")
            } else {
                message
            });
        };
        let inner = self.text(Span::new(token.span.start + 1, token.span.end - 1));
        let mut value = String::with_capacity(inner.len());
        let mut letters = inner.chars();
        while let Some(letter) = letters.next() {
            match letter {
                '\\' => match letters.next() {
                    Some(escaped @ ('"' | '\\')) => value.push(escaped),
                    _ => {
                        return Err(Diagnostic::error(
                            token.span,
                            "a `\\` in a string stands before `\"` or `\\` only",
                        )
                        .label("write `\\\\` for a backslash"));
                    }
                },
                _ => value.push(letter),
            }
        }
        Ok(Spanned::new(value, token.span))
    }

    /// The message that `what` does not stand at the next token.
    pub fn missing(&self, what: &str) -> Diagnostic {
        let message = match self.peek() {
            Some(token) => Diagnostic::error(
                token.span,
                format!("expected {what}, found `{}`", self.text(token.span)),
            )
            .label(format!("{what} stands here")),
            None => Diagnostic::error(
                self.end_span(),
                format!("expected {what} at the end of the line"),
            )
            .label(format!("{what} is missing")),
        };
        self.with_form(message)
    }

    /// The message that a statement lacks a clause.
    pub fn lacks(&self, statement: &str, clause: &str) -> Diagnostic {
        self.with_form(
            Diagnostic::error(self.whole(), format!("`{statement}` lacks {clause}"))
                .label(format!("{clause} is missing")),
        )
    }

    /// Adds the form of the statement as help.
    pub fn with_form(&self, message: Diagnostic) -> Diagnostic {
        if self.form.is_empty() {
            message
        } else {
            message.help(format!("the form is `{}`", self.form))
        }
    }

    /// From the first token to the last.
    pub fn whole(&self) -> Span {
        match (self.tokens.first(), self.tokens.last()) {
            (Some(first), Some(last)) => first.span.to(last.span),
            _ => Span::default(),
        }
    }

    /// From a byte to the end of the last token taken.
    pub fn since(&self, start: usize) -> Span {
        let end = self.at.checked_sub(1).map_or(start, |last| self.tokens[last].span.end);
        Span::new(start, end.max(start))
    }

    /// The first byte of the next token, or the end of the last.
    pub fn here(&self) -> usize {
        self.peek().map_or(self.end_span().start, |token| token.span.start)
    }

    fn end_span(&self) -> Span {
        let end = self.tokens.last().map_or(0, |token| token.span.end);
        Span::new(end, end)
    }
}

/// Fills a slot that may be filled once.
pub(super) fn once<T>(slot: &mut Option<T>, value: T, clause: &str, span: Span) -> Parsed<()> {
    if slot.replace(value).is_some() {
        return Err(
            Diagnostic::error(span, format!("`{clause}` stands twice")).label("the second one")
        );
    }
    Ok(())
}
