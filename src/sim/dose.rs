//! How deep the dose of an atomic-layer film reaches.
//!
//! Gordon, Hausmann, Kim and Shepard, Chem. Vap. Deposition 9, 73 (2003): a hole of depth over
//! diameter a is covered to its bottom by an exposure P t = S √(2π m k T) (1 + 19 a/4 + 3 a²/2),
//! S molecules a unit of area at saturation. For a slot a is depth over twice its width. Solved
//! for a, this is the depth that a given exposure covers; beyond it nothing grows. An exposure
//! that does not even cover an open flat is an error.

use super::error::Fault;
use crate::library::Process;
use crate::num::constants::{BOLTZMANN_J_PER_K, MASS_UNIT_KG};
use crate::units::Temperature;

/// Greatest depth over twice the width that the dose covers; `None` where it is not limited.
pub(super) fn aspect(process: &Process) -> Result<Option<f64>, Fault> {
    let Some(dose) = process.dose_pa_s else { return Ok(None) };
    let (Some(saturation), Some(mass), Some(temperature)) =
        (process.saturation_per_m2, process.molecule_mass_u, process.temperature_c)
    else {
        return Err(Fault::refused(
            format!("the dose of {} limits its depth by numbers that are missing", process.name),
            "give it `saturation_per_m2`, `molecule_mass_u` and `temperature_c`, or no `dose_pa_s`",
        ));
    };
    let kelvin = Temperature::from_celsius(temperature.value).kelvin();
    let momentum = 2.0 * std::f64::consts::PI * mass.value * MASS_UNIT_KG;
    let flat = saturation.value * (momentum * BOLTZMANN_J_PER_K * kelvin).sqrt();
    let bracket = dose.value / flat;
    if bracket < 1.0 {
        return Err(Fault::refused(
            format!(
                "a dose of {} Pa s of {} does not cover an open flat, which takes {flat:.3e} Pa s",
                dose.value, process.name
            ),
            "raise `dose_pa_s`",
        ));
    }
    Ok(Some(covered(bracket)))
}

/// Solves 1 + 19 a/4 + 3 a²/2 = bracket.
fn covered(bracket: f64) -> f64 {
    let linear = 19.0 / 4.0;
    ((linear * linear + 6.0 * (bracket - 1.0)).sqrt() - linear) / 3.0
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Bracket at a = 10 and 20, worked out from the formula of Gordon et al. (2003).
    #[test]
    fn the_bracket_is_solved_for_its_aspect() {
        assert!((covered(198.5) - 10.0).abs() < 1e-12);
        assert!((covered(696.0) - 20.0).abs() < 1e-12);
        assert_eq!(covered(1.0), 0.0);
    }
}
