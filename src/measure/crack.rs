//! Thickness from which a tensile film lets a crack channel through it.
//!
//! Energy release rate G = Z σ² h / E′ with Z = 1.976 for film and substrate of one stiffness,
//! E′ = E/(1 − ν²); a crack runs where G exceeds the fracture energy Γ (Hutchinson and Suo, Adv.
//! Appl. Mech. 29, 63 (1992); Beuth, Int. J. Solids Struct. 29, 1657 (1992)). On a softer
//! substrate Z is larger and the film cracks earlier.

/// Z of a channelling crack without elastic mismatch.
const CHANNELLING: f64 = 1.976;

/// Critical thickness in nm; `None` where the film is not tensile.
pub fn critical_thickness_nm(
    stress_mpa: f64,
    youngs_modulus_gpa: f64,
    poisson_ratio: f64,
    fracture_energy_j_per_m2: f64,
) -> Option<f64> {
    let plane_strain_pa = 1e9 * youngs_modulus_gpa / (1.0 - poisson_ratio.powi(2));
    let stress_pa = 1e6 * stress_mpa;
    (stress_mpa > 0.0).then(|| {
        1e9 * plane_strain_pa * fracture_energy_j_per_m2 / (CHANNELLING * stress_pa.powi(2))
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Hand calculation: E 10 GPa, ν 0, Γ 2 J/m², σ 50 MPa: 1e10 · 2 / (1.976 · 2.5e15) m.
    #[test]
    fn a_soft_tensile_film() {
        let thickness = critical_thickness_nm(50.0, 10.0, 0.0, 2.0).unwrap();
        assert!((thickness - 4048.58).abs() < 0.01, "{thickness}");
        let doubled = critical_thickness_nm(100.0, 10.0, 0.0, 2.0).unwrap();
        assert!((thickness / doubled - 4.0).abs() < 1e-12);
    }

    #[test]
    fn a_film_without_tension_does_not_crack() {
        assert_eq!(critical_thickness_nm(0.0, 10.0, 0.2, 2.0), None);
        assert_eq!(critical_thickness_nm(-150.0, 60.0, 0.17, 5.0), None);
    }
}
