//! Mean free path and Knudsen number of a process gas.
//!
//! λ = k T / (√2 π d² p), hard spheres of one kind (kinetic theory).

use crate::num::constants::BOLTZMANN_J_PER_K;
use crate::units::{Pressure, Temperature};

/// Mean free path in nm of molecules `diameter_nm` across.
pub fn mean_free_path_nm(temperature: Temperature, pressure: Pressure, diameter_nm: f64) -> f64 {
    let area_m2 = std::f64::consts::PI * (diameter_nm * 1e-9).powi(2);
    let path_m = BOLTZMANN_J_PER_K * temperature.kelvin()
        / (std::f64::consts::SQRT_2 * area_m2 * pressure.pa());
    1e9 * path_m
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Nitrogen, 0.375 nm, from the formula (independent calculation): free paths in µm. The
    /// last is an ozone and TEOS process: Knudsen number about 4 in a space of 50 nm.
    #[test]
    fn nitrogen() {
        let table = [(300.0, 1.0, 49.7), (673.0, 5.0, 22.3), (753.0, 600.0, 0.208)];
        for (kelvin, torr, path_um) in table {
            let (t, p) = (Temperature::from_kelvin(kelvin), Pressure::from_torr(torr));
            let ours_um = 1e-3 * mean_free_path_nm(t, p, 0.375);
            assert!((ours_um / path_um - 1.0).abs() < 3e-3, "{kelvin} K: {ours_um}");
        }
    }
}
