//! Statements of `steps`.

use super::amount::Scale;
use super::cursor::{Cursor, Parsed, once};
use super::lex::TokenKind;
use super::tree::{Action, Film, Form, Gap, Height, Name, Op, Site, StepStatement, With, Written};
use super::words::{SELECTIVE_VERBS, STEP_VERBS};
use crate::diag::Diagnostic;
use crate::diag::nearest;
use crate::source::Spanned;
use crate::units::{Duration, Length, Share, Temperature};

/// Reads a statement of `steps`.
pub(super) fn step_statement(cursor: &mut Cursor) -> Parsed<StepStatement> {
    cursor.form("OP VERB … [only at AT] {(after | before) OP} [\"NOTE\"]");
    cursor.piece(0, Gap::Column);
    let op = cursor.op()?;
    cursor.piece(1, Gap::Column);
    let (action, tail) = step(cursor, Some(Gap::Column))?;
    let Tail { only_at, after, before, note } = tail;
    Ok(StepStatement { op, action, only_at, after, before, note, span: cursor.whole() })
}

/// Reads the step of a split, which has no clauses of its own.
pub(super) fn split_step(cursor: &mut Cursor) -> Parsed<Action> {
    Ok(step(cursor, None)?.0)
}

/// What follows the step itself.
#[derive(Default)]
struct Tail {
    only_at: Option<Vec<Site>>,
    after: Vec<Op>,
    before: Vec<Op>,
    note: Option<Spanned<String>>,
}

/// Clauses of any step, in the order of the layout.
const TAIL: [&str; 3] = ["only", "after", "before"];

/// The form of a verb, and the clauses that it takes besides, in the order of the layout.
fn grammar(verb: &str) -> Option<(&'static str, &'static [&'static str])> {
    Some(match verb {
        "deposit" => ("deposit LENGTH MATERIAL by PROCESS [with NAME AMOUNT, …]", &["by", "with"]),
        "seal" => ("seal LENGTH MATERIAL by PROCESS [with NAME AMOUNT, …]", &["by", "with"]),
        "cap" => ("cap LENGTH MATERIAL by PROCESS [with NAME AMOUNT, …]", &["by", "with"]),
        "etch" => (
            "etch (LENGTH MATERIAL | MATERIAL until MATERIAL) by PROCESS [overetch PERCENT] [with NAME AMOUNT, …]",
            &["until", "by", "overetch", "with"],
        ),
        "convert" => (
            "convert LENGTH MATERIAL to MATERIAL by PROCESS [with NAME AMOUNT, …]",
            &["to", "by", "with"],
        ),
        "mask" => ("mask LENGTH MATERIAL over AT by PROCESS", &["over", "by"]),
        "fill" => ("fill MATERIAL to HEIGHT by PROCESS", &["to", "by"]),
        "release" => {
            ("release MATERIAL at TEMPERATURE [for TIME] [by PROCESS]", &["at", "for", "by"])
        }
        "strip" => ("strip MATERIAL by PROCESS", &["by"]),
        "polish" => ("polish (to HEIGHT | until MATERIAL) [by PROCESS]", &["to", "until", "by"]),
        "anneal" => ("anneal at TEMPERATURE for TIME [by PROCESS]", &["at", "for", "by"]),
        "cure" => ("cure at TEMPERATURE for TIME [by PROCESS]", &["at", "for", "by"]),
        "clean" => ("clean by PROCESS", &["by"]),
        "via" => (
            "via width LENGTH MATERIAL [in LENGTH MATERIAL] overlay LENGTH [overetch LENGTH] [by PROCESS]",
            &["width", "in", "overlay", "overetch", "by"],
        ),
        _ => return None,
    })
}

/// The clauses of one step, each read when it comes.
#[derive(Default)]
struct Clauses {
    until: Option<Name>,
    to_material: Option<Name>,
    to_height: Option<Height>,
    over: Option<Vec<Site>>,
    temperature: Option<Written<Temperature>>,
    time: Option<Written<Duration>>,
    width: Option<Film>,
    liner: Option<Film>,
    overlay: Option<Written<Length>>,
    overetch: Option<Written<Share>>,
    overetch_depth: Option<Written<Length>>,
    by: Option<Name>,
    with: Option<Vec<With>>,
}

/// What a verb is followed by, before its clauses.
enum Object {
    None,
    Film(Film),
    Material(Name),
}

/// Reads a step from its verb on. `tail` is the gap before the verb's own words when the
/// clauses of a numbered step may follow.
fn step(cursor: &mut Cursor, tail: Option<Gap>) -> Parsed<(Action, Tail)> {
    let start = cursor.here();
    let verb = cursor.name("a verb")?;
    let Some((form, clauses)) = grammar(&verb.value) else {
        let found = &verb.value;
        let message = Diagnostic::error(verb.span, format!("`{found}` is not a verb of a step"));
        return Err(match nearest(found, STEP_VERBS.iter().copied()) {
            Some(meant) => message.label(format!("did you mean `{meant}`?")),
            None => message
                .label("not known here")
                .help(format!("the verbs are {}", STEP_VERBS.join(", "))),
        });
    };
    cursor.form(form);
    cursor.piece(2, tail.unwrap_or(Gap::Narrow));
    let object = object(cursor, &verb.value)?;
    let mut allowed = clauses.to_vec();
    if tail.is_some() {
        allowed.extend(TAIL);
    }
    let mut read = Clauses::default();
    let mut rest = Tail::default();
    let mut end = cursor.since(start);
    while !(tail.is_some() && cursor.sees(TokenKind::String)) {
        let gap = cursor.word().map_or(Gap::Narrow, |word| match word {
            "only" | "after" | "before" => Gap::Wide,
            "overlay" | "overetch" | "by" if verb.value == "via" => Gap::Wide,
            _ => Gap::Narrow,
        });
        if tail.is_none() && cursor.word().is_some_and(|word| TAIL.contains(&word)) {
            return Err(Diagnostic::error(
                cursor.whole(),
                "the step of a split takes no `only`, `after` or `before`",
            )
            .label("it keeps those of the step that it replaces"));
        }
        let Some(clause) = cursor.clause_piece(&allowed, gap)? else { break };
        match clause {
            "only" | "after" | "before" => tail_clause(cursor, clause, &verb, &mut rest)?,
            _ => {
                read.clause(cursor, clause, &verb.value)?;
                end = cursor.since(start);
            }
        }
    }
    if tail.is_some() && cursor.sees(TokenKind::String) {
        cursor.piece(u8::MAX, Gap::Wide);
        rest.note = Some(cursor.string("a note")?);
    }
    cursor.end()?;
    let (by, with) = (read.by.take(), read.with.take().unwrap_or_default());
    let form = read.form(cursor, &verb.value, object)?;
    let needs_process =
        !matches!(verb.value.as_str(), "release" | "polish" | "anneal" | "cure" | "via");
    if needs_process && by.is_none() {
        return Err(cursor.lacks(&verb.value, "`by PROCESS`"));
    }
    Ok((Action { verb, form, by, with, span: end }, rest))
}

fn object(cursor: &mut Cursor, verb: &str) -> Parsed<Object> {
    Ok(match verb {
        "deposit" | "seal" | "cap" | "mask" => Object::Film(cursor.film()?),
        "convert" => Object::Film(cursor.film_of(&Scale::DEPTH)?),
        "etch" if cursor.word().is_none() => {
            if !cursor.sees(TokenKind::Number) {
                return Err(cursor.missing("a depth or a material"));
            }
            Object::Film(cursor.film_of(&Scale::DEPTH)?)
        }
        "etch" | "fill" | "release" | "strip" => Object::Material(cursor.name("a material")?),
        _ => Object::None,
    })
}

fn tail_clause(cursor: &mut Cursor, clause: &str, verb: &Name, tail: &mut Tail) -> Parsed<()> {
    let start = cursor.here();
    match clause {
        "only" => {
            cursor.need_word("at")?;
            let sites = cursor.sites()?;
            let span = cursor.since(start);
            if !SELECTIVE_VERBS.contains(&verb.value.as_str()) {
                return Err(Diagnostic::error(
                    verb.span,
                    format!("`{}` takes no `only at`", verb.value),
                )
                .label("acts on the whole wafer")
                .help(format!("`only at` stands on {}", SELECTIVE_VERBS.join(", "))));
            }
            once(&mut tail.only_at, sites, "only at", span)?;
        }
        "after" => tail.after.push(cursor.op()?),
        _ => tail.before.push(cursor.op()?),
    }
    Ok(())
}

impl Clauses {
    fn clause(&mut self, cursor: &mut Cursor, clause: &'static str, verb: &str) -> Parsed<()> {
        let start = cursor.here();
        match (clause, verb) {
            ("until", _) => {
                let value = cursor.name("a material")?;
                once(&mut self.until, value, clause, cursor.since(start))
            }
            ("to", "convert") => {
                let value = cursor.name("a material")?;
                once(&mut self.to_material, value, clause, cursor.since(start))
            }
            ("to", _) => {
                let value = cursor.height()?;
                once(&mut self.to_height, value, clause, cursor.since(start))
            }
            ("over", _) => {
                let value = cursor.sites()?;
                once(&mut self.over, value, clause, cursor.since(start))
            }
            ("at", _) => {
                let value = cursor.amount(&Scale::TEMPERATURE)?;
                once(&mut self.temperature, value, clause, cursor.since(start))
            }
            ("for", _) => {
                let value = cursor.amount(&Scale::TIME)?;
                once(&mut self.time, value, clause, cursor.since(start))
            }
            ("width", _) => {
                let value = cursor.film_of(&Scale::WIDTH)?;
                once(&mut self.width, value, clause, cursor.since(start))
            }
            ("in", _) => {
                let value = cursor.film()?;
                once(&mut self.liner, value, clause, cursor.since(start))
            }
            ("overlay", _) => {
                let value = cursor.amount(&Scale::OVERLAY)?;
                once(&mut self.overlay, value, clause, cursor.since(start))
            }
            ("overetch", "via") => {
                let value = cursor.amount(&Scale::OVERETCH_DEPTH)?;
                once(&mut self.overetch_depth, value, clause, cursor.since(start))
            }
            ("overetch", _) => {
                let value = cursor.amount(&Scale::OVERETCH_SHARE)?;
                once(&mut self.overetch, value, clause, cursor.since(start))
            }
            ("by", _) => {
                let value = cursor.name("a process")?;
                once(&mut self.by, value, clause, cursor.since(start))
            }
            _ => {
                let mut value = vec![];
                loop {
                    let name = cursor.name("the name of a number")?;
                    value.push(With { name, amount: cursor.number("an amount")? });
                    if cursor.eat(TokenKind::Comma).is_none() {
                        break;
                    }
                }
                once(&mut self.with, value, clause, cursor.since(start))
            }
        }
    }

    /// Puts object and clauses together; what the verb needs must be there.
    fn form(self, cursor: &Cursor, verb: &str, object: Object) -> Parsed<Form> {
        let lacks = |clause: &str| cursor.lacks(verb, clause);
        let heat = |what: Option<_>| what.ok_or_else(|| lacks("`at TEMPERATURE`"));
        Ok(match (verb, object) {
            ("etch", Object::Film(film)) => {
                if let Some(stop) = &self.until {
                    return Err(Diagnostic::error(
                        stop.span,
                        "an etch has a depth or an `until`, not both",
                    )
                    .label("with a depth there is no stop"));
                }
                if let Some(overetch) = &self.overetch {
                    return Err(Diagnostic::error(overetch.span, "`overetch` goes with `until`")
                        .label("an etch to a depth has none"));
                }
                Form::Etch(film)
            }
            ("etch", Object::Material(material)) => Form::EtchUntil {
                material,
                stop: self.until.ok_or_else(|| lacks("a depth or `until MATERIAL`"))?,
                overetch: self.overetch,
            },
            ("convert", Object::Film(from)) => {
                Form::Convert { from, to: self.to_material.ok_or_else(|| lacks("`to MATERIAL`"))? }
            }
            ("mask", Object::Film(film)) => {
                Form::Mask { film, over: self.over.ok_or_else(|| lacks("`over AT`"))? }
            }
            (_, Object::Film(film)) => Form::Deposit(film),
            ("fill", Object::Material(material)) => {
                Form::Fill { material, to: self.to_height.ok_or_else(|| lacks("`to HEIGHT`"))? }
            }
            ("release", Object::Material(material)) => {
                Form::Release { material, temperature: heat(self.temperature)?, time: self.time }
            }
            (_, Object::Material(material)) => Form::Strip(material),
            ("polish", Object::None) => match (self.to_height, self.until) {
                (Some(to), None) => Form::Polish(to),
                (None, Some(stop)) => Form::PolishUntil(stop),
                (None, None) => return Err(lacks("`to HEIGHT` or `until MATERIAL`")),
                (Some(_), Some(stop)) => {
                    return Err(Diagnostic::error(
                        stop.span,
                        "a polish has a `to` or an `until`, not both",
                    )
                    .label("leave one out"));
                }
            },
            ("clean", Object::None) => Form::Clean,
            ("via", Object::None) => Form::Via {
                core: self.width.ok_or_else(|| lacks("`width LENGTH MATERIAL`"))?,
                liner: self.liner,
                overlay: self.overlay.ok_or_else(|| lacks("`overlay LENGTH`"))?,
                overetch: self.overetch_depth,
            },
            (_, Object::None) => Form::Heat {
                temperature: heat(self.temperature)?,
                time: self.time.ok_or_else(|| lacks("`for TIME`"))?,
            },
        })
    }
}
