//! Figures as people read them: unit, sensible digits, numerical error.

use crate::flow::{Dimension, Quantity};
use crate::measure::Figure;

/// Unit of a dimension in the JSON form.
pub fn json_unit(dimension: Dimension) -> &'static str {
    match dimension {
        Dimension::Length => "nm",
        Dimension::Share | Dimension::One => "1",
        Dimension::CapacitancePerLength => "aF/um",
        Dimension::ResistancePerLength => "ohm/um",
        Dimension::Delay => "ps",
        Dimension::Temperature => "C",
    }
}

/// A number of a dimension with its unit, as flows write it: `14.9 nm`, `52.3 %`, `0.41`.
pub fn amount(value: f64, dimension: Dimension) -> String {
    let value = shown(value, dimension);
    with_unit(&fixed(value, decimals(value)), dimension)
}

/// A figure with its numerical error and unit: `14.9 ± 0.2 nm`; an error that does not show in
/// the three digits of the value is left out.
pub fn figure(figure: Figure, dimension: Dimension) -> String {
    let value = shown(figure.value, dimension);
    let low = shown(figure.low, dimension);
    let high = shown(figure.high, dimension);
    let decimals = decimals(value);
    let (text, error) = (fixed(value, decimals), fixed((high - value).max(value - low), decimals));
    let shows = error.chars().any(|c| c.is_ascii_digit() && c != '0');
    with_unit(&if shows { format!("{text} ± {error}") } else { text }, dimension)
}

/// A figure of a quantity.
pub fn of(quantity: Quantity, value: Figure) -> String {
    figure(value, quantity.dimension())
}

fn shown(value: f64, dimension: Dimension) -> f64 {
    if dimension == Dimension::Share { 100.0 * value } else { value }
}

fn with_unit(number: &str, dimension: Dimension) -> String {
    match dimension {
        Dimension::Share => format!("{number} %"),
        Dimension::One => number.to_owned(),
        other => format!("{number} {}", json_unit(other)),
    }
}

/// Decimals that show three significant digits, at most three decimals.
fn decimals(value: f64) -> usize {
    let magnitude = if value == 0.0 { 0.0 } else { value.abs().log10().floor() };
    (2.0 - magnitude).clamp(0.0, 3.0) as usize
}

fn fixed(value: f64, decimals: usize) -> String {
    let text = format!("{value:.decimals$}");
    // A rounded zero has no sign.
    match text.strip_prefix('-') {
        Some(zero) if zero.chars().all(|c| c == '0' || c == '.') => zero.to_owned(),
        _ => text,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn digits_follow_the_error() {
        let nm = |value, error| figure(Figure::within(value, error), Dimension::Length);
        assert_eq!(nm(14.8765, 0.231), "14.9 ± 0.2 nm");
        assert_eq!(nm(14.8765, 0.0), "14.9 nm");
        assert_eq!(nm(-3.2, 0.00001), "-3.20 nm");
        assert_eq!(nm(-0.0001, 0.0), "0.000 nm");
        assert_eq!(nm(123.4, 7.0), "123 ± 7 nm");
        assert_eq!(nm(0.0, 0.0), "0.00 nm");
    }

    #[test]
    fn shares_are_percent_and_plain_numbers_have_no_unit() {
        assert_eq!(amount(0.5234, Dimension::Share), "52.3 %");
        assert_eq!(amount(2.0, Dimension::One), "2.00");
        assert_eq!(amount(71.23, Dimension::CapacitancePerLength), "71.2 aF/um");
    }
}
