//! Amounts: a number, its unit and its tolerance; lists of them; what they may measure.

use super::cursor::{Cursor, Parsed};
use super::lex::TokenKind;
use super::sizes::{
    MAX_LENGTH_NM, MAX_LOAD_AF, MAX_NET_LENGTH_NM, MAX_OVERETCH, MAX_RESISTANCE_OHM, MAX_SITES,
    MAX_TAPER_DEG, MAX_TEMPERATURE_C, MAX_TIME_S, MIN_LENGTH_NM,
};
use super::tree::{Number, Written};
use crate::diag::Diagnostic;
use crate::diag::nearest;
use crate::source::{Span, Spanned};
use crate::units::{Amount, Dimensioned, Unit, UnitKind};

/// What an amount is an amount of, and how far it may go, in the base unit.
pub(super) struct Scale {
    what: &'static str,
    low: f64,
    high: f64,
    range: &'static str,
}

macro_rules! scales {
    ($($(#[$doc:meta])* $name:ident $what:literal $low:expr, $high:expr, $range:literal;)+) => {
        impl Scale {
            $(
                $(#[$doc])*
                pub const $name: Self =
                    Self { what: $what, low: $low, high: $high, range: $range };
            )+
        }
    };
}

scales! {
    THICKNESS "a thickness" MIN_LENGTH_NM, MAX_LENGTH_NM, "from 0.01 nm to 100 um";
    DEPTH "a depth" MIN_LENGTH_NM, MAX_LENGTH_NM, "from 0.01 nm to 100 um";
    WIDTH "a width" MIN_LENGTH_NM, MAX_LENGTH_NM, "from 0.01 nm to 100 um";
    SPACE "a space" MIN_LENGTH_NM, MAX_LENGTH_NM, "from 0.01 nm to 100 um";
    PITCH "a pitch" MIN_LENGTH_NM, MAX_LENGTH_NM, "from 0.01 nm to 100 um";
    RADIUS "a corner radius" 0.0, MAX_LENGTH_NM, "from 0 to 100 um";
    HEIGHT "a height" 0.0, MAX_LENGTH_NM, "from 0 to 100 um";
    OVERLAY "an overlay" 0.0, MAX_LENGTH_NM, "from 0 to 100 um";
    OVERETCH_DEPTH "an overetch" 0.0, MAX_LENGTH_NM, "from 0 to 100 um";
    NET_LENGTH "the length of a net" MIN_LENGTH_NM, MAX_NET_LENGTH_NM, "from 0.01 nm to 100 mm";
    TAPER "a taper" -MAX_TAPER_DEG, MAX_TAPER_DEG, "from -45 deg to 45 deg";
    TEMPERATURE "a temperature" -273.15, MAX_TEMPERATURE_C, "from -273.15 C to 2000 C";
    TIME "a time" 0.001, MAX_TIME_S, "from 0.001 s to 1000 h";
    OVERETCH_SHARE "an overetch" 0.0, MAX_OVERETCH, "from 0 % to 1000 %";
    NET_SHARE "a share of a net" 0.0, 1.0, "from 0 % to 100 %";
    SPREAD_SHARE "a share of the spread" 0.0001, 1.0, "from 0.01 % to 100 %";
    DRIVER "the resistance of a driver" 0.001, MAX_RESISTANCE_OHM, "from 0.001 ohm to 1000 kohm";
    LOAD "the capacitance of a load" 0.0, MAX_LOAD_AF, "from 0 to 1000 pF";
}

/// A number with what follows it, before its unit is known to fit.
#[derive(Clone, Copy)]
pub(super) struct Item {
    value: f64,
    value_span: Span,
    unit: OptionalUnit,
    tolerance: Option<Tolerance>,
    pub span: Span,
}

/// A unit, where one is written.
type OptionalUnit = Option<Spanned<Unit>>;

#[derive(Clone, Copy)]
struct Tolerance {
    value: f64,
    unit: OptionalUnit,
    span: Span,
}

impl Cursor<'_> {
    /// Takes one amount.
    pub fn amount<T: Dimensioned>(&mut self, scale: &Scale) -> Parsed<Written<T>> {
        let item = self.item(scale.what)?;
        self.read(&item, None, scale)
    }

    /// Takes one amount without tolerance.
    pub fn exact<T: Dimensioned>(&mut self, scale: &Scale) -> Parsed<Spanned<T>> {
        let item = self.item(scale.what)?;
        self.read_exact(&item, None, scale)
    }

    /// Takes a list; an item without a unit takes that of the next item that has one.
    pub fn amounts<T: Dimensioned>(&mut self, scale: &Scale) -> Parsed<Vec<Written<T>>> {
        let mut items = vec![self.item(scale.what)?];
        while self.eat(TokenKind::Comma).is_some() {
            self.room_in_list(items.len())?;
            items.push(self.item(scale.what)?);
        }
        self.read_all(&items, scale)
    }

    /// A list of sites or of their lengths holds no more than a flow may have sites.
    pub fn room_in_list(&self, length: usize) -> Parsed<()> {
        if length < MAX_SITES {
            return Ok(());
        }
        let span = self.peek().map_or(self.whole(), |token| token.span);
        Err(Diagnostic::error(span, format!("a list of more than {MAX_SITES} items"))
            .label(format!("a flow may have {MAX_SITES} sites")))
    }

    /// Takes an amount whose unit is checked later.
    pub fn number(&mut self, what: &str) -> Parsed<Number> {
        let item = self.item(what)?;
        let (unit, tolerance) = item.split_unit(UnitKind::Share);
        Ok(Number {
            value: item.value,
            unit: unit.map(|unit| unit.value),
            tolerance: tolerance.map(|(value, unit)| (value, unit.map(|unit| unit.value))),
            span: item.span,
        })
    }

    /// Takes a number, its unit and its tolerance as they come.
    pub fn item(&mut self, what: &str) -> Parsed<Item> {
        let start = self.here();
        let (value, value_span) = self.plain_number(what)?;
        let unit = self.unit();
        let tolerance = match self.eat(TokenKind::PlusMinus) {
            None => None,
            Some(sign) => {
                let (value, _) = self.plain_number("a tolerance")?;
                let unit = self.unit();
                let span = self.since(sign.span.start);
                if value < 0.0 {
                    return Err(Diagnostic::error(span, "a tolerance cannot be negative")
                        .label("three standard deviations"));
                }
                Some(Tolerance { value, unit, span })
            }
        };
        Ok(Item { value, value_span, unit, tolerance, span: self.since(start) })
    }

    fn plain_number(&mut self, what: &str) -> Parsed<(f64, Span)> {
        let Some(token) = self.peek().filter(|token| token.kind == TokenKind::Number) else {
            return Err(self.missing(what));
        };
        let text = self.text(token.span);
        match text.parse::<f64>() {
            Ok(value) if value.is_finite() => {
                self.next();
                Ok((value, token.span))
            }
            _ => Err(Diagnostic::error(token.span, format!("`{text}` is too large a number"))
                .label("beyond what can be computed with")),
        }
    }

    fn unit(&mut self) -> OptionalUnit {
        let token = self.peek()?;
        let unit = match token.kind {
            TokenKind::Percent => Some(Unit::Percent),
            TokenKind::Word => Unit::of_symbol(self.text(token.span)),
            _ => None,
        }?;
        self.next();
        Some(Spanned::new(unit, token.span))
    }

    /// Reads the items of a list, units handed back from item to item.
    pub fn read_all<T: Dimensioned>(
        &self,
        items: &[Item],
        scale: &Scale,
    ) -> Parsed<Vec<Written<T>>> {
        let mut unit = None;
        let mut amounts = Vec::with_capacity(items.len());
        for item in items.iter().rev() {
            let (own, _) = item.split_unit(T::KIND);
            unit = own.or(unit);
            amounts.push(self.read(item, unit, scale)?);
        }
        amounts.reverse();
        Ok(amounts)
    }

    /// Reads an item without tolerance.
    pub fn read_exact<T: Dimensioned>(
        &self,
        item: &Item,
        inherited: OptionalUnit,
        scale: &Scale,
    ) -> Parsed<Spanned<T>> {
        if let Some(tolerance) = &item.tolerance {
            return Err(Diagnostic::error(
                tolerance.span,
                format!("{} takes no tolerance", scale.what),
            )
            .label("leave it out"));
        }
        Ok(Spanned::new(self.read::<T>(item, inherited, scale)?.value.nominal, item.span))
    }

    /// Reads an item as an amount; without a unit of its own it takes the inherited one.
    pub fn read<T: Dimensioned>(
        &self,
        item: &Item,
        inherited: OptionalUnit,
        scale: &Scale,
    ) -> Parsed<Written<T>> {
        let (own, tolerance) = item.split_unit(T::KIND);
        let unit = own.or(inherited).ok_or_else(|| self.unitless(item, T::KIND, scale))?;
        fits(unit, T::KIND, scale.what)?;
        let nominal = unit.value.absolute(item.value);
        if !(scale.low..=scale.high).contains(&nominal) {
            let written = self.text(item.value_span);
            let message = if item.value < 0.0 && scale.low >= 0.0 {
                format!("{} cannot be negative", scale.what)
            } else {
                format!("{} of {written} {} is out of range", scale.what, unit.value.symbol())
            };
            return Err(Diagnostic::error(item.span, message).label(scale.range));
        }
        let three_sigma = match tolerance {
            None => 0.0,
            Some((percent, Some(unit)))
                if unit.value == Unit::Percent && T::KIND != UnitKind::Share =>
            {
                own.or(inherited).map_or(0.0, |own| own.value.difference(item.value)).abs()
                    * (percent / 100.0)
            }
            Some((value, tolerance_unit)) => {
                let tolerance_unit = tolerance_unit.unwrap_or(unit);
                fits(tolerance_unit, T::KIND, "this tolerance")?;
                tolerance_unit.value.difference(value)
            }
        };
        if scale.low > 0.0 && three_sigma > nominal {
            let span = item.tolerance.map_or(item.span, |tolerance| tolerance.span);
            return Err(Diagnostic::error(span, "the tolerance is larger than the value")
                .label(format!("{} would become negative", scale.what)));
        }
        let amount =
            Amount { nominal: T::from_base(nominal), three_sigma: T::from_base(three_sigma) };
        Ok(Spanned::new(amount, item.span))
    }

    fn unitless(&self, item: &Item, kind: UnitKind, scale: &Scale) -> Diagnostic {
        let number = self.text(item.value_span);
        if let Some(message) = self.decimal_comma() {
            return message;
        }
        if let Some(token) = self.peek().filter(|token| token.span.start >= item.span.end) {
            let found = self.text(token.span);
            let symbols = || Unit::ALL.iter().filter(|u| u.kind() == kind).map(|u| u.symbol());
            if let Some(meant) = nearest(found, symbols()) {
                let message = Diagnostic::error(token.span, format!("`{found}` is not a unit"));
                return message.label(if found.eq_ignore_ascii_case(meant) {
                    format!("did you mean `{meant}`?")
                } else {
                    format!("write {}", kind.symbols())
                });
            }
        }
        Diagnostic::error(item.value_span, format!("{} needs a unit", scale.what))
            .label(format!("write {} after `{number}`", kind.symbols()))
    }
}

impl Item {
    /// The unit of the value, and the tolerance with its own unit.
    ///
    /// In `60 ± 3 nm` the one unit that is written is that of both, unless it is a `%`
    /// that cannot be the value's.
    fn split_unit(&self, kind: UnitKind) -> (OptionalUnit, Option<(f64, OptionalUnit)>) {
        match self.tolerance {
            None => (self.unit, None),
            Some(Tolerance { value, unit, .. }) => {
                let percent_of_value =
                    kind != UnitKind::Share && unit.is_some_and(|unit| unit.value == Unit::Percent);
                let own = if percent_of_value { self.unit } else { self.unit.or(unit) };
                (own, Some((value, unit)))
            }
        }
    }

    /// The unit written with the value, or with both value and tolerance.
    pub fn unit_as(&self, kind: UnitKind) -> OptionalUnit {
        self.split_unit(kind).0
    }
}

fn fits(unit: Spanned<Unit>, kind: UnitKind, what: &str) -> Parsed<()> {
    if unit.value.kind() == kind {
        return Ok(());
    }
    let (found, wanted) = (unit.value.kind().words(), kind.words());
    Err(Diagnostic::error(unit.span, format!("{what} is {wanted}, not {found}"))
        .label(format!("write {}", kind.symbols())))
}
