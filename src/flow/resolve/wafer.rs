//! The wafer of the unsplit flow and of each split.

use super::context::Context;
use super::draft::{Draft, Split};
use crate::diag::Diagnostic;
use crate::flow::{Below, Between, Film, Height, Layer, Lines, Place, Row, SpacePair, Wafer};
use crate::source::Span;
use crate::syntax::{self, MAX_SITES, MIN_LENGTH_NM, Spaces, WaferStatement};
use crate::units::Amount;

/// Statements of one wafer, each with its place.
type Statements<'t> = Vec<(&'t WaferStatement, Span)>;

impl<'t> Draft<'t> {
    /// The wafer of the unsplit flow, then that of each split; `None` where it is wrong.
    pub fn wafers(&self, context: &mut Context) -> Vec<Option<Wafer>> {
        let mut wafers = vec![self.wafer_of(&self.wafer, None, context)];
        for split in &self.splits {
            context.enter(Some(split));
            wafers.push(if split.wafer().next().is_none() {
                wafers[0].clone()
            } else {
                self.replaced(split, context)
                    .and_then(|(statements, stack)| self.wafer_of(&statements, stack, context))
            });
        }
        context.enter(None);
        wafers
    }

    /// The statements of a split's wafer, and the stack that a bare `lines` keeps.
    fn replaced(
        &self,
        split: &Split<'t>,
        context: &mut Context,
    ) -> Option<(Statements<'t>, Option<&'t syntax::Film>)> {
        let mut statements = self.wafer.clone();
        let mut stack = None;
        let mut done: Vec<&str> = vec![];
        let mut sound = true;
        for (statement, span) in split.wafer() {
            let word = statement.word();
            let places: Vec<usize> =
                (0..self.wafer.len()).filter(|&at| self.wafer[at].0.word() == word).collect();
            let problem = match places.as_slice() {
                _ if done.contains(&word) => Some(format!("the split replaces `{word}` twice")),
                [_] => None,
                [] if self.unread.wafer => {
                    sound = false;
                    continue;
                }
                [] => Some(format!("the wafer has no `{word}` to replace")),
                _ => Some(format!("several statements begin with `{word}`")),
            };
            if let Some(problem) = problem {
                context.say(
                    Diagnostic::error(span, problem).label(
                        "a split replaces the only statement that begins with the same word",
                    ),
                );
                sound = false;
                continue;
            }
            done.push(word);
            if let (WaferStatement::Lines(old), WaferStatement::Lines(new)) =
                (self.wafer[places[0]].0, statement)
            {
                match &new.stack {
                    None => stack = old.stack.as_ref(),
                    Some(_) => statements
                        .retain(|(other, _)| !matches!(other, WaferStatement::Layer { .. })),
                }
            }
            if let Some(place) = statements.iter_mut().find(|(other, _)| other.word() == word) {
                *place = (statement, span);
            }
        }
        sound.then_some((statements, stack))
    }

    /// Resolves a wafer; `stack` is that of the lines where their own statement has none.
    fn wafer_of(
        &self,
        statements: &[(&WaferStatement, Span)],
        stack: Option<&syntax::Film>,
        context: &mut Context,
    ) -> Option<Wafer> {
        let mut build = Build { unread: self.unread.wafer, ..Build::default() };
        for (statement, span) in statements {
            build.add(statement, *span, context);
        }
        if let Some(stack) = stack {
            build.stack(stack, context);
        }
        let span = statements.iter().map(|(_, span)| *span).reduce(Span::to);
        build.finish(span, context)
    }
}

/// A wafer on its way.
#[derive(Default)]
struct Build<'t> {
    below: Vec<Below>,
    lines: Option<(Lines, &'t syntax::Lines)>,
    own_stack: bool,
    rows: Vec<Row>,
    layers: Vec<Layer>,
    liner: Option<Film>,
    between: Option<(Between, &'t Option<syntax::Height>)>,
    over: Vec<Film>,
    /// Something was wrong and has been told.
    wrong: bool,
    /// A line about the wafer could not be read, so nothing can be missed.
    unread: bool,
}

impl<'t> Build<'t> {
    fn wrong(&mut self, message: Diagnostic, context: &mut Context) {
        context.say(message);
        self.wrong = true;
    }

    fn add(&mut self, statement: &'t WaferStatement, span: Span, context: &mut Context) {
        self.check_order(statement, span, context);
        match statement {
            WaferStatement::Bulk(material) => match context.material(material) {
                Some(id) => {
                    self.below.push(Below::Bulk(crate::source::Spanned::new(id, material.span)));
                }
                None => self.wrong = true,
            },
            WaferStatement::Plane(film) => {
                let Some(resolved) = self.film(film, span, context) else { return };
                if !context.library.material(resolved.material).kind.conducts() {
                    let message = Diagnostic::error(
                        film.material.span,
                        format!("a plane conducts, `{}` does not", film.material.value),
                    );
                    self.wrong(message.label("an insulating film is a `film`"), context);
                }
                self.below.push(Below::Plane(resolved));
            }
            WaferStatement::Film(film) => {
                let resolved = self.film(film, span, context);
                self.below.extend(resolved.map(Below::Film));
            }
            WaferStatement::Over(film) => {
                let resolved = self.film(film, span, context);
                self.over.extend(resolved);
            }
            WaferStatement::Liner(film) => self.liner = self.film(film, span, context),
            WaferStatement::Layer { film, name } => {
                if let Some(film) = self.film(film, span, context) {
                    self.layer(film, name.as_ref(), context);
                }
            }
            WaferStatement::Between { material, to } => match context.material(material) {
                Some(id) => {
                    let height = Height { offset: Amount::default(), place: Place::Lines };
                    self.between = Some((Between { material: id, to: height, span }, to));
                }
                None => self.wrong = true,
            },
            WaferStatement::Lines(lines) => {
                if let Some(stack) = &lines.stack {
                    self.own_stack = true;
                    self.stack(stack, context);
                }
                if let Some(resolved) = self.lines(lines, span, context) {
                    self.lines = Some((resolved, lines));
                }
            }
            WaferStatement::Row(row) => self.row(row, span, context),
        }
    }

    /// The statements go from bottom to top, some of them once.
    fn check_order(&mut self, statement: &WaferStatement, span: Span, context: &mut Context) {
        let after_lines = self.lines.is_some();
        let problem = match statement {
            WaferStatement::Bulk(_) if !self.below.is_empty() || after_lines => {
                Some(("`bulk` lies below everything", "put it first; there is one"))
            }
            WaferStatement::Plane(_) if after_lines => {
                Some(("`plane` lies below the lines", "put it before `lines`"))
            }
            WaferStatement::Film(_) if after_lines => Some((
                "`film` lies below the lines",
                "put it before `lines`, or write `over` for a film above them",
            )),
            WaferStatement::Lines(_) if after_lines => Some((
                "a second `lines`",
                "further spaces stand in its list, single lines in a `row`",
            )),
            WaferStatement::Liner(_) if self.liner.is_some() => {
                Some(("a second `liner`", "a line has one liner"))
            }
            WaferStatement::Between { .. } if self.between.is_some() => {
                Some(("a second `between`", "one material fills the spaces"))
            }
            WaferStatement::Layer { .. } if self.own_stack => Some((
                "a `layer` under lines that have their material",
                "write `lines` without thickness and material to stack layers",
            )),
            WaferStatement::Layer { .. } if !after_lines && !self.wrong && !self.unread => {
                Some(("a `layer` before `lines`", "layers stand under `lines`"))
            }
            _ => None,
        };
        if let Some((message, label)) = problem {
            self.wrong(Diagnostic::error(span, message).label(label), context);
        }
    }

    fn film(&mut self, film: &syntax::Film, span: Span, context: &mut Context) -> Option<Film> {
        let material = context.material(&film.material);
        self.wrong |= material.is_none();
        Some(Film { thickness: film.thickness.value, material: material?, span })
    }

    fn stack(&mut self, film: &syntax::Film, context: &mut Context) {
        let span = film.thickness.span.to(film.material.span);
        if let Some(film) = self.film(film, span, context) {
            self.layers.push(Layer {
                thickness: film.thickness,
                material: film.material,
                name: None,
                span,
            });
        }
    }

    fn layer(&mut self, film: Film, name: Option<&syntax::Name>, context: &mut Context) {
        if let Some(name) = name {
            context.check_new_name(name, "a layer");
            if self.layers.iter().any(|layer| layer.name.as_ref() == Some(&name.value)) {
                let message =
                    Diagnostic::error(name.span, format!("a second layer `{}`", name.value));
                self.wrong(message.label("choose another name"), context);
            }
        }
        let Film { thickness, material, span } = film;
        let name = name.map(|name| name.value.clone());
        self.layers.push(Layer { thickness, material, name, span });
    }

    fn lines(&mut self, lines: &syntax::Lines, span: Span, context: &mut Context) -> Option<Lines> {
        let width = lines.width.value;
        let (mut spaces, mut spans) = (vec![], vec![]);
        match &lines.spaces {
            Spaces::Space(pairs) => {
                for pair in pairs {
                    let left = pair.left.value;
                    let right = pair.right.map_or(left, |right| right.value);
                    spaces.push(SpacePair::drawn(left, right));
                    spans.push(pair.span());
                }
            }
            Spaces::Pitch(pitches) => {
                for pitch in pitches {
                    let nominal = pitch.value.nominal - width.nominal;
                    if nominal.nm() < MIN_LENGTH_NM {
                        let message = Diagnostic::error(
                            pitch.span,
                            format!("a pitch of {} leaves no space", context.text(pitch.span)),
                        );
                        let width = context.text(lines.width.span);
                        self.wrong(message.label(format!("the line is {width} wide")), context);
                        continue;
                    }
                    let space = Amount { nominal, three_sigma: pitch.value.three_sigma };
                    spaces.push(SpacePair::drawn(space, space));
                    spans.push(pitch.span);
                }
            }
        }
        for (at, pair) in spaces.iter().enumerate() {
            let same = |other: &SpacePair| {
                super::sites::same_length(other.left.nominal, pair.left.nominal)
                    && super::sites::same_length(other.right.nominal, pair.right.nominal)
            };
            if spaces[..at].iter().any(same) {
                let message = Diagnostic::error(spans[at], "the same space twice");
                self.wrong(message.label("an `at` could not tell them apart"), context);
            }
        }
        let corner_radius = lines.corner_radius.map_or(Amount::default(), |radius| radius.value);
        if let Some(radius) = lines.corner_radius
            && radius.value.nominal.nm() > width.nominal.nm() / 2.0
        {
            let message = Diagnostic::error(
                radius.span,
                "a corner radius of more than half of the line's width",
            );
            self.wrong(message.label("the line has no such corners"), context);
        }
        (!spaces.is_empty()).then(|| Lines {
            width,
            spaces,
            by_pitch: matches!(lines.spaces, Spaces::Pitch(_)),
            taper: lines.taper.map_or(Amount::default(), |taper| taper.value),
            corner_radius,
            span,
        })
    }

    fn row(&mut self, row: &syntax::Row, span: Span, context: &mut Context) {
        context.check_new_name(&row.name, "a row");
        if self.rows.iter().any(|other| other.name == row.name.value) {
            let message =
                Diagnostic::error(row.name.span, format!("a second row `{}`", row.name.value));
            self.wrong(message.label("choose another name"), context);
        }
        let (widths, spaces) = (row.widths.len(), row.spaces.len());
        if spaces != widths + 1 {
            let from = row.spaces.first().map_or(span, |space| space.span);
            let to = row.spaces.last().map_or(span, |space| space.span);
            let message = Diagnostic::error(
                from.to(to),
                format!("{} and {}", count(widths, "width"), count(spaces, "space")),
            );
            let label = format!(
                "{} have {} around them",
                count(widths, "line"),
                count(widths + 1, "space")
            );
            self.wrong(message.label(label), context);
        }
        self.rows.push(Row {
            name: row.name.value.clone(),
            widths: row.widths.iter().map(|width| width.value).collect(),
            spaces: row.spaces.iter().map(|space| space.value).collect(),
            span,
        });
    }

    /// Puts the wafer together once all of it is known.
    fn finish(mut self, span: Option<Span>, context: &mut Context) -> Option<Wafer> {
        let span = span?;
        let Some((lines, written)) = self.lines.take() else {
            if !self.wrong && !self.unread {
                context.say(
                    Diagnostic::error(span, "the wafer has no `lines`")
                        .label("write `lines LENGTH MATERIAL width LENGTH space LENGTH`"),
                );
            }
            return None;
        };
        if self.layers.is_empty() {
            if !self.wrong && !self.unread {
                context.say(
                    Diagnostic::error(lines.span, "lines without a material")
                        .label("write `lines LENGTH MATERIAL …`, or `layer` statements under it"),
                );
            }
            return None;
        }
        let sites =
            lines.spaces.len() + self.rows.iter().map(|row| row.spaces.len()).sum::<usize>();
        if sites > MAX_SITES {
            let message = Diagnostic::error(lines.span, format!("the wafer has {sites} spaces"));
            let label = format!("a flow may have {MAX_SITES} sites, rows included");
            self.wrong(message.label(label), context);
        }
        self.check_shape(&lines, written, context);
        let between = match self.between.take() {
            None => None,
            Some((between, None)) => Some(between),
            Some((between, Some(to))) => match height(to, &self.layers, context) {
                Some(to) => Some(Between { to, ..between }),
                None => {
                    self.wrong = true;
                    None
                }
            },
        };
        (!self.wrong && !self.unread).then_some(Wafer {
            below: self.below,
            lines,
            rows: self.rows,
            layers: self.layers,
            liner: self.liner,
            between,
            over: self.over,
            span,
        })
    }

    /// The drawn line must have an inside, and a bottom apart from its neighbours.
    fn check_shape(&mut self, lines: &Lines, written: &syntax::Lines, context: &mut Context) {
        let height: f64 = self.layers.iter().map(|layer| layer.thickness.nominal.nm()).sum();
        let width = lines.width.nominal.nm();
        let narrowest = self
            .rows
            .iter()
            .flat_map(|row| &row.widths)
            .fold(width, |least, width| least.min(width.nominal.nm()));
        if let Some(liner) = &self.liner {
            let thickness = liner.thickness.nominal.nm();
            if 2.0 * thickness >= narrowest || thickness >= height {
                let message = Diagnostic::error(liner.span, "the liner leaves no core in the line");
                self.wrong(
                    message.label("thinner than half of the width, and than the height"),
                    context,
                );
            }
        }
        let widening = 2.0 * height * lines.taper.nominal.degrees().to_radians().tan();
        let tightest = lines
            .spaces
            .iter()
            .flat_map(|pair| [pair.left, pair.right])
            .chain(self.rows.iter().flat_map(|row| row.spaces.iter().copied()))
            .map(|space| space.nominal.nm())
            .fold(f64::INFINITY, f64::min);
        let Some(taper) = written.taper else { return };
        if tightest - widening < MIN_LENGTH_NM {
            let message = Diagnostic::error(taper.span, "the lines meet at their bottom");
            self.wrong(
                message.label(format!("the taper widens each by {widening:.1} nm over its height")),
                context,
            );
        } else if narrowest + widening < MIN_LENGTH_NM {
            let message = Diagnostic::error(taper.span, "the line has no bottom");
            self.wrong(
                message.label(format!("the taper narrows it by {:.1} nm", -widening)),
                context,
            );
        }
    }
}

/// Resolves a height; a place that is no layer's name is told.
pub(super) fn height(
    height: &syntax::Height,
    layers: &[Layer],
    context: &mut Context,
) -> Option<Height> {
    let place = match &height.place {
        syntax::Place::Lines => Place::Lines,
        syntax::Place::Floor => Place::Floor,
        syntax::Place::Layer(name) => {
            let found = layers.iter().position(|layer| layer.name.as_ref() == Some(&name.value));
            let Some(index) = found else {
                let names = layers.iter().filter_map(|layer| layer.name.as_deref());
                let known = ["lines", "floor"].into_iter().chain(names);
                let message = format!("`{}` is no place", name.value);
                context.say(super::context::unknown(name, message, known, "place"));
                return None;
            };
            Place::Layer(index)
        }
    };
    Some(Height { offset: height.offset, place })
}

fn count(number: usize, what: &str) -> String {
    if number == 1 { format!("1 {what}") } else { format!("{number} {what}s") }
}
