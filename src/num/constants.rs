//! Constants of nature.

/// Boltzmann's constant, J/K (exact, SI).
pub const BOLTZMANN_J_PER_K: f64 = 1.380_649e-23;

/// Unified atomic mass unit, kg (CODATA 2018).
pub const MASS_UNIT_KG: f64 = 1.660_539_066_60e-27;
