//! `peak-temperature`: the highest temperature of any step of the flow.

use super::Figure;
use super::reading::{Missing, Reading};
use crate::flow::{Action, Step, Variant};

/// The highest step temperature, in °C.
pub(super) fn peak_temperature(variant: &Variant) -> Reading {
    let temperatures = variant.steps.iter().filter_map(temperature_c);
    let highest = temperatures.max_by(f64::total_cmp);
    highest.map_or(Reading::Missing(Missing::NoTemperature), |c| Reading::Known(Figure::exact(c)))
}

/// The temperature that a step names, else that of its process.
fn temperature_c(step: &Step) -> Option<f64> {
    match &step.action {
        Action::Release { temperature, .. }
        | Action::Anneal { temperature, .. }
        | Action::Cure { temperature, .. } => Some(temperature.nominal.celsius()),
        action => action.process().process.temperature_c.map(|c| c.value),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::measure::hand;
    use crate::units::{Amount, Duration, Temperature};

    #[test]
    fn an_anneal_counts_by_what_it_names() {
        let mut variant = hand::flow(&[(40.0, 40.0)]).variants.remove(0);
        assert_eq!(peak_temperature(&variant), Reading::Missing(Missing::NoTemperature));
        variant.steps.push(hand::step(40, |process| Action::Anneal {
            temperature: Amount::exact(Temperature::from_celsius(380.0)),
            time: Amount::exact(Duration::from_min(30.0)),
            process,
        }));
        assert_eq!(peak_temperature(&variant), Reading::Known(Figure::exact(380.0)));
    }
}
