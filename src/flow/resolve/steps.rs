//! The steps of each variant.

use std::collections::BTreeMap;
use std::sync::Arc;

use super::context::Context;
use super::draft::{Draft, Split};
use super::sites::Places;
use super::wafer::height;
use super::with;
use crate::diag::Diagnostic;
use crate::flow::{Action, Layer, ProcessUse, Role, Step, Wafer};
use crate::library::{MaterialId, Process, Verb};
use crate::source::{Span, Spanned};
use crate::syntax::{self, Change, Form, Name, SELECTIVE_VERBS, StepStatement};
use crate::units::Amount;

/// Resolves the steps of one variant; `None` where one of them cannot be.
pub(super) fn resolve(
    draft: &Draft,
    split: Option<&Split>,
    variant: usize,
    wafer: Option<&Wafer>,
    places: &Places,
    context: &mut Context,
) -> Option<Vec<Step>> {
    let changes = changes(draft, split, context);
    let mut steps = Vec::with_capacity(draft.steps.len());
    let mut sound = true;
    for statement in &draft.steps {
        let (action, span) = match changes.get(&statement.op.number) {
            Some((Change::Skip(_), _)) => continue,
            Some((Change::Step(_, action), span)) => (action, *span),
            _ => (&statement.action, statement.span),
        };
        check_only_at(statement, action, context);
        let mut resolver =
            Resolver { variant, layers: wafer.map(|wafer| &*wafer.layers), places, context };
        let Some(action) = resolver.action(action) else {
            sound = false;
            continue;
        };
        if let Some(sites) = &statement.only_at {
            places.anywhere(sites, context);
        }
        let skipped = |op: u32| matches!(changes.get(&op), Some((Change::Skip(_), _)));
        let mut ops = |ops: &[syntax::Op]| -> Vec<Spanned<u32>> {
            ops.iter()
                .filter(|op| check_reference(op, statement, draft, context))
                .filter(|op| !skipped(op.number))
                .map(|op| Spanned::new(op.number, op.span))
                .collect()
        };
        steps.push(Step {
            op: statement.op.number,
            op_text: statement.op.text.clone(),
            action,
            after: ops(&statement.after),
            before: ops(&statement.before),
            only_at: statement.only_at.as_ref().map(|sites| places.in_variant(variant, sites)),
            note: statement.note.as_ref().map(|note| note.value.clone()),
            span,
        });
    }
    sound.then_some(steps)
}

/// What a split does to which operation, with the place of the statement.
fn changes<'t>(
    draft: &Draft,
    split: Option<&Split<'t>>,
    context: &mut Context,
) -> BTreeMap<u32, (&'t Change, Span)> {
    let mut changes = BTreeMap::new();
    for statement in split.iter().flat_map(|split| &split.changes) {
        let op = match &statement.change {
            Change::Step(op, _) | Change::Skip(op) => op,
            Change::Wafer(_) => continue,
        };
        draft.check_op(op, context);
        if changes.insert(op.number, (&statement.change, statement.span)).is_some() {
            context.say(
                Diagnostic::error(op.span, format!("the split changes {} twice", op.text))
                    .label("leave one out"),
            );
        }
    }
    changes
}

/// A step of a split keeps the `only at` of the one that it replaces.
fn check_only_at(statement: &StepStatement, action: &syntax::Action, context: &mut Context) {
    let verb = &action.verb;
    if statement.only_at.is_some() && !SELECTIVE_VERBS.contains(&verb.value.as_str()) {
        context.say(
            Diagnostic::error(verb.span, format!("`{}` takes no `only at`", verb.value))
                .label(format!("it would keep that of step {}", statement.op.text)),
        );
    }
}

/// Whether an `after` or `before` names another step; a message if not.
fn check_reference(
    op: &syntax::Op,
    statement: &StepStatement,
    draft: &Draft,
    context: &mut Context,
) -> bool {
    if op.number == statement.op.number {
        context.say(
            Diagnostic::error(op.span, "a step before or after itself").label("name another step"),
        );
        return false;
    }
    draft.check_op(op, context)
}

/// One note for all `only at`: it costs nothing, which a mask on the wafer would. A via has its
/// own mask in any case.
pub(super) fn note_free_masks(draft: &Draft, context: &mut Context) {
    let masked = draft.steps.iter().filter_map(|step| {
        let first = step.only_at.as_ref()?.first()?;
        (step.action.verb.value != "via").then_some((step.op.text.as_str(), first.span()))
    });
    let (ops, places): (Vec<&str>, Vec<Span>) = masked.unzip();
    let Some(&first) = places.first() else { return };
    context.say(
        Diagnostic::note(
            first,
            format!("`only at` on {} is taken to cost nothing", ops.join(", ")),
        )
        .label("the strip of the mask that spares the other sites is not judged")
        .help("write `mask` and `strip` as steps to have it judged"),
    );
}

/// Resolves one step.
struct Resolver<'r, 'c> {
    variant: usize,
    /// The layers of the variant's wafer, when it is known.
    layers: Option<&'r [Layer]>,
    places: &'r Places,
    context: &'r mut Context<'c>,
}

impl Resolver<'_, '_> {
    fn action(&mut self, action: &syntax::Action) -> Option<Action> {
        Some(match &action.form {
            Form::Deposit(film) => {
                let material = self.context.material(&film.material)?;
                let role = match action.verb.value.as_str() {
                    "seal" => Role::Seal,
                    "cap" => Role::Cap,
                    _ => Role::Deposit,
                };
                let process = self.process(action, Verb::Deposit, Some(material))?;
                Action::Deposit { role, thickness: film.thickness.value, material, process }
            }
            Form::Etch(film) => {
                let material = self.context.material(&film.material)?;
                let process = self.removing(action, Verb::Etch, &film.material, material)?;
                Action::Etch { depth: film.thickness.value, material, process }
            }
            Form::EtchUntil { material: name, stop, overetch } => {
                let material = self.context.material(name)?;
                let stop = self.context.material(stop)?;
                let overetch = overetch.map_or(Amount::default(), |overetch| overetch.value);
                let process = self.removing(action, Verb::Etch, name, material)?;
                Action::EtchUntil { material, stop, overetch, process }
            }
            Form::Convert { from, to } => {
                let material = self.context.material(&from.material)?;
                let to = self.other(to, material)?;
                let process = self.removing(action, Verb::Convert, &from.material, material)?;
                Action::Convert { depth: from.thickness.value, from: material, to, process }
            }
            Form::Mask { film, over } => {
                let material = self.context.material(&film.material)?;
                self.places.anywhere(over, self.context);
                let over = self.places.in_variant(self.variant, over);
                let process = self.process(action, Verb::Fill, Some(material))?;
                Action::Mask { thickness: film.thickness.value, material, over, process }
            }
            Form::Fill { material, to } => {
                let material = self.context.material(material)?;
                let to = height(to, self.layers?, self.context)?;
                Action::Fill {
                    material,
                    to,
                    process: self.process(action, Verb::Fill, Some(material))?,
                }
            }
            Form::Release { material, temperature, time } => {
                let material = self.context.material(material)?;
                let process = self.process(action, Verb::Release, Some(material))?;
                let time = time.map(|time| time.value);
                Action::Release { material, temperature: temperature.value, time, process }
            }
            Form::Strip(material) => {
                let material = self.context.material(material)?;
                Action::Strip {
                    material,
                    process: self.process(action, Verb::Strip, Some(material))?,
                }
            }
            Form::Polish(to) => {
                let to = height(to, self.layers?, self.context)?;
                Action::Polish { to, process: self.process(action, Verb::Polish, None)? }
            }
            Form::PolishUntil(stop) => {
                let stop = self.context.material(stop)?;
                Action::PolishUntil { stop, process: self.process(action, Verb::Polish, None)? }
            }
            Form::Heat { temperature, time } => {
                let (temperature, time) = (temperature.value, time.value);
                if action.verb.value == "cure" {
                    let process = self.process(action, Verb::Cure, None)?;
                    Action::Cure { temperature, time, process }
                } else {
                    let process = self.process(action, Verb::Anneal, None)?;
                    Action::Anneal { temperature, time, process }
                }
            }
            Form::Clean => Action::Clean { process: self.process(action, Verb::Clean, None)? },
            Form::Via { core, liner, overlay, overetch } => {
                let material = self.context.material(&core.material)?;
                let liner = match liner {
                    Some(film) => {
                        let material = self.context.material(&film.material)?;
                        self.check_via_liner(core, film);
                        Some((film.thickness.value, material))
                    }
                    None => None,
                };
                Action::Via {
                    width: core.thickness.value,
                    material,
                    liner,
                    overlay: overlay.value,
                    overetch: overetch.map_or(Amount::default(), |overetch| overetch.value),
                    process: self.process(action, Verb::Via, Some(material))?,
                }
            }
        })
    }

    fn process(
        &mut self,
        action: &syntax::Action,
        verb: Verb,
        material: Option<MaterialId>,
    ) -> Option<ProcessUse> {
        let process = self.context.process(action.by.as_ref(), verb, &action.verb, material)?;
        if action.with.is_empty() {
            return Some(ProcessUse { process, overrides: vec![] });
        }
        let mut own = Process::clone(&process);
        let overrides = with::apply(&mut own, &action.with, self.context)?;
        Some(ProcessUse { process: Arc::new(own), overrides })
    }

    /// The process of a step whose depth is that of a named material.
    fn removing(
        &mut self,
        action: &syntax::Action,
        verb: Verb,
        name: &Name,
        material: MaterialId,
    ) -> Option<ProcessUse> {
        let used = self.process(action, verb, Some(material))?;
        let rate = used.process.rate_of(self.context.library.material(material));
        if rate.is_some_and(|rate| rate.value <= 0.0) {
            let (process, material) = (&used.process.name, &name.value);
            self.context.say(
                Diagnostic::error(name.span, format!("`{process}` does not attack `{material}`"))
                    .label("its rate is 0, so no time reaches this depth"),
            );
            return None;
        }
        Some(used)
    }

    /// A material that must differ from another.
    fn other(&mut self, name: &Name, from: MaterialId) -> Option<MaterialId> {
        let to = self.context.material(name)?;
        if to == from {
            self.context.say(
                Diagnostic::error(name.span, "a material converted to itself")
                    .label("name what it becomes"),
            );
            return None;
        }
        Some(to)
    }

    fn check_via_liner(&mut self, core: &syntax::Film, liner: &syntax::Film) {
        let (width, thickness) = (core.thickness.value, liner.thickness.value);
        if 2.0 * thickness.nominal.nm() >= width.nominal.nm() {
            self.context.say(
                Diagnostic::error(liner.thickness.span, "the liner leaves no core in the via")
                    .label("thinner than half of the via's width"),
            );
        }
    }
}
