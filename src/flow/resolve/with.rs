//! `with`: numbers of a process, for one step.

use super::context::Context;
use crate::diag::{Diagnostic, nearest};
use crate::flow::Override;
use crate::library::{self, Bounds, NumberKey, Process, Ranged};
use crate::syntax::{Number, With};
use crate::units::{Pressure, Unit, UnitKind};

/// Applies the overrides of a step to its copy of a process; `None` where one is wrong.
pub(super) fn apply(
    process: &mut Process,
    with: &[With],
    context: &mut Context,
) -> Option<Vec<Override>> {
    let mut overrides: Vec<Override> = vec![];
    for entry in with {
        let target = target(process, entry, context)?;
        if overrides.iter().any(|other| other.key == target.key()) {
            context.say(
                Diagnostic::error(entry.name.span, format!("`{}` stands twice", entry.name.value))
                    .label("leave one out"),
            );
            return None;
        }
        let (nominal, three_sigma) = in_unit(&entry.amount, &target, &entry.name.value, context)?;
        if !target.bounds().allow(nominal) {
            let written = context.text(entry.amount.span);
            let message = format!("`{}` of {written} is out of range", entry.name.value);
            let unit = target.unit().symbol();
            let words = format!("{} {unit}", target.bounds().words());
            context.say(
                Diagnostic::error(entry.amount.span, message).label(words.trim_end().to_owned()),
            );
            return None;
        }
        target.set(process, Ranged::exact(nominal));
        overrides.push(Override { key: target.key(), nominal, three_sigma });
    }
    let over_one = process
        .arrival
        .as_ref()
        .is_some_and(|arrival| arrival.conformal.value + arrival.directional.value > 1.0 + 1e-9);
    if over_one {
        let first = with.first()?;
        context.say(
            Diagnostic::error(
                first.name.span,
                format!("the shares of `{}` add up to more than 100 %", process.name),
            )
            .label("conformal and directional leave the rest to neutral"),
        );
        return None;
    }
    Some(overrides)
}

/// The number that an override replaces.
enum Target {
    Key(&'static NumberKey<Process>),
    /// The rate of a material or a family.
    Rate(String),
    /// The growth on a material or a family.
    GrowsOn(String),
}

impl Target {
    /// Its key in a library file.
    fn key(&self) -> String {
        match self {
            Self::Key(number) => number.key.to_owned(),
            Self::Rate(name) => format!("rates.{name}"),
            Self::GrowsOn(name) => format!("grows_on.{name}"),
        }
    }

    fn unit(&self) -> library::Unit {
        match self {
            Self::Key(number) => number.unit,
            Self::Rate(_) | Self::GrowsOn(_) => library::Unit::One,
        }
    }

    fn bounds(&self) -> Bounds {
        match self {
            Self::Key(number) => number.bounds,
            Self::Rate(_) | Self::GrowsOn(_) => Bounds::NOT_NEGATIVE,
        }
    }

    fn set(&self, process: &mut Process, value: Ranged) {
        match self {
            Self::Key(number) => (number.set)(process, value),
            Self::Rate(name) => {
                process.rates.insert(name.clone(), value);
            }
            Self::GrowsOn(name) => {
                process.grows_on.insert(name.clone(), value);
            }
        }
    }
}

fn target(process: &Process, entry: &With, context: &mut Context) -> Option<Target> {
    let name = &entry.name.value;
    if let Some(number) = Process::number_named(name) {
        let of_arrival = library::ARRIVAL_NUMBERS.iter().any(|arrival| arrival.name == *name);
        if !of_arrival || process.arrival.is_some() {
            return Some(Target::Key(number));
        }
    }
    if process.grows_on.contains_key(name) {
        return Some(Target::GrowsOn(name.clone()));
    }
    let material = context.library.material_id(name).is_some();
    if process.rates.contains_key(name) || (!process.rates.is_empty() && material) {
        return Some(Target::Rate(name.clone()));
    }
    let mut known: Vec<&str> = library::PROCESS_NUMBERS.iter().map(|number| number.name).collect();
    if process.arrival.is_some() {
        known.extend(library::ARRIVAL_NUMBERS.iter().map(|number| number.name));
    }
    known.extend(process.rates.keys().chain(process.grows_on.keys()).map(String::as_str));
    let message =
        Diagnostic::error(entry.name.span, format!("`{}` has no number `{name}`", process.name));
    context.say(match nearest(name, known.iter().copied()) {
        Some(meant) => message.label(format!("did you mean `{meant}`?")),
        None => message.label("not known").help(format!("its numbers are {}", known.join(", "))),
    });
    None
}

/// Value and three standard deviations in the unit of the key.
fn in_unit(
    amount: &Number,
    target: &Target,
    name: &str,
    context: &mut Context,
) -> Option<(f64, f64)> {
    let kind = match target.unit() {
        library::Unit::One => Some(UnitKind::Share),
        library::Unit::Celsius => Some(UnitKind::Temperature),
        library::Unit::Nanometre => Some(UnitKind::Length),
        library::Unit::Degree => Some(UnitKind::Angle),
        library::Unit::Torr => Some(UnitKind::Pressure),
        _ => None,
    };
    let bare = matches!(kind, None | Some(UnitKind::Share));
    let sound = match (amount.unit, kind) {
        (None, _) => bare,
        (Some(unit), Some(kind)) => unit.kind() == kind,
        (Some(_), None) => false,
    };
    if !sound {
        let wanted = match kind {
            Some(UnitKind::Share) => "a plain number, or a percentage".to_owned(),
            Some(kind) => format!("{} with its unit", kind.words()),
            None => format!("a plain number, meant in {}", target.unit().symbol()),
        };
        context.say(Diagnostic::error(amount.span, format!("`{name}` takes {wanted}")).label(
            match kind {
                Some(UnitKind::Share) | None => "leave the unit out".to_owned(),
                Some(kind) => format!("write {}", kind.symbols()),
            },
        ));
        return None;
    }
    let to_key = |base: f64| match kind {
        Some(UnitKind::Pressure) => Pressure::from_pa(base).torr(),
        _ => base,
    };
    let nominal = amount.unit.map_or(amount.value, |unit| unit.absolute(amount.value));
    let three_sigma = match amount.tolerance {
        None => 0.0,
        Some((percent, Some(Unit::Percent))) if amount.unit != Some(Unit::Percent) => {
            let value = amount.unit.map_or(amount.value, |unit| unit.difference(amount.value));
            value.abs() * (percent / 100.0)
        }
        Some((value, unit)) => match unit.or(amount.unit) {
            None => value,
            Some(unit) if kind == Some(unit.kind()) => unit.difference(value),
            Some(unit) => {
                context.say(
                    Diagnostic::error(
                        amount.span,
                        format!("the tolerance of `{name}` is {}", unit.kind().words()),
                    )
                    .label("give it in the unit of the value, or in percent"),
                );
                return None;
            }
        },
    };
    Some((to_key(nominal), to_key(three_sigma)))
}
