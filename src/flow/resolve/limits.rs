//! Limits and waivers.

use super::context::{Context, state, unknown};
use super::draft::Draft;
use super::sites::Places;
use crate::diag::{Diagnostic, nearest};
use crate::flow::{Against, Claim, Dimension, Limit, Net, Quantity, Variant, Waiver};
use crate::source::Span;
use crate::syntax::{Bound, LimitStatement, Name, line_text};
use crate::units::{Unit, UnitKind};

/// Resolves the statements of `limits`.
pub(super) fn limits(
    draft: &Draft,
    variants: &[Option<Variant>],
    nets: &[Net],
    places: &Places,
    context: &mut Context,
) -> Vec<Limit> {
    let mut limits = vec![];
    for (statement, line) in &draft.limits {
        let mut resolver = Resolver { draft, variants, nets, places, context };
        let Some(claim) = resolver.claim(statement) else { continue };
        let Some(clauses) = resolver.clauses(statement, claim) else { continue };
        let text = line_text(&context.source.text, line);
        limits.push(Limit { text, span: line.tokens_span(), ..clauses });
    }
    limits
}

/// Resolves the statements of `waivers`.
pub(super) fn waivers(draft: &Draft, places: &Places, context: &mut Context) -> Vec<Waiver> {
    let mut waivers = vec![];
    for (statement, span) in &draft.waivers {
        if let Some(op) = &statement.on {
            draft.check_op(op, context);
        }
        if let Some(split) = &statement.in_split {
            find_split(draft, split, context);
        }
        waivers.push(Waiver {
            rule: statement.rule.clone(),
            on: statement.on.as_ref().map(|op| op.number),
            at: statement.at.as_ref().map(|at| places.anywhere(at, context)),
            in_split: statement.in_split.as_ref().map(|split| split.value.clone()),
            because: statement.because.value.clone(),
            span: *span,
        });
    }
    waivers
}

fn find_split(draft: &Draft, name: &Name, context: &mut Context) -> Option<usize> {
    let found = draft.splits.iter().position(|split| split.name.value == name.value);
    if found.is_none() && !draft.unread.may_name(&name.value) {
        let known = draft.splits.iter().map(|split| split.name.value.as_str());
        let message = format!("no split is called `{}`", name.value);
        context.say(unknown(name, message, known, "splits"));
    }
    found
}

struct Resolver<'r, 'd, 'c> {
    draft: &'r Draft<'d>,
    variants: &'r [Option<Variant>],
    nets: &'r [Net],
    places: &'r Places,
    context: &'r mut Context<'c>,
}

impl Resolver<'_, '_, '_> {
    /// The state or the quantity with its bound.
    fn claim(&mut self, statement: &LimitStatement) -> Option<Claim> {
        let subject = &statement.subject;
        let quantity =
            Quantity::ALL.iter().copied().find(|quantity| quantity.name() == subject.value);
        match (state(&subject.value), quantity, &statement.bound) {
            (Some(state), _, None) => Some(Claim::State(state)),
            (Some(_), _, Some(bound)) => {
                self.context.say(
                    Diagnostic::error(
                        bound.amount.span,
                        format!("`{}` is a state of a space, not a quantity", subject.value),
                    )
                    .label("a state stands without an amount"),
                );
                None
            }
            (None, Some(quantity), Some(bound)) => self.bound(quantity, bound),
            _ => {
                let states = ["solid", "sealed", "hermetic", "open"];
                let known =
                    Quantity::ALL.iter().map(|quantity| quantity.name()).chain(states).collect();
                let known: Vec<&str> = known;
                let message = Diagnostic::error(
                    subject.span,
                    format!("`{}` is neither a quantity nor a state", subject.value),
                );
                let meant = nearest(&subject.value, known.iter().copied());
                self.context.say(match meant {
                    Some(meant) => message.label(format!("did you mean `{meant}`?")),
                    None => message.label("not known here").help(format!(
                        "the quantities are {}",
                        known[..known.len() - 4].join(", ")
                    )),
                });
                None
            }
        }
    }

    fn bound(&mut self, quantity: Quantity, bound: &Bound) -> Option<Claim> {
        let amount = &bound.amount;
        let name = quantity.name();
        let kind = match quantity.dimension() {
            Dimension::Length => Some(UnitKind::Length),
            Dimension::Share => Some(UnitKind::Share),
            Dimension::CapacitancePerLength => Some(UnitKind::CapacitancePerLength),
            Dimension::ResistancePerLength => Some(UnitKind::ResistancePerLength),
            Dimension::Delay => Some(UnitKind::Delay),
            Dimension::Temperature => Some(UnitKind::Temperature),
            Dimension::One => None,
        };
        let message = if amount.tolerance.is_some() {
            Some(("a limit takes no tolerance".to_owned(), "leave the tolerance out".to_owned()))
        } else if amount.unit.map(Unit::kind) == kind {
            None
        } else {
            Some(match kind {
                Some(kind) => (
                    match amount.unit {
                        Some(unit) => {
                            format!("`{name}` is {}, not {}", kind.words(), unit.kind().words())
                        }
                        None => format!("`{name}` needs a unit"),
                    },
                    format!("write {}", kind.symbols()),
                ),
                None => {
                    (format!("`{name}` is a plain number"), "write it without a unit".to_owned())
                }
            })
        };
        if let Some((message, label)) = message {
            self.context.say(Diagnostic::error(amount.span, message).label(label));
            return None;
        }
        let value = amount.unit.map_or(amount.value, |unit| unit.absolute(amount.value));
        Some(Claim::Bound { quantity, at_most: bound.at_most, amount: value })
    }

    /// The limit with its clauses; text and place are filled in by the caller.
    fn clauses(&mut self, statement: &LimitStatement, claim: Claim) -> Option<Limit> {
        self.check_clauses(statement, claim)?;
        let at = match &statement.at {
            Some(at) => {
                let sites = self.places.anywhere(at, self.context);
                if sites.is_empty() {
                    return None;
                }
                Some(sites)
            }
            None => None,
        };
        if let Some(op) = &statement.after {
            self.draft.check_op(op, self.context);
        }
        Some(Limit {
            claim,
            at,
            for_net: self.net(statement, claim)?,
            between: self.between(statement.between.as_ref())?,
            against: self.against(statement.against.as_ref())?,
            after: statement.after.as_ref().map(|op| op.number),
            in_spread: statement.in_spread.map(|share| share.value),
            text: String::new(),
            span: Span::default(),
        })
    }

    /// Each clause needs a claim that it can say something about.
    fn check_clauses(&mut self, statement: &LimitStatement, claim: Claim) -> Option<()> {
        use Quantity::{CouplingDrop, Delay, PeakTemperature, TotalDrop};
        let quantity = match claim {
            Claim::State(_) => None,
            Claim::Bound { quantity, .. } => Some(quantity),
        };
        let subject = &statement.subject.value;
        let of_space = !matches!(quantity, Some(Delay | PeakTemperature));
        let at =
            statement.at.as_ref().and_then(|at| Some(at.first()?.span().to(at.last()?.span())));
        let span = |name: &Option<Name>| name.as_ref().map(|name| name.span);
        let problem = if let Some(span) = at.filter(|_| !of_space) {
            Some((span, "at", "it is not of one space"))
        } else if let Some(span) = span(&statement.for_net).filter(|_| quantity != Some(Delay)) {
            Some((span, "for", "only `delay` is of a net"))
        } else if let Some(span) =
            span(&statement.between).filter(|_| !quantity.is_some_and(Quantity::is_electrical))
        {
            Some((span, "between", "it stands on what the field between electrodes gives"))
        } else {
            span(&statement.against)
                .filter(|_| !matches!(quantity, Some(CouplingDrop | TotalDrop)))
                .map(|span| (span, "against", "only `coupling-drop` and `total-drop` compare"))
        };
        match problem {
            None => Some(()),
            Some((span, clause, label)) => {
                self.context.say(
                    Diagnostic::error(span, format!("`{subject}` takes no `{clause}`"))
                        .label(label),
                );
                None
            }
        }
    }

    fn net(&mut self, statement: &LimitStatement, claim: Claim) -> Option<Option<usize>> {
        let delay = matches!(claim, Claim::Bound { quantity: Quantity::Delay, .. });
        if let Some(name) = &statement.for_net {
            let found = self.nets.iter().position(|net| net.name == name.value);
            let told = self.draft.nets.iter().any(|(net, _)| net.name.value == name.value)
                || self.draft.unread.may_name(&name.value);
            if found.is_none() && !told {
                let known = self.draft.nets.iter().map(|(net, _)| net.name.value.as_str());
                let message = format!("no net is called `{}`", name.value);
                self.context.say(unknown(name, message, known, "nets"));
            }
            return Some(Some(found?));
        }
        if !delay {
            return Some(None);
        }
        match self.draft.nets.as_slice() {
            [_] => Some(Some(0)),
            nets => {
                let label = match nets {
                    [] => "the flow has no net; `nets` gives it one",
                    _ => "write `for NET`",
                };
                self.context.say(
                    Diagnostic::error(statement.subject.span, "`delay` is of a net").label(label),
                );
                None
            }
        }
    }

    /// The name must be that of a layer of some wafer.
    fn between(&mut self, name: Option<&Name>) -> Option<Option<String>> {
        let Some(name) = name else { return Some(None) };
        let mut known: Vec<&str> = vec![];
        for layer in self.variants.iter().flatten().flat_map(|variant| &variant.wafer.layers) {
            known.extend(layer.name.as_deref().filter(|name| !known.contains(name)));
        }
        if known.contains(&name.value.as_str()) {
            return Some(Some(name.value.clone()));
        }
        if self.variants.iter().all(Option::is_some) && !self.places.unsure() {
            let message = format!("no layer is called `{}`", name.value);
            let message = unknown(name, message, known, "named layers");
            self.context
                .say(message.help("a layer gets its name by `layer LENGTH MATERIAL as NAME`"));
        }
        None
    }

    fn against(&mut self, name: Option<&Name>) -> Option<Option<Against>> {
        let Some(name) = name else { return Some(None) };
        let split = self.draft.splits.iter().position(|split| split.name.value == name.value);
        let material = self.context.library.material_id(&name.value);
        match (split, material) {
            (Some(split), None) => Some(Some(Against::Split(split + 1))),
            (None, Some(material)) if !self.draft.unread.may_name(&name.value) => {
                if self.context.library.material(material).kind.conducts() {
                    self.context.say(
                        Diagnostic::error(name.span, format!("`{}` conducts", name.value))
                            .label("lines cannot be compared with a conductor between them"),
                    );
                    return None;
                }
                Some(Some(Against::Material(material)))
            }
            (Some(_), Some(_)) => {
                self.context.say(
                    Diagnostic::error(
                        name.span,
                        format!("`{}` is both a split and a material", name.value),
                    )
                    .label("which of the two is meant? rename the split"),
                );
                None
            }
            _ => {
                if !self.draft.unread.may_name(&name.value) {
                    let splits = self.draft.splits.iter().map(|split| split.name.value.as_str());
                    let materials = self.context.library.materials.iter().map(|m| m.name.as_str());
                    let meant = nearest(&name.value, splits.chain(materials));
                    let message = Diagnostic::error(
                        name.span,
                        format!("`{}` is neither a split nor a material", name.value),
                    );
                    self.context.say(match meant {
                        Some(meant) => message.label(format!("did you mean `{meant}`?")),
                        None => message.label("a drop is taken against one of these"),
                    });
                }
                None
            }
        }
    }
}
