//! The standard layout of a flow file.
//!
//! Sections stay in the order written, one blank line between; statements are indented by
//! two, `layer` by four; columns stand two blanks apart and are aligned within a section;
//! clauses stand in the order of the grammar; `±` replaces `+-`; number texts, comments and
//! single blank lines between statements stay. A statement longer than [`WIDTH`] goes on in
//! the next line at a clause. A broken line stays as it is. Laying out twice changes nothing.

use super::lex::{Token, TokenKind};
use super::parse::parse;
use super::tree::{Content, Gap, Line, Statement, Tree, WaferStatement};
use crate::source::{Source, Span};

/// Longest line of the layout where a statement can be broken, in characters.
const WIDTH: usize = 120;

/// Lays a flow file out. Text that is no flow file comes back with its lines as they are.
pub fn tidy(text: &str) -> String {
    let source = Source::new("", text);
    let (tree, _) = parse(&source);
    if tree.lines.is_empty() {
        return text.to_owned();
    }
    Layout { text, tree: &tree, out: String::with_capacity(text.len() + 64) }.file()
}

/// A statement on one line with single blanks, clauses in the order of the grammar.
pub fn line_text(text: &str, line: &Line) -> String {
    let pieces = pieces(text, line);
    let texts: Vec<&str> = pieces.iter().map(|piece| piece.text.as_str()).collect();
    texts.join(" ")
}

/// A piece as it is printed.
struct Printed {
    gap: Gap,
    text: String,
}

/// The pieces of a statement in the order of the grammar, the empty ones merged into the next.
fn pieces(text: &str, line: &Line) -> Vec<Printed> {
    let mut order: Vec<usize> = (0..line.pieces.len()).collect();
    order.sort_by_key(|&piece| line.pieces[piece].rank);
    let mut printed: Vec<Printed> = vec![];
    let mut gap = Gap::Narrow;
    for piece in order {
        let first = line.pieces[piece].first;
        let end = line.pieces.get(piece + 1).map_or(line.tokens.len(), |next| next.first);
        gap = wider(gap, line.pieces[piece].gap);
        if first < end {
            printed.push(Printed { gap, text: tokens_text(text, &line.tokens[first..end]) });
            gap = Gap::Narrow;
        }
    }
    if printed.is_empty() {
        printed.push(Printed { gap, text: tokens_text(text, &line.tokens) });
    }
    printed
}

fn wider(a: Gap, b: Gap) -> Gap {
    match (a, b) {
        (Gap::Column, _) | (_, Gap::Column) => Gap::Column,
        (Gap::Wide, _) | (_, Gap::Wide) => Gap::Wide,
        _ => Gap::Narrow,
    }
}

fn tokens_text(text: &str, tokens: &[Token]) -> String {
    let mut out = String::new();
    let mut after_colon = true;
    for token in tokens {
        let tight = matches!(token.kind, TokenKind::Comma | TokenKind::Colon);
        if !tight && !after_colon {
            out.push(' ');
        }
        after_colon = token.kind == TokenKind::Colon;
        out.push_str(match token.kind {
            TokenKind::PlusMinus => "±",
            _ => slice(text, token.span),
        });
    }
    out
}

fn slice(text: &str, span: Span) -> &str {
    &text[span.start..span.end]
}

struct Layout<'a> {
    text: &'a str,
    tree: &'a Tree,
    out: String,
}

/// A run of lines: what stands before the first section, or a section.
struct Block<'a> {
    lines: &'a [Line],
}

impl Layout<'_> {
    fn file(mut self) -> String {
        for block in blocks(self.tree) {
            self.block(&block);
        }
        self.out
    }

    /// One section: comments that belong to it, its word, its statements.
    fn block(&mut self, block: &Block) {
        let head = block.lines.iter().position(is_statement_of_head).map_or(0, |at| at + 1);
        let is_section = block.lines.iter().any(|line| matches!(line.content, Content::Section(_)));
        let columns = Columns::of(self.text, block.lines);
        let comments = self.comment_column(block.lines, &columns);
        let mut blank = !self.out.is_empty();
        let mut anything = false;
        for (at, line) in block.lines.iter().enumerate() {
            let inside = is_section && at >= head;
            let empty = matches!(line.content, Content::Blank) && line.comment.is_none();
            if empty {
                blank |= anything;
                continue;
            }
            if blank && !(is_section && at == head && head > 0) {
                self.out.push('\n');
            }
            blank = false;
            anything = true;
            match &line.content {
                Content::Broken(_) => {
                    self.out.push_str(slice(self.text, line.span).trim_end_matches('\r'))
                }
                Content::Blank => {
                    self.out.push_str(if inside { "  " } else { "" });
                    self.comment(line);
                }
                Content::Section(section) => {
                    anything = false;
                    self.out.push_str(section.word());
                    if line.comment.is_some() {
                        self.out.push_str("  ");
                        self.comment(line);
                    }
                }
                Content::Statement(statement) => {
                    let indent = if inside { indent(statement) } else { 0 };
                    let printed = self.statement(line, indent, &columns);
                    let width = printed.rsplit('\n').next().map_or(0, width);
                    self.out.push_str(&printed);
                    if line.comment.is_some() {
                        let pad = comments.saturating_sub(width).max(2);
                        self.out.extend(std::iter::repeat_n(' ', pad));
                        self.comment(line);
                    }
                }
            }
            self.out.push('\n');
        }
    }

    fn comment(&mut self, line: &Line) {
        if let Some(comment) = line.comment {
            self.out.push_str(slice(self.text, comment).replace('\r', " ").trim_end());
        }
    }

    /// The column of trailing comments: two blanks after the longest statement that has one.
    fn comment_column(&self, lines: &[Line], columns: &Columns) -> usize {
        lines
            .iter()
            .filter(|line| line.comment.is_some())
            .filter_map(|line| match &line.content {
                Content::Statement(statement) => {
                    let printed = self.statement(line, indent(statement), columns);
                    printed.rsplit('\n').next().map(|last| width(last) + 2)
                }
                _ => None,
            })
            .max()
            .unwrap_or(0)
    }

    fn statement(&self, line: &Line, indent: usize, columns: &Columns) -> String {
        let mut out = " ".repeat(indent);
        let mut column = 0;
        let mut line_width = indent;
        for (at, piece) in pieces(self.text, line).iter().enumerate() {
            let mut gap = match piece.gap {
                _ if at == 0 => 0,
                Gap::Narrow => 1,
                Gap::Wide => 2,
                Gap::Column => {
                    column += 1;
                    columns.start(column).saturating_sub(line_width).max(2)
                }
            };
            if at > 0 && column_break(piece.gap) && line_width + gap + width(&piece.text) > WIDTH {
                out.push_str(" \\\n");
                line_width = 0;
                gap = indent + CONTINUED;
            }
            out.extend(std::iter::repeat_n(' ', gap));
            out.push_str(&piece.text);
            line_width += gap + width(&piece.text);
        }
        out
    }
}

/// Further indentation of a line that goes on from the one before.
const CONTINUED: usize = 4;

/// Whether a statement may be broken before a piece with this gap.
fn column_break(gap: Gap) -> bool {
    matches!(gap, Gap::Wide | Gap::Narrow)
}

fn width(text: &str) -> usize {
    text.chars().count()
}

fn indent(statement: &Statement) -> usize {
    match statement {
        Statement::Use(_) | Statement::Flow { .. } => 0,
        Statement::Wafer(WaferStatement::Layer { .. }) => 4,
        _ => 2,
    }
}

/// Where the columns of a section start.
struct Columns {
    starts: Vec<usize>,
}

impl Columns {
    fn of(text: &str, lines: &[Line]) -> Self {
        let mut starts: Vec<usize> = vec![0];
        let rows: Vec<(usize, Vec<Vec<Printed>>)> = lines
            .iter()
            .filter_map(|line| match &line.content {
                Content::Statement(statement) => {
                    Some((indent(statement), cells(pieces(text, line))))
                }
                _ => None,
            })
            .collect();
        let deepest = rows.iter().map(|(_, cells)| cells.len()).max().unwrap_or(0);
        for column in 1..deepest {
            let start = rows
                .iter()
                .filter(|(_, cells)| cells.len() > column)
                .map(|(indent, cells)| {
                    let begin = if column == 1 { *indent } else { starts[column - 1] };
                    begin + cell_width(&cells[column - 1]) + 2
                })
                .max()
                .unwrap_or(0);
            starts.push(start);
        }
        Self { starts }
    }

    fn start(&self, column: usize) -> usize {
        self.starts.get(column).copied().unwrap_or(0)
    }
}

/// Pieces grouped by the column that they stand in.
fn cells(pieces: Vec<Printed>) -> Vec<Vec<Printed>> {
    let mut cells: Vec<Vec<Printed>> = vec![];
    for piece in pieces {
        match cells.last_mut() {
            Some(cell) if piece.gap != Gap::Column => cell.push(piece),
            _ => cells.push(vec![piece]),
        }
    }
    cells
}

fn cell_width(cell: &[Printed]) -> usize {
    let gaps: usize =
        cell.iter().skip(1).map(|piece| if piece.gap == Gap::Wide { 2 } else { 1 }).sum();
    gaps + cell.iter().map(|piece| width(&piece.text)).sum::<usize>()
}

fn is_statement_of_head(line: &Line) -> bool {
    matches!(line.content, Content::Section(_))
}

/// Splits the lines before each section word; comments right above a section word, from the
/// last blank line on or from the first that is not indented, belong to that section.
fn blocks(tree: &Tree) -> Vec<Block<'_>> {
    let lines = &tree.lines;
    let mut starts = vec![0];
    for (at, line) in lines.iter().enumerate() {
        if !matches!(line.content, Content::Section(_)) {
            continue;
        }
        let gap = lines[..at]
            .iter()
            .rposition(|line| !matches!(line.content, Content::Blank))
            .map_or(0, |last| last + 1);
        let blank = lines[gap..at].iter().rposition(|line| line.comment.is_none());
        let start = match blank {
            Some(blank) => gap + blank + 1,
            None => lines[gap..at].iter().position(unindented).map_or(at, |first| gap + first),
        };
        starts.push(start);
    }
    starts.push(lines.len());
    starts.windows(2).map(|pair| Block { lines: &lines[pair[0]..pair[1]] }).collect()
}

fn unindented(line: &Line) -> bool {
    line.comment.is_some_and(|comment| comment.start == line.span.start)
}
