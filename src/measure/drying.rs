//! How far two free-standing lines bend together while a liquid dries between them.
//!
//! A liquid of surface tension γ between walls s apart pulls with 2 γ cos θ / s; a cantilever of
//! height H and width w under that pressure bends at its top by 3 γ cos θ H⁴ / (E s w³) (Tanaka,
//! Morigami, Atoda, Jpn. J. Appl. Phys. 32, 6059 (1993), from memory; beam theory). The lines are
//! taken as one solid of one modulus, clamped at the bottom.

/// A free-standing line beside a space.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct FreeLine {
    /// Height that stands free, nm.
    pub height_nm: f64,
    /// Width, nm.
    pub width_nm: f64,
    /// Space that the liquid fills, nm.
    pub space_nm: f64,
    /// Young's modulus, GPa.
    pub youngs_modulus_gpa: f64,
}

/// Deflection at the top in nm, for a surface tension in N/m and a contact angle.
pub fn drying_deflection_nm(line: &FreeLine, tension_n_per_m: f64, contact_angle_rad: f64) -> f64 {
    let FreeLine { height_nm, width_nm, space_nm, youngs_modulus_gpa } = *line;
    // N/m over GPa is nm; lengths to the fourth power cancel.
    3.0 * tension_n_per_m * contact_angle_rad.cos() * height_nm.powi(4)
        / (youngs_modulus_gpa * space_nm * width_nm.powi(3))
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Water (0.072 N/m) between lines of 10 GPa, H 200, w 20, s 20 nm, by a cantilever under
    /// uniform load: q H⁴ / (8 E I), q = 2 γ / s, I = w³ / 12 (beam theory).
    #[test]
    fn a_cantilever_under_capillary_pressure() {
        let line =
            FreeLine { height_nm: 200.0, width_nm: 20.0, space_nm: 20.0, youngs_modulus_gpa: 10.0 };
        let load_pa = 2.0 * 0.072 / 20e-9;
        let inertia_m3 = 20e-9_f64.powi(3) / 12.0;
        let beam_m = load_pa * 200e-9_f64.powi(4) / (8.0 * 10e9 * inertia_m3);
        let ours = drying_deflection_nm(&line, 0.072, 0.0);
        assert!((ours / (1e9 * beam_m) - 1.0).abs() < 1e-12, "{ours}");
        let square = drying_deflection_nm(&line, 0.072, std::f64::consts::FRAC_PI_2);
        assert!(square.abs() < 1e-12);
    }
}
