//! Statements of `wafer`.

use super::amount::Scale;
use super::cursor::{Cursor, Parsed, once};
use super::tree::{Film, Gap, Lines, Row, Spaces, WaferStatement};
use super::words::WAFER_WORDS;
use crate::diag::Diagnostic;
use crate::diag::nearest;
use crate::units::Length;

/// Reads a statement of `wafer`.
pub(super) fn wafer_statement(cursor: &mut Cursor) -> Parsed<WaferStatement> {
    cursor.piece(0, Gap::Column);
    let word = cursor.name("a statement of `wafer`")?;
    cursor.piece(1, Gap::Column);
    let statement = match word.value.as_str() {
        "bulk" => {
            cursor.form("bulk MATERIAL");
            WaferStatement::Bulk(cursor.name("a material")?)
        }
        "plane" => {
            cursor.form("plane LENGTH MATERIAL");
            WaferStatement::Plane(cursor.film()?)
        }
        "film" => {
            cursor.form("film LENGTH MATERIAL");
            WaferStatement::Film(cursor.film()?)
        }
        "liner" => {
            cursor.form("liner LENGTH MATERIAL");
            WaferStatement::Liner(cursor.film()?)
        }
        "over" => {
            cursor.form("over LENGTH MATERIAL");
            WaferStatement::Over(cursor.film()?)
        }
        "lines" => WaferStatement::Lines(lines(cursor)?),
        "row" => WaferStatement::Row(row(cursor)?),
        "layer" => {
            cursor.form("layer LENGTH MATERIAL [as NAME]");
            let film = cursor.film()?;
            let name = match cursor.clause_piece(&["as"], Gap::Narrow)? {
                Some(_) => Some(cursor.new_name("a layer")?),
                None => None,
            };
            WaferStatement::Layer { film, name }
        }
        "between" => {
            cursor.form("between MATERIAL [to HEIGHT]");
            let material = cursor.name("a material")?;
            let to = match cursor.clause_piece(&["to"], Gap::Narrow)? {
                Some(_) => Some(cursor.height()?),
                None => None,
            };
            WaferStatement::Between { material, to }
        }
        found => {
            let message =
                Diagnostic::error(word.span, format!("`{found}` begins no statement of `wafer`"));
            return Err(match nearest(found, WAFER_WORDS.iter().copied()) {
                Some(meant) => message.label(format!("did you mean `{meant}`?")),
                None => message
                    .label("not known here")
                    .help(format!("`wafer` takes {}", WAFER_WORDS.join(", "))),
            });
        }
    };
    cursor.end()?;
    Ok(statement)
}

impl Cursor<'_> {
    /// `LENGTH MATERIAL`
    pub fn film(&mut self) -> Parsed<Film> {
        self.film_of(&Scale::THICKNESS)
    }

    /// `LENGTH MATERIAL`, the length being of that scale.
    pub fn film_of(&mut self, scale: &Scale) -> Parsed<Film> {
        Ok(Film { thickness: self.amount(scale)?, material: self.name("a material")? })
    }
}

fn lines(cursor: &mut Cursor) -> Parsed<Lines> {
    cursor.form(
        "lines [LENGTH MATERIAL] width LENGTH (space SPACES | pitch LENGTHS) [taper ANGLE] [corner-radius LENGTH]",
    );
    let stack = if cursor.word().is_none() { Some(cursor.film()?) } else { None };
    let (mut width, mut spaces, mut taper, mut corner_radius) = (None, None, None, None);
    const CLAUSES: &[&str] = &["width", "space", "pitch", "taper", "corner-radius"];
    while let Some(clause) = cursor.clause_piece(CLAUSES, Gap::Wide)? {
        let start = cursor.here();
        match clause {
            "width" => {
                let value = cursor.amount(&Scale::WIDTH)?;
                once(&mut width, value, clause, cursor.since(start))?;
            }
            "space" => {
                let value = Spaces::Space(cursor.pairs()?);
                once(&mut spaces, value, "space or pitch", cursor.since(start))?;
            }
            "pitch" => {
                let value = Spaces::Pitch(cursor.amounts(&Scale::PITCH)?);
                once(&mut spaces, value, "space or pitch", cursor.since(start))?;
            }
            "taper" => {
                let value = cursor.amount(&Scale::TAPER)?;
                once(&mut taper, value, clause, cursor.since(start))?;
            }
            _ => {
                let value = cursor.amount(&Scale::RADIUS)?;
                once(&mut corner_radius, value, clause, cursor.since(start))?;
            }
        }
    }
    Ok(Lines {
        stack,
        width: width.ok_or_else(|| cursor.lacks("lines", "`width`"))?,
        spaces: spaces.ok_or_else(|| cursor.lacks("lines", "`space` or `pitch`"))?,
        taper,
        corner_radius,
    })
}

fn row(cursor: &mut Cursor) -> Parsed<Row> {
    cursor.form("row NAME width LENGTHS space LENGTHS");
    let name = cursor.new_name("a row")?;
    let (mut widths, mut spaces) = (None, None);
    while let Some(clause) = cursor.clause_piece(&["width", "space"], Gap::Wide)? {
        let start = cursor.here();
        if clause == "width" {
            let value: Vec<_> = cursor.amounts::<Length>(&Scale::WIDTH)?;
            once(&mut widths, value, clause, cursor.since(start))?;
        } else {
            let value = cursor.amounts::<Length>(&Scale::SPACE)?;
            once(&mut spaces, value, clause, cursor.since(start))?;
        }
    }
    Ok(Row {
        name,
        widths: widths.ok_or_else(|| cursor.lacks("row", "`width`"))?,
        spaces: spaces.ok_or_else(|| cursor.lacks("row", "`space`"))?,
    })
}
