//! Statements before the sections, and those of `splits`, `nets`, `limits` and `waivers`.

use super::amount::Scale;
use super::cursor::{Cursor, Parsed, once};
use super::lex::TokenKind;
use super::step::split_step;
use super::tree::{
    Bound, Change, Gap, LimitStatement, NetStatement, SplitStatement, Statement, WaiverStatement,
};
use super::wafer::wafer_statement;
use super::words::{STATES, STEP_VERBS};
use crate::diag::Diagnostic;

/// Reads `use STRING`.
pub(super) fn use_statement(cursor: &mut Cursor) -> Parsed<Statement> {
    cursor.form("use \"FILE.yaml\"");
    cursor.piece(0, Gap::Narrow);
    cursor.next();
    let file = cursor.string("the name of a library file")?;
    cursor.end()?;
    if file.value.trim().is_empty() {
        return Err(Diagnostic::error(file.span, "an empty file name")
            .label("a YAML library beside this file"));
    }
    Ok(Statement::Use(file))
}

/// Reads `flow NAME [STRING]`.
pub(super) fn flow_statement(cursor: &mut Cursor) -> Parsed<Statement> {
    cursor.form("flow NAME [\"TITLE\"]");
    cursor.piece(0, Gap::Narrow);
    cursor.next();
    let name = cursor.name("the name of the flow")?;
    let title = if cursor.peek().is_some() { Some(cursor.string("a title")?) } else { None };
    cursor.end()?;
    Ok(Statement::Flow { name, title })
}

/// Reads a statement of `splits`.
pub(super) fn split_statement(cursor: &mut Cursor) -> Parsed<SplitStatement> {
    cursor.form("NAME (OP STEP | OP skip | WAFER STATEMENT)");
    cursor.piece(0, Gap::Column);
    let name = cursor.new_name("a split")?;
    cursor.piece(1, Gap::Column);
    let change = if cursor.sees(TokenKind::Number) {
        let op = cursor.op()?;
        if cursor.eat_word("skip") {
            cursor.end()?;
            Change::Skip(op)
        } else {
            Change::Step(op, split_step(cursor)?)
        }
    } else if cursor.word().is_some_and(|word| word == "skip" || STEP_VERBS.contains(&word)) {
        return Err(cursor.missing("an operation number"));
    } else if cursor.word().is_some() {
        Change::Wafer(wafer_statement(cursor)?)
    } else {
        return Err(cursor.missing("an operation number or a statement of `wafer`"));
    };
    Ok(SplitStatement { name, change, span: cursor.whole() })
}

/// Reads a statement of `nets`.
pub(super) fn net_statement(cursor: &mut Cursor) -> Parsed<Statement> {
    cursor.form("NAME length LENGTH [at SITE PERCENT, …] driver RESISTANCE load CAPACITANCE");
    cursor.piece(0, Gap::Column);
    if cursor.eat_word("next-level") {
        cursor.form("next-level LENGTH MATERIAL");
        cursor.piece(1, Gap::Column);
        let film = cursor.film()?;
        cursor.end()?;
        return Ok(Statement::NextLevel(film));
    }
    let name = cursor.new_name("a net")?;
    cursor.piece(1, Gap::Column);
    let (mut length, mut at, mut driver, mut load) = (None, None, None, None);
    loop {
        let gap = if cursor.word() == Some("at") { Gap::Narrow } else { Gap::Wide };
        let Some(clause) = cursor.clause_piece(&["length", "at", "driver", "load"], gap)? else {
            break;
        };
        let start = cursor.here();
        match clause {
            "length" => {
                let value = cursor.amount(&Scale::NET_LENGTH)?;
                once(&mut length, value, clause, cursor.since(start))?;
            }
            "at" => {
                let value = cursor.shared_sites()?;
                once(&mut at, value, clause, cursor.since(start))?;
            }
            "driver" => {
                let value = cursor.amount(&Scale::DRIVER)?;
                once(&mut driver, value, clause, cursor.since(start))?;
            }
            _ => {
                let value = cursor.amount(&Scale::LOAD)?;
                once(&mut load, value, clause, cursor.since(start))?;
            }
        }
    }
    Ok(Statement::Net(NetStatement {
        length: length.ok_or_else(|| cursor.lacks(&name.value, "`length`"))?,
        at,
        driver: driver.ok_or_else(|| cursor.lacks(&name.value, "`driver`"))?,
        load: load.ok_or_else(|| cursor.lacks(&name.value, "`load`"))?,
        name,
    }))
}

/// Reads a statement of `limits`.
pub(super) fn limit_statement(cursor: &mut Cursor) -> Parsed<LimitStatement> {
    cursor.form(
        "(STATE | QUANTITY <= AMOUNT | QUANTITY >= AMOUNT) [at AT] [for NET] [between NAME] [against SPLIT] [after OP] [in PERCENT of spread]",
    );
    cursor.piece(0, Gap::Narrow);
    let subject = cursor.name("a state or a quantity")?;
    let bound = match cursor.peek().map(|token| token.kind) {
        Some(kind @ (TokenKind::AtMost | TokenKind::AtLeast)) => {
            cursor.next();
            Some(Bound { at_most: kind == TokenKind::AtMost, amount: cursor.number("an amount")? })
        }
        _ if STATES.contains(&subject.value.as_str()) => None,
        _ => return Err(cursor.missing("`<=` or `>=`")),
    };
    let mut limit = LimitStatement {
        subject,
        bound,
        at: None,
        for_net: None,
        between: None,
        against: None,
        after: None,
        in_spread: None,
    };
    const CLAUSES: &[&str] = &["at", "for", "between", "against", "after", "in"];
    while let Some(clause) = cursor.clause_piece(CLAUSES, Gap::Narrow)? {
        let start = cursor.here();
        match clause {
            "at" => {
                let value = cursor.sites()?;
                once(&mut limit.at, value, clause, cursor.since(start))?;
            }
            "for" => {
                let value = cursor.name("the name of a net")?;
                once(&mut limit.for_net, value, clause, cursor.since(start))?;
            }
            "between" => {
                let value = cursor.name("the name of a layer")?;
                once(&mut limit.between, value, clause, cursor.since(start))?;
            }
            "against" => {
                let value = cursor.name("a split or a material")?;
                once(&mut limit.against, value, clause, cursor.since(start))?;
            }
            "after" => {
                let value = cursor.op()?;
                once(&mut limit.after, value, clause, cursor.since(start))?;
            }
            _ => {
                let value = cursor.exact(&Scale::SPREAD_SHARE)?;
                cursor.need_word("of")?;
                cursor.need_word("spread")?;
                once(&mut limit.in_spread, value, clause, cursor.since(start))?;
            }
        }
    }
    Ok(limit)
}

/// Reads a statement of `waivers`.
pub(super) fn waiver_statement(cursor: &mut Cursor) -> Parsed<WaiverStatement> {
    cursor.form("RULE [on OP] [at AT] [in SPLIT] because \"REASON\"");
    cursor.piece(0, Gap::Narrow);
    let rule = cursor.name("the name of a rule")?;
    let (mut on, mut at, mut in_split, mut because) = (None, None, None, None);
    while let Some(clause) = cursor.clause_piece(&["on", "at", "in", "because"], Gap::Narrow)? {
        let start = cursor.here();
        match clause {
            "on" => {
                let value = cursor.op()?;
                once(&mut on, value, clause, cursor.since(start))?;
            }
            "at" => {
                let value = cursor.sites()?;
                once(&mut at, value, clause, cursor.since(start))?;
            }
            "in" => {
                let value = cursor.name("the name of a split")?;
                once(&mut in_split, value, clause, cursor.since(start))?;
            }
            _ => {
                let value = cursor.string("the reason")?;
                once(&mut because, value, clause, cursor.since(start))?;
            }
        }
    }
    let because = because.ok_or_else(|| cursor.lacks(&rule.value, "`because \"REASON\"`"))?;
    if because.value.trim().is_empty() {
        return Err(Diagnostic::error(because.span, "a waiver without a reason").label("say why"));
    }
    Ok(WaiverStatement { rule, on, at, in_split, because })
}
