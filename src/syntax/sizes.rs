//! How much a flow file may hold, and how large or small its numbers may be.

/// Longest text, in bytes: 1 MiB.
pub const MAX_BYTES: usize = 1 << 20;
/// Most statements, section words included.
pub const MAX_STATEMENTS: usize = 10_000;
/// Most sites: spaces of `lines` and of all rows together.
pub const MAX_SITES: usize = 64;
/// Most splits.
pub const MAX_SPLITS: usize = 100;
/// Smallest drawn length, in nm.
pub const MIN_LENGTH_NM: f64 = 0.01;
/// Largest drawn length, in nm: 100 um.
pub const MAX_LENGTH_NM: f64 = 100_000.0;
/// Largest net length, in nm: 100 mm.
pub const MAX_NET_LENGTH_NM: f64 = 100_000_000.0;
/// Steepest taper either way, in degrees.
pub const MAX_TAPER_DEG: f64 = 45.0;
/// Highest temperature, in °C.
pub const MAX_TEMPERATURE_C: f64 = 2000.0;
/// Longest time of a step, in s: 1000 h.
pub const MAX_TIME_S: f64 = 3_600_000.0;
/// Largest driver resistance, in ohm: 1000 kohm.
pub const MAX_RESISTANCE_OHM: f64 = 1e6;
/// Largest load, in aF: 1000 pF.
pub const MAX_LOAD_AF: f64 = 1e9;
/// Largest overetch of an `etch … until`, as a fraction of the time to the stop: 1000 %.
pub const MAX_OVERETCH: f64 = 10.0;
