//! Every number that a material or a process carries, one line each: its key, its unit, what
//! can be, and where it lives. Loading, `with`, `spread` and the tables all read this list.

use super::{Arrival, Exponent, Material, Process, Ranged};

/// The unit in which a key carries its number.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Unit {
    /// A plain number, or a share.
    One,
    /// °C.
    Celsius,
    /// nm.
    Nanometre,
    /// Degrees of arc.
    Degree,
    /// Torr.
    Torr,
    /// GPa.
    Gigapascal,
    /// MPa.
    Megapascal,
    /// g/cm³.
    GramPerCubicCentimetre,
    /// J/m².
    JoulePerSquareMetre,
    /// ppm/K.
    PpmPerKelvin,
    /// W/(m K).
    WattPerMetreKelvin,
    /// µΩ cm.
    MicroohmCentimetre,
    /// Pa s.
    PascalSecond,
    /// 1/m².
    PerSquareMetre,
    /// Atomic mass units.
    AtomicMass,
}

impl Unit {
    /// As printed after a number; empty for a plain number.
    pub const fn symbol(self) -> &'static str {
        match self {
            Self::One => "",
            Self::Celsius => "°C",
            Self::Nanometre => "nm",
            Self::Degree => "deg",
            Self::Torr => "Torr",
            Self::Gigapascal => "GPa",
            Self::Megapascal => "MPa",
            Self::GramPerCubicCentimetre => "g/cm³",
            Self::JoulePerSquareMetre => "J/m²",
            Self::PpmPerKelvin => "ppm/K",
            Self::WattPerMetreKelvin => "W/(m K)",
            Self::MicroohmCentimetre => "µΩ cm",
            Self::PascalSecond => "Pa s",
            Self::PerSquareMetre => "1/m²",
            Self::AtomicMass => "u",
        }
    }
}

/// What a number can be.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Bounds {
    /// The least, itself allowed unless `above_low`.
    pub low: f64,
    /// Whether the number must lie above `low`.
    pub above_low: bool,
    /// The greatest, itself allowed unless `below_high`.
    pub high: f64,
    /// Whether the number must lie below `high`.
    pub below_high: bool,
}

impl Bounds {
    /// Any finite number.
    pub const ANY: Self = Self::from_to(f64::NEG_INFINITY, f64::INFINITY);
    /// Above zero.
    pub const POSITIVE: Self = Self::above_to(0.0, f64::INFINITY);
    /// Zero or above.
    pub const NOT_NEGATIVE: Self = Self::from_to(0.0, f64::INFINITY);
    /// A share of one.
    pub const SHARE: Self = Self::from_to(0.0, 1.0);
    /// Not below absolute zero; nothing solid stands above 6000 °C.
    pub const CELSIUS: Self = Self::from_to(-273.15, 6000.0);

    /// From `low` to `high`, both allowed.
    pub const fn from_to(low: f64, high: f64) -> Self {
        Self { low, above_low: false, high, below_high: false }
    }

    /// Above `low`, up to `high`.
    pub const fn above_to(low: f64, high: f64) -> Self {
        Self { low, above_low: true, high, below_high: false }
    }

    /// From `low`, below `high`.
    pub const fn from_below(low: f64, high: f64) -> Self {
        Self { low, above_low: false, high, below_high: true }
    }

    /// Whether a number can be.
    pub fn allow(self, number: f64) -> bool {
        let enough = if self.above_low { number > self.low } else { number >= self.low };
        let at_most = if self.below_high { number < self.high } else { number <= self.high };
        number.is_finite() && enough && at_most
    }

    /// A number moved from one that can be to `to`, stopped at the bound; where the bound itself
    /// cannot be, a hundredth of the way short of it.
    pub fn moved(self, from: f64, to: f64) -> f64 {
        if self.allow(to) {
            return to;
        }
        let bound = to.clamp(self.low, self.high);
        if self.allow(bound) { bound } else { bound + 0.01 * (from - bound) }
    }

    /// What can be, in words: `above 0 and at most 1`.
    pub fn words(self) -> String {
        let low = self
            .low
            .is_finite()
            .then(|| format!("{} {}", if self.above_low { "above" } else { "at least" }, self.low));
        let high = self.high.is_finite().then(|| {
            format!("{} {}", if self.below_high { "below" } else { "at most" }, self.high)
        });
        match (low, high) {
            (Some(low), Some(high)) => format!("{low} and {high}"),
            (Some(only), None) | (None, Some(only)) => only,
            (None, None) => "finite".to_owned(),
        }
    }
}

/// One number of a `T`.
pub struct NumberKey<T: 'static> {
    /// Its key in a library file, unit included.
    pub key: &'static str,
    /// Its key without the unit, as `with` names it.
    pub name: &'static str,
    /// Its unit.
    pub unit: Unit,
    /// What it can be.
    pub bounds: Bounds,
    /// The number; `None` where it is not given.
    pub get: fn(&T) -> Option<Ranged>,
    /// Replaces the number.
    pub set: fn(&mut T, Ranged),
}

macro_rules! optional {
    ($key:ident $name:literal $unit:ident $bounds:expr) => {
        NumberKey {
            key: stringify!($key),
            name: $name,
            unit: Unit::$unit,
            bounds: $bounds,
            get: |of| of.$key,
            set: |of, number| of.$key = Some(number),
        }
    };
}

macro_rules! arrival {
    ($key:ident $name:literal $unit:ident $bounds:expr) => {
        NumberKey {
            key: stringify!($key),
            name: $name,
            unit: Unit::$unit,
            bounds: $bounds,
            get: |of| of.arrival.as_ref().map(|arrival| arrival.$key),
            set: |of, number| {
                of.arrival.get_or_insert(Arrival::NEUTRAL).$key = number;
            },
        }
    };
}

/// The numbers of a material, in the order of the documentation.
pub const MATERIAL_NUMBERS: &[NumberKey<Material>] = &[
    optional!(permittivity "permittivity" One Bounds::from_to(1.0, 1e5)),
    optional!(density_g_per_cm3 "density" GramPerCubicCentimetre Bounds::above_to(0.0, 25.0)),
    optional!(youngs_modulus_gpa "youngs-modulus" Gigapascal Bounds::above_to(0.0, 2000.0)),
    optional!(poisson_ratio "poisson-ratio" One Bounds { low: -1.0, above_low: true, high: 0.5, below_high: false }),
    optional!(stress_mpa "stress" Megapascal Bounds::ANY),
    optional!(fracture_energy_j_per_m2 "fracture-energy" JoulePerSquareMetre Bounds::POSITIVE),
    optional!(strength_mpa "strength" Megapascal Bounds::POSITIVE),
    optional!(expansion_ppm_per_k "expansion" PpmPerKelvin Bounds::ANY),
    optional!(heat_conductivity_w_per_mk "heat-conductivity" WattPerMetreKelvin Bounds::POSITIVE),
    optional!(highest_temperature_c "highest-temperature" Celsius Bounds::CELSIUS),
    optional!(oxidizes_from_c "oxidizes-from" Celsius Bounds::CELSIUS),
    optional!(passes_up_to_nm "passes-up-to" Nanometre Bounds::NOT_NEGATIVE),
    optional!(hermetic_from_nm "hermetic-from" Nanometre Bounds::NOT_NEGATIVE),
    optional!(resistivity_uohm_cm "resistivity" MicroohmCentimetre Bounds::POSITIVE),
    optional!(mean_free_path_nm "mean-free-path" Nanometre Bounds::POSITIVE),
    optional!(grain_reflection "grain-reflection" One Bounds::from_below(0.0, 1.0)),
    optional!(surface_specularity "surface-specularity" One Bounds::SHARE),
    optional!(grain_size_nm "grain-size" Nanometre Bounds::POSITIVE),
];

/// The numbers of a process outside its arrival, in the order of the documentation.
pub const PROCESS_NUMBERS: &[NumberKey<Process>] = &[
    optional!(temperature_c "temperature" Celsius Bounds::CELSIUS),
    optional!(pressure_torr "pressure" Torr Bounds::POSITIVE),
    optional!(molecule_diameter_nm "molecule-diameter" Nanometre Bounds::POSITIVE),
    NumberKey {
        key: "shrinks",
        name: "shrinks",
        unit: Unit::One,
        bounds: Bounds::from_below(0.0, 1.0),
        get: |process| Some(process.shrinks),
        set: |process, number| process.shrinks = number,
    },
    optional!(fills_down_to_nm "fills-down-to" Nanometre Bounds::NOT_NEGATIVE),
    optional!(dose_pa_s "dose" PascalSecond Bounds::POSITIVE),
    optional!(saturation_per_m2 "saturation" PerSquareMetre Bounds::POSITIVE),
    optional!(molecule_mass_u "molecule-mass" AtomicMass Bounds::from_to(1.0, f64::INFINITY)),
];

/// The numbers of a process under `arrival`, in the order of the documentation.
pub const ARRIVAL_NUMBERS: &[NumberKey<Process>] = &[
    arrival!(conformal "conformal" One Bounds::SHARE),
    arrival!(directional "directional" One Bounds::SHARE),
    NumberKey {
        key: "exponent",
        name: "exponent",
        unit: Unit::One,
        bounds: Bounds::NOT_NEGATIVE,
        get: |process| match process.arrival.as_ref()?.exponent {
            Exponent::Cosine(number) => Some(number),
            Exponent::Vertical => None,
        },
        set: |process, number| {
            process.arrival.get_or_insert(Arrival::NEUTRAL).exponent = Exponent::Cosine(number);
        },
    },
    arrival!(tilt_deg "tilt" Degree Bounds::from_below(0.0, 90.0)),
    arrival!(sticking "sticking" One Bounds::above_to(0.0, 1.0)),
];

impl Process {
    /// The number that a `with` names (`sticking`, `temperature`).
    pub fn number_named(name: &str) -> Option<&'static NumberKey<Process>> {
        PROCESS_NUMBERS.iter().chain(ARRIVAL_NUMBERS).find(|number| number.name == name)
    }

    /// Moves the number of a key (`sticking`, `temperature_c`, `rates.SiN`) from one value to
    /// another as far as can be, shares of the arrival within one together; where it came to.
    pub fn move_number(&mut self, key: &str, from: f64, to: f64) -> f64 {
        if let Some((table, name)) = key.split_once('.') {
            let table = if table == "rates" { &mut self.rates } else { &mut self.grows_on };
            let moved = Bounds::NOT_NEGATIVE.moved(from, to);
            table.insert(name.to_owned(), Ranged::exact(moved));
            return moved;
        }
        let mut numbers = PROCESS_NUMBERS.iter().chain(ARRIVAL_NUMBERS);
        let Some(number) = numbers.find(|number| number.key == key) else { return from };
        let mut moved = number.bounds.moved(from, to);
        (number.set)(self, Ranged::exact(moved));
        let shares = |arrival: &Arrival| arrival.conformal.value + arrival.directional.value;
        let excess = self.arrival.as_ref().map_or(0.0, shares) - 1.0;
        if excess > 0.0 && matches!(key, "conformal" | "directional") {
            moved -= excess;
            (number.set)(self, Ranged::exact(moved));
        }
        moved
    }
}
