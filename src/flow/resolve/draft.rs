//! The statements of a tree by section, with what can be said about them before any name is
//! looked up.

use std::collections::{BTreeMap, BTreeSet};

use super::context::Context;
use crate::diag::Diagnostic;
use crate::source::Span;
use crate::syntax::{
    Change, Film, LimitStatement, Line, MAX_SPLITS, Name, NetStatement, Op, Section,
    SplitStatement, Statement, StepStatement, Tree, WaferStatement, WaiverStatement,
};

/// Longest list of operation numbers in a message.
const SHOWN_STEPS: usize = 20;

/// The statements of a flow, sorted.
pub(super) struct Draft<'t> {
    pub name: Option<Name>,
    pub title: Option<String>,
    /// The statement with its place.
    pub wafer: Vec<(&'t WaferStatement, Span)>,
    pub steps: Vec<&'t StepStatement>,
    /// Where the step of a number stands in `steps`, the first where it stands twice.
    places: BTreeMap<u32, usize>,
    pub splits: Vec<Split<'t>>,
    pub nets: Vec<(&'t NetStatement, Span)>,
    pub next_level: Option<(&'t Film, Span)>,
    pub limits: Vec<(&'t LimitStatement, &'t Line)>,
    pub waivers: Vec<(&'t WaiverStatement, Span)>,
    pub unread: Unread,
}

/// The statements of one split.
pub(super) struct Split<'t> {
    pub name: Name,
    pub changes: Vec<&'t SplitStatement>,
}

/// What lines that could not be read may have said.
#[derive(Default)]
pub(super) struct Unread {
    /// Anything about the wafer.
    pub wafer: bool,
    /// Operations of these numbers.
    ops: Vec<u32>,
    /// Any operation.
    any_op: bool,
    /// Splits and nets of these names, by the first word of a line.
    names: Vec<String>,
    /// Any split, net or name.
    any_name: bool,
}

impl Unread {
    fn of(tree: &Tree) -> Self {
        let mut unread = Self::default();
        for broken in tree.broken() {
            let first = broken.words.first().map_or("", String::as_str);
            match broken.section {
                Some(Section::Steps) => match first.parse() {
                    Ok(op) => unread.ops.push(op),
                    Err(_) => unread.any_op = true,
                },
                Some(Section::Splits | Section::Nets) => {
                    unread.names.push(first.to_owned());
                }
                Some(Section::Limits | Section::Waivers) => {}
                Some(Section::Wafer) => unread.wafer = true,
                None => {
                    unread.wafer = true;
                    unread.any_op = true;
                    unread.any_name = true;
                }
            }
        }
        unread
    }

    /// Whether a line that could not be read may be this operation.
    pub fn may_be_op(&self, op: u32) -> bool {
        self.any_op || self.ops.contains(&op)
    }

    /// Whether a line that could not be read may give this name.
    pub fn may_name(&self, name: &str) -> bool {
        self.any_name || self.names.iter().any(|unread| unread == name)
    }
}

impl<'t> Draft<'t> {
    /// Sorts the statements of a tree; repeated numbers and names are told.
    pub fn of(tree: &'t Tree, context: &mut Context) -> Self {
        let mut draft = Self {
            name: None,
            title: None,
            wafer: vec![],
            steps: vec![],
            places: BTreeMap::new(),
            splits: vec![],
            nets: vec![],
            next_level: None,
            limits: vec![],
            waivers: vec![],
            unread: Unread::of(tree),
        };
        for (line, statement, span) in statements(tree) {
            match statement {
                Statement::Use(_) => {}
                Statement::Flow { name, title } => {
                    draft.name = Some(name.clone());
                    draft.title = title.as_ref().map(|title| title.value.clone());
                }
                Statement::Wafer(statement) => draft.wafer.push((statement, span)),
                Statement::Step(step) => draft.steps.push(step),
                Statement::Split(split) => draft.add_split(split, context),
                Statement::Net(net) => draft.nets.push((net, span)),
                Statement::NextLevel(film) => {
                    if draft.next_level.replace((film, span)).is_some() {
                        context.say(
                            Diagnostic::error(span, "a second `next-level`")
                                .label("one plane stands above the wafer"),
                        );
                    }
                }
                Statement::Limit(limit) => draft.limits.push((limit, line)),
                Statement::Waiver(waiver) => draft.waivers.push((waiver, span)),
            }
        }
        draft.check_ops(context);
        draft.check_names(context);
        draft
    }

    fn add_split(&mut self, statement: &'t SplitStatement, context: &mut Context) {
        if let Some(split) =
            self.splits.iter_mut().find(|split| split.name.value == statement.name.value)
        {
            split.changes.push(statement);
            return;
        }
        if self.splits.len() == MAX_SPLITS {
            let message = Diagnostic::error(statement.name.span, "too many splits")
                .label(format!("a flow may have {MAX_SPLITS}"));
            // Said once: the key of a message is its place, so only the first that is too many.
            if !self.unread.any_name {
                context.say(message);
            }
            self.unread.any_name = true;
            return;
        }
        context.check_new_name(&statement.name, "a split");
        self.splits.push(Split { name: statement.name.clone(), changes: vec![statement] });
    }

    fn check_ops(&mut self, context: &mut Context) {
        for (at, step) in self.steps.iter().enumerate() {
            let first = *self.places.entry(step.op.number).or_insert(at);
            if first == at {
                continue;
            }
            let first = &self.steps[first].op;
            context.say(
                Diagnostic::error(
                    step.op.span,
                    format!("the operation number {} stands twice", step.op.text),
                )
                .label(format!("also in line {}", context.source.position(first.span.start).line)),
            );
        }
    }

    fn check_names(&self, context: &mut Context) {
        let mut seen = BTreeSet::new();
        for (net, _) in &self.nets {
            context.check_new_name(&net.name, "a net");
            if !seen.insert(&net.name.value) {
                context.say(
                    Diagnostic::error(net.name.span, format!("a second net `{}`", net.name.value))
                        .label("choose another name"),
                );
            }
        }
    }

    /// Whether there is such an operation; a message if not.
    pub fn check_op(&self, op: &Op, context: &mut Context) -> bool {
        let known = self.places.contains_key(&op.number);
        if !known && !self.unread.may_be_op(op.number) {
            let message = Diagnostic::error(op.span, format!("no step has the number {}", op.text));
            context.say(if self.steps.len() <= SHOWN_STEPS {
                let numbers: Vec<_> = self.steps.iter().map(|step| &*step.op.text).collect();
                message.label(format!("the steps are {}", numbers.join(", ")))
            } else {
                message.label("not a step of this flow")
            });
        }
        known
    }
}

fn statements(tree: &Tree) -> impl Iterator<Item = (&Line, &Statement, Span)> {
    tree.lines.iter().filter_map(|line| match &line.content {
        crate::syntax::Content::Statement(statement) => {
            Some((line, &**statement, line.tokens_span()))
        }
        _ => None,
    })
}

impl<'t> Split<'t> {
    /// Its statements about the wafer, with their places.
    pub fn wafer(&self) -> impl Iterator<Item = (&'t WaferStatement, Span)> {
        self.changes.iter().filter_map(|statement| match &statement.change {
            Change::Wafer(wafer) => Some((wafer, statement.span)),
            _ => None,
        })
    }
}
