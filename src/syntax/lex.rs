//! Text to tokens, one logical line at a time.
//!
//! A logical line is a physical line and those that it goes on in by a `\` at its end. A
//! comment ends it, even after `\`. Nothing fails: what is no token of the language becomes
//! [`TokenKind::Stray`] or [`TokenKind::OpenString`], and the statement answers for it.

use nom::branch::alt;
use nom::bytes::complete::{tag, take_while, take_while1};
use nom::character::complete::{anychar, char, digit1, none_of, one_of, satisfy};
use nom::combinator::{opt, recognize, value};
use nom::multi::many0_count;
use nom::sequence::{pair, preceded};
use nom::{IResult, Parser};

use crate::source::Span;

/// What a token is; its text is that of its span.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum TokenKind {
    /// A word: letters, digits, `-`; with a `/` in units.
    Word,
    /// A number.
    Number,
    /// A string in double quotes.
    String,
    /// A string that its line does not close.
    OpenString,
    /// `,`
    Comma,
    /// `:`
    Colon,
    /// `|`
    Bar,
    /// `%`
    Percent,
    /// `±` or `+-`
    PlusMinus,
    /// `<=`
    AtMost,
    /// `>=`
    AtLeast,
    /// A character that stands for nothing in the language.
    Stray,
}

/// A token and where it stands.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Token {
    /// What it is.
    pub kind: TokenKind,
    /// Where it stands.
    pub span: Span,
}

/// A logical line.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct LogicalLine {
    /// From the first character to the last, line ending left out.
    pub span: Span,
    /// The tokens.
    pub tokens: Vec<Token>,
    /// The comment that ends it, `#` included, trailing blanks left out.
    pub comment: Option<Span>,
    /// Whether a `\` before the comment went without effect.
    pub cut: bool,
}

/// What stands at one place of a line.
#[derive(Debug, Clone, Copy, PartialEq)]
enum Lexeme {
    Token(TokenKind),
    Comment,
    Backslash,
}

/// Reads the logical line that starts at byte `start`, and tells where the next one starts.
pub(super) fn logical_line(text: &str, start: usize) -> (LogicalLine, usize) {
    let mut line =
        LogicalLine { span: Span::new(start, start), tokens: vec![], comment: None, cut: false };
    let mut at = start;
    loop {
        let (end, next) = physical_line(text, at);
        line.span.end = end;
        let goes_on = physical_tokens(text, at, end, &mut line);
        at = next;
        if !goes_on || at == text.len() {
            return (line, at);
        }
    }
}

/// The end of the physical line at byte `start` without its line ending, and where the next starts.
fn physical_line(text: &str, start: usize) -> (usize, usize) {
    match text[start..].find('\n') {
        Some(length) => {
            let line = &text[start..start + length];
            (start + line.strip_suffix('\r').unwrap_or(line).len(), start + length + 1)
        }
        None => (text.len(), text.len()),
    }
}

/// Adds the tokens of one physical line, and tells whether a `\` ends it.
fn physical_tokens(text: &str, start: usize, end: usize, line: &mut LogicalLine) -> bool {
    let mut rest = &text[start..end];
    let mut backslash: Option<Span> = None;
    loop {
        rest = rest.trim_start_matches(is_blank);
        let at = end - rest.len();
        let Ok((after, lexeme)) = lexeme(rest) else {
            return backslash.is_some();
        };
        let span = Span::new(at, end - after.len());
        if lexeme == Lexeme::Comment {
            line.comment = Some(Span::new(at, at + text[at..end].trim_end().len()));
            line.cut = backslash.is_some();
            return false;
        }
        let mut push = |kind, span| line.tokens.push(Token { kind, span });
        if let Some(stray) = backslash.take() {
            push(TokenKind::Stray, stray);
        }
        match lexeme {
            Lexeme::Token(kind) => push(kind, span),
            Lexeme::Backslash | Lexeme::Comment => backslash = Some(span),
        }
        rest = after;
    }
}

/// Whether a character only separates: white space, and the byte order mark.
fn is_blank(c: char) -> bool {
    c.is_whitespace() || c == '\u{feff}'
}

fn lexeme(input: &str) -> IResult<&str, Lexeme> {
    alt((
        value(Lexeme::Comment, pair(char('#'), take_while(|_| true))),
        value(Lexeme::Backslash, char('\\')),
        token.map(Lexeme::Token),
    ))
    .parse(input)
}

fn token(input: &str) -> IResult<&str, TokenKind> {
    alt((
        value(TokenKind::Number, number),
        value(TokenKind::Word, word),
        string,
        value(TokenKind::Comma, char(',')),
        value(TokenKind::Colon, char(':')),
        value(TokenKind::Bar, char('|')),
        value(TokenKind::Percent, char('%')),
        value(TokenKind::PlusMinus, alt((tag("±"), tag("+-")))),
        value(TokenKind::AtMost, tag("<=")),
        value(TokenKind::AtLeast, tag(">=")),
        value(TokenKind::Stray, anychar),
    ))
    .parse(input)
}

/// `[-] digits [. digits] [e [+|-] digits]`
fn number(input: &str) -> IResult<&str, &str> {
    recognize((
        opt(char('-')),
        digit1,
        opt(pair(char('.'), digit1)),
        opt((char('e'), opt(one_of("+-")), digit1)),
    ))
    .parse(input)
}

/// Wider than a name, so that `void_top` or `größe` is one wrong word and not several.
fn word(input: &str) -> IResult<&str, &str> {
    let first = satisfy(|c| c.is_alphabetic() || c == '_');
    let further = |c: char| c.is_alphanumeric() || c == '-' || c == '_';
    let per = preceded(char('/'), take_while1(char::is_alphabetic));
    recognize((first, take_while(further), opt(per))).parse(input)
}

/// A string keeps its quotes; `\"` and `\\` stand for a quote and a backslash.
fn string(input: &str) -> IResult<&str, TokenKind> {
    let escaped = pair(char('\\'), anychar).map(|_| ());
    let plain = none_of("\"\\").map(|_| ());
    let (rest, _) = char('"')(input)?;
    let (rest, _) = many0_count(alt((escaped, plain))).parse(rest)?;
    Ok(match char::<_, nom::error::Error<&str>>('"')(rest) {
        Ok((rest, _)) => (rest, TokenKind::String),
        Err(_) => ("", TokenKind::OpenString),
    })
}
