//! The tree of a flow file: one entry a logical line, nothing left out.
//!
//! Names are as written; amounts are read, their units checked. The text itself stays with
//! the source: every token has its span there.

use super::lex::Token;
use super::words::Section;
use crate::source::{Span, Spanned};
use crate::units::{
    Amount, Angle, Capacitance, Duration, Length, Resistance, Share, Temperature, Unit,
};

/// A word as written.
pub type Name = Spanned<String>;

/// An amount as read.
pub type Written<T> = Spanned<Amount<T>>;

/// The tree of a flow file.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Tree {
    /// The logical lines, in order; together they cover the text.
    pub lines: Vec<Line>,
}

/// A logical line: a physical one, with those that it goes on in.
#[derive(Debug, Clone, PartialEq)]
pub struct Line {
    /// From the first character to the last, line ending left out.
    pub span: Span,
    /// The tokens, comment left out.
    pub tokens: Vec<Token>,
    /// The comment, `#` included.
    pub comment: Option<Span>,
    /// What it says.
    pub content: Content,
    /// How its tokens are laid out, in the order written; they cover the tokens of a statement.
    pub pieces: Vec<Piece>,
}

/// What a line says.
#[derive(Debug, Clone, PartialEq)]
pub enum Content {
    /// Nothing, or a comment only.
    Blank,
    /// It opens a section.
    Section(Section),
    /// A statement.
    Statement(Box<Statement>),
    /// What cannot be read; a diagnostic says why.
    Broken(Broken),
}

/// What is still known of a line that cannot be read, so that one mistake costs one message.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Broken {
    /// The section that it stands in.
    pub section: Option<Section>,
    /// Its words and numbers as written, in order.
    pub words: Vec<String>,
}

/// A run of tokens that stays together in the layout.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Piece {
    /// Index of its first token; it ends where the next piece begins.
    pub first: usize,
    /// Its place among the pieces in the order of the grammar.
    pub rank: u8,
    /// What separates it from the piece before.
    pub gap: Gap,
}

/// What separates a piece from the one before.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Gap {
    /// Two blanks, and a column that is aligned within the section.
    Column,
    /// Two blanks.
    Wide,
    /// One blank.
    Narrow,
}

/// A statement.
#[derive(Debug, Clone, PartialEq)]
pub enum Statement {
    /// `use "FILE"`
    Use(Spanned<String>),
    /// `flow NAME "TITLE"`
    Flow {
        /// Its name.
        name: Name,
        /// Its title.
        title: Option<Spanned<String>>,
    },
    /// A statement of `wafer`.
    Wafer(WaferStatement),
    /// A statement of `steps`.
    Step(StepStatement),
    /// A statement of `splits`.
    Split(SplitStatement),
    /// A statement of `nets`.
    Net(NetStatement),
    /// `next-level LENGTH MATERIAL`
    NextLevel(Film),
    /// A statement of `limits`.
    Limit(LimitStatement),
    /// A statement of `waivers`.
    Waiver(WaiverStatement),
}

/// `LENGTH MATERIAL`
#[derive(Debug, Clone, PartialEq)]
pub struct Film {
    /// How thick.
    pub thickness: Written<Length>,
    /// Of what.
    pub material: Name,
}

/// A statement of `wafer`.
#[derive(Debug, Clone, PartialEq)]
pub enum WaferStatement {
    /// `bulk MATERIAL`
    Bulk(Name),
    /// `plane LENGTH MATERIAL`
    Plane(Film),
    /// `film LENGTH MATERIAL`
    Film(Film),
    /// `lines …`
    Lines(Lines),
    /// `row NAME …`
    Row(Row),
    /// `layer LENGTH MATERIAL [as NAME]`
    Layer {
        /// How thick, of what.
        film: Film,
        /// Its name.
        name: Option<Name>,
    },
    /// `liner LENGTH MATERIAL`
    Liner(Film),
    /// `between MATERIAL [to HEIGHT]`
    Between {
        /// Of what.
        material: Name,
        /// Up to where.
        to: Option<Height>,
    },
    /// `over LENGTH MATERIAL`
    Over(Film),
}

impl WaferStatement {
    /// The word that it begins with.
    pub fn word(&self) -> &'static str {
        match self {
            Self::Bulk(_) => "bulk",
            Self::Plane(_) => "plane",
            Self::Film(_) => "film",
            Self::Lines(_) => "lines",
            Self::Row(_) => "row",
            Self::Layer { .. } => "layer",
            Self::Liner(_) => "liner",
            Self::Between { .. } => "between",
            Self::Over(_) => "over",
        }
    }
}

/// `lines [LENGTH MATERIAL] width LENGTH (space SPACES | pitch LENGTHS) [taper ANGLE] [corner-radius LENGTH]`
#[derive(Debug, Clone, PartialEq)]
pub struct Lines {
    /// The only layer, when it stands in the statement itself.
    pub stack: Option<Film>,
    /// Width of a line.
    pub width: Written<Length>,
    /// The spaces.
    pub spaces: Spaces,
    /// Taper.
    pub taper: Option<Written<Angle>>,
    /// Radius of the top corners.
    pub corner_radius: Option<Written<Length>>,
}

/// The spaces of `lines`.
#[derive(Debug, Clone, PartialEq)]
pub enum Spaces {
    /// `space`: each one, or a pair of left and right.
    Space(Vec<Pair>),
    /// `pitch`
    Pitch(Vec<Written<Length>>),
}

/// One space, or left and right of each line, alternating.
#[derive(Debug, Clone, PartialEq)]
pub struct Pair {
    /// Left of the line, or both sides.
    pub left: Written<Length>,
    /// Right of the line, where it differs.
    pub right: Option<Written<Length>>,
}

impl Pair {
    /// Where it stands.
    pub fn span(&self) -> Span {
        self.right.as_ref().map_or(self.left.span, |right| self.left.span.to(right.span))
    }
}

/// `row NAME width LENGTHS space LENGTHS`
#[derive(Debug, Clone, PartialEq)]
pub struct Row {
    /// Its name.
    pub name: Name,
    /// Widths, left to right.
    pub widths: Vec<Written<Length>>,
    /// Spaces, left to right.
    pub spaces: Vec<Written<Length>>,
}

/// A height relative to a place.
#[derive(Debug, Clone, PartialEq)]
pub struct Height {
    /// Above the place; negative below; exactly zero when only the place is named.
    pub offset: Amount<Length>,
    /// The place.
    pub place: Place,
    /// Where it stands.
    pub span: Span,
}

/// A place that heights refer to.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Place {
    /// The line top.
    Lines,
    /// The line bottom.
    Floor,
    /// The top of a layer.
    Layer(Name),
}

/// A space as an `at` names it.
#[derive(Debug, Clone, PartialEq)]
pub enum Site {
    /// By its nominal length, or by a pair.
    Space {
        /// Left of the line, or both sides.
        left: Length,
        /// Right of the line, where it differs.
        right: Option<Length>,
        /// Where it stands.
        span: Span,
    },
    /// The n-th space of a row.
    Row {
        /// The row.
        row: Name,
        /// From 1.
        space: u32,
        /// Where it stands.
        span: Span,
    },
}

impl Site {
    /// Where it stands.
    pub fn span(&self) -> Span {
        match self {
            Self::Space { span, .. } | Self::Row { span, .. } => *span,
        }
    }
}

/// An operation number.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Op {
    /// As compared.
    pub number: u32,
    /// As written.
    pub text: String,
    /// Where it stands.
    pub span: Span,
}

/// `OP step [only at AT] {(after | before) OP} [STRING]`
#[derive(Debug, Clone, PartialEq)]
pub struct StepStatement {
    /// Its number.
    pub op: Op,
    /// What is done.
    pub action: Action,
    /// Where only.
    pub only_at: Option<Vec<Site>>,
    /// What must come before.
    pub after: Vec<Op>,
    /// What must come after.
    pub before: Vec<Op>,
    /// The note.
    pub note: Option<Spanned<String>>,
    /// The whole statement.
    pub span: Span,
}

/// What a step does.
#[derive(Debug, Clone, PartialEq)]
pub struct Action {
    /// The verb.
    pub verb: Name,
    /// Its form.
    pub form: Form,
    /// `by`
    pub by: Option<Name>,
    /// `with`, in the order written.
    pub with: Vec<With>,
    /// From the verb to the end.
    pub span: Span,
}

/// The form of a step, by what it needs.
#[derive(Debug, Clone, PartialEq)]
pub enum Form {
    /// `deposit`, `seal`, `cap`
    Deposit(Film),
    /// `etch LENGTH MATERIAL`
    Etch(Film),
    /// `etch MATERIAL until MATERIAL`
    EtchUntil {
        /// What is etched.
        material: Name,
        /// What ends it.
        stop: Name,
        /// More of the time to the stop.
        overetch: Option<Written<Share>>,
    },
    /// `convert LENGTH MATERIAL to MATERIAL`
    Convert {
        /// How deep, from what.
        from: Film,
        /// To what.
        to: Name,
    },
    /// `mask LENGTH MATERIAL over AT`
    Mask {
        /// How thick, of what.
        film: Film,
        /// Where.
        over: Vec<Site>,
    },
    /// `fill MATERIAL to HEIGHT`
    Fill {
        /// Of what.
        material: Name,
        /// Up to where.
        to: Height,
    },
    /// `release MATERIAL at TEMPERATURE [for TIME]`
    Release {
        /// What leaves.
        material: Name,
        /// At what temperature.
        temperature: Written<Temperature>,
        /// For how long.
        time: Option<Written<Duration>>,
    },
    /// `strip MATERIAL`
    Strip(Name),
    /// `polish to HEIGHT`
    Polish(Height),
    /// `polish until MATERIAL`
    PolishUntil(Name),
    /// `anneal at TEMPERATURE for TIME`, `cure at TEMPERATURE for TIME`
    Heat {
        /// At what temperature.
        temperature: Written<Temperature>,
        /// For how long.
        time: Written<Duration>,
    },
    /// `clean`
    Clean,
    /// `via width LENGTH MATERIAL [in LENGTH MATERIAL] overlay LENGTH [overetch LENGTH]`
    Via {
        /// Its width and core.
        core: Film,
        /// Its liner.
        liner: Option<Film>,
        /// Off its line by at most this.
        overlay: Written<Length>,
        /// Below the line top.
        overetch: Option<Written<Length>>,
    },
}

/// `with NAME AMOUNT`
#[derive(Debug, Clone, PartialEq)]
pub struct With {
    /// Name of the number.
    pub name: Name,
    /// Its amount.
    pub amount: Number,
}

/// An amount whose unit is checked once it is known what it is an amount of.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Number {
    /// The number.
    pub value: f64,
    /// Its unit; bare when `None`.
    pub unit: Option<Unit>,
    /// Three standard deviations: number and, where one is written, its own unit.
    pub tolerance: Option<(f64, Option<Unit>)>,
    /// Where it stands, tolerance included.
    pub span: Span,
}

/// `NAME (OP (step | skip) | wafer statement)`
#[derive(Debug, Clone, PartialEq)]
pub struct SplitStatement {
    /// Name of the split.
    pub name: Name,
    /// What it changes.
    pub change: Change,
    /// The whole statement.
    pub span: Span,
}

/// What a split changes.
#[derive(Debug, Clone, PartialEq)]
pub enum Change {
    /// Another step of the same number.
    Step(Op, Action),
    /// The step is left out.
    Skip(Op),
    /// Another statement of `wafer`.
    Wafer(WaferStatement),
}

/// `NAME length LENGTH [at SITE PERCENT {, SITE PERCENT}] driver RESISTANCE load CAPACITANCE`
#[derive(Debug, Clone, PartialEq)]
pub struct NetStatement {
    /// Its name.
    pub name: Name,
    /// Its length.
    pub length: Written<Length>,
    /// Its spaces and their shares.
    pub at: Option<Vec<(Site, Spanned<Share>)>>,
    /// Its driver.
    pub driver: Written<Resistance>,
    /// Its load.
    pub load: Written<Capacitance>,
}

/// A limit.
#[derive(Debug, Clone, PartialEq)]
pub struct LimitStatement {
    /// The state or the quantity.
    pub subject: Name,
    /// Comparison and amount of a quantity; a state has none.
    pub bound: Option<Bound>,
    /// `at AT`
    pub at: Option<Vec<Site>>,
    /// `for NET`
    pub for_net: Option<Name>,
    /// `between NAME`
    pub between: Option<Name>,
    /// `against (SPLIT | MATERIAL)`
    pub against: Option<Name>,
    /// `after OP`
    pub after: Option<Op>,
    /// `in PERCENT of spread`
    pub in_spread: Option<Spanned<Share>>,
}

/// Comparison and amount.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Bound {
    /// Whether at most (`<=`) or at least (`>=`).
    pub at_most: bool,
    /// The amount.
    pub amount: Number,
}

/// `RULE [on OP] [at AT] [in SPLIT] because STRING`
#[derive(Debug, Clone, PartialEq)]
pub struct WaiverStatement {
    /// The rule.
    pub rule: Name,
    /// `on OP`
    pub on: Option<Op>,
    /// `at AT`
    pub at: Option<Vec<Site>>,
    /// `in SPLIT`
    pub in_split: Option<Name>,
    /// The reason.
    pub because: Spanned<String>,
}

impl Tree {
    /// Whether a line cannot be read.
    pub fn is_broken(&self) -> bool {
        self.lines.iter().any(|line| matches!(line.content, Content::Broken(_)))
    }

    /// The statements with the span of their tokens, in order.
    pub fn statements(&self) -> impl Iterator<Item = (&Statement, Span)> {
        self.lines.iter().filter_map(|line| match &line.content {
            Content::Statement(statement) => Some((&**statement, line.tokens_span())),
            _ => None,
        })
    }

    /// The broken lines, in order.
    pub fn broken(&self) -> impl Iterator<Item = &Broken> {
        self.lines.iter().filter_map(|line| match &line.content {
            Content::Broken(broken) => Some(broken),
            _ => None,
        })
    }
}

impl Line {
    /// From the first token to the last.
    pub fn tokens_span(&self) -> Span {
        match (self.tokens.first(), self.tokens.last()) {
            (Some(first), Some(last)) => first.span.to(last.span),
            _ => self.span,
        }
    }
}
