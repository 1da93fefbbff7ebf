//! `delay` of a net: its spaces mixed by their shares, neighbours quiet, along and against.
//!
//! Capacitance and resistance per length are the means over the net's spaces, weighted by their
//! shares. Neighbours quiet: the line's total. Switching along or against: ground plus nothing or
//! twice the coupling. The delay rises with both, so bounds go through as they are.

use super::Figure;
use super::delay::{Driven, delay_ps};
use super::reading::{Missing, Reading};
use crate::flow::Net;

/// A stretch of a net at one space; capacitances in aF/µm, resistance in ohm/µm.
#[derive(Debug, Clone, Copy)]
pub(super) struct Stretch {
    /// Share of the net's length, 1.
    pub share: f64,
    pub total: Reading,
    pub coupling: Reading,
    pub ground: Reading,
    pub resistance: Reading,
}

/// The delays of a net, in ps.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Delays {
    /// Neighbours quiet.
    pub quiet: Reading,
    /// Neighbours switching along.
    pub along: Reading,
    /// Neighbours switching against.
    pub against: Reading,
}

impl Delays {
    /// One reading for all three.
    pub fn all(reading: Reading) -> Self {
        Self { quiet: reading, along: reading, against: reading }
    }
}

/// The delays of a net along its stretches.
pub(super) fn delays(net: &Net, stretches: &[Stretch]) -> Delays {
    match mixed(stretches) {
        Ok(wire) => {
            let with = |capacitance| Reading::Known(delay(net, wire.resistance, capacitance));
            Delays {
                quiet: with(wire.total),
                along: with(wire.ground),
                against: with(plus(wire.ground, wire.coupling.map(|c| 2.0 * c))),
            }
        }
        Err(reading) => Delays::all(reading),
    }
}

/// Means over a net, per length.
struct Wire {
    total: Figure,
    coupling: Figure,
    ground: Figure,
    resistance: Figure,
}

/// The means; where one stretch lacks a figure, what it lacks. No ground at all counts as zero.
fn mixed(stretches: &[Stretch]) -> Result<Wire, Reading> {
    let mean = |of: fn(&Stretch) -> Reading| {
        stretches.iter().try_fold(Figure::exact(0.0), |sum, stretch| match of(stretch) {
            Reading::Known(figure) => Ok(plus(sum, figure.map(|v| v * stretch.share))),
            Reading::Missing(Missing::NoGround) => Ok(sum),
            lacking => Err(lacking),
        })
    };
    Ok(Wire {
        total: mean(|s| s.total)?,
        coupling: mean(|s| s.coupling)?,
        ground: mean(|s| s.ground)?,
        resistance: mean(|s| s.resistance)?,
    })
}

fn plus(a: Figure, b: Figure) -> Figure {
    Figure { value: a.value + b.value, low: a.low + b.low, high: a.high + b.high }
}

/// Delay of the net's driver, line and load, in ps, by bounds.
fn delay(net: &Net, resistance: Figure, capacitance: Figure) -> Figure {
    let of = |resistance_ohm_per_um: f64, capacitance_af_per_um: f64| {
        delay_ps(&Driven {
            length_um: net.length.nominal.um(),
            resistance_ohm_per_um,
            capacitance_af_per_um,
            driver_ohm: net.driver.nominal.ohm(),
            load_af: net.load.nominal.af(),
        })
    };
    Figure {
        value: of(resistance.value, capacitance.value),
        low: of(resistance.low, capacitance.low),
        high: of(resistance.high, capacitance.high),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::source::Span;
    use crate::units::{Amount, Capacitance, Length, Resistance};

    fn net() -> Net {
        Net {
            name: "bus".into(),
            length: Amount::exact(Length::from_um(100.0)),
            at: Vec::new(),
            driver: Amount::exact(Resistance::from_kohm(1.0)),
            load: Amount::exact(Capacitance::from_ff(1.0)),
            span: Span::default(),
        }
    }

    fn stretch(share: f64, total: f64) -> Stretch {
        let known = |value| Reading::Known(Figure::within(value, 0.0));
        Stretch {
            share,
            total: Reading::Known(Figure::within(total, 1.0)),
            coupling: known(0.6 * total),
            ground: known(0.4 * total),
            resistance: known(10.0),
        }
    }

    #[test]
    fn spaces_mix_by_their_shares() {
        let delays = delays(&net(), &[stretch(0.7, 200.0), stretch(0.3, 100.0)]);
        // 170 aF/µm over 100 µm: 17 fF and 1 kohm, driven by 1 kohm into 1 fF.
        let by_hand = 0.69 * 18.0 + 0.38 * 17.0 + 0.69;
        let quiet = delays.quiet.figure().unwrap();
        assert!((quiet.value - by_hand).abs() < 1e-9, "{quiet:?}, by hand {by_hand}");
        assert!(quiet.low < quiet.value && quiet.value < quiet.high);
    }

    #[test]
    fn neighbours_along_and_against_bracket_the_quiet_ones() {
        let delays = delays(&net(), &[stretch(1.0, 200.0)]);
        let value = |reading: Reading| reading.figure().unwrap().value;
        assert!(value(delays.along) < value(delays.quiet));
        assert!(value(delays.quiet) < value(delays.against));
    }

    #[test]
    fn what_one_stretch_lacks_the_net_lacks() {
        let mut lacking = stretch(0.5, 100.0);
        lacking.resistance = Reading::Missing(Missing::NoNumber);
        let delays = delays(&net(), &[stretch(0.5, 100.0), lacking]);
        assert_eq!(delays.quiet, Reading::Missing(Missing::NoNumber));
    }
}
