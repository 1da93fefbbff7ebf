//! A long roof over a void as a strip clamped on both sides under uniform pressure.
//!
//! Small deflections of a thin plate (Timoshenko; Roark; from memory): deflection at mid-span
//! w = p a⁴ / (384 D), D = E t³ / (12 (1 − ν²)); greatest stress, at the clamps, σ = p a² / (2 t²).
//! An estimate: a roof as thick as its span is stronger than that.

/// Greatest stress in MPa of a strip `span_nm` wide and `thickness_nm` thick under `pressure_pa`.
pub fn clamped_stress_mpa(pressure_pa: f64, span_nm: f64, thickness_nm: f64) -> f64 {
    1e-6 * pressure_pa * (span_nm / thickness_nm).powi(2) / 2.0
}

/// Deflection at mid-span in nm.
pub fn clamped_deflection_nm(
    pressure_pa: f64,
    span_nm: f64,
    thickness_nm: f64,
    youngs_modulus_gpa: f64,
    poisson_ratio: f64,
) -> f64 {
    let modulus_pa = 1e9 * youngs_modulus_gpa / (1.0 - poisson_ratio.powi(2));
    pressure_pa / modulus_pa * span_nm.powi(4) / (32.0 * thickness_nm.powi(3))
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Timoshenko; Roark (from memory): a 1 µm, t 50 nm, E 70 GPa, ν 0.17, p 20 kPa.
    #[test]
    fn a_clamped_strip() {
        assert!((clamped_stress_mpa(20e3, 1000.0, 50.0) - 4.0).abs() < 1e-12);
        let deflection_m = 1e-9 * clamped_deflection_nm(20e3, 1000.0, 50.0, 70.0, 0.17);
        assert!((deflection_m / 6.936e-11 - 1.0).abs() < 1e-4, "{deflection_m}");
    }
}
