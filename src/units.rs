//! Quantities as types: a private number in one base unit, one constructor a unit.

mod symbol;

use serde::{Deserialize, Serialize};

pub use symbol::{Dimensioned, Unit, UnitKind};

macro_rules! quantity {
    ($(#[$doc:meta])* $name:ident { $($(#[$unit_doc:meta])* $from:ident / $to:ident = $factor:expr;)+ }) => {
        $(#[$doc])*
        #[derive(Debug, Clone, Copy, PartialEq, PartialOrd, Default, Serialize, Deserialize)]
        pub struct $name(f64);

        impl $name {
            $(
                $(#[$unit_doc])*
                pub const fn $from(value: f64) -> Self {
                    Self(value * $factor)
                }

                $(#[$unit_doc])*
                pub const fn $to(self) -> f64 {
                    self.0 / $factor
                }
            )+
        }

        impl std::ops::Add for $name {
            type Output = Self;
            fn add(self, other: Self) -> Self {
                Self(self.0 + other.0)
            }
        }

        impl std::ops::Sub for $name {
            type Output = Self;
            fn sub(self, other: Self) -> Self {
                Self(self.0 - other.0)
            }
        }

        impl std::ops::Mul<f64> for $name {
            type Output = Self;
            fn mul(self, factor: f64) -> Self {
                Self(self.0 * factor)
            }
        }

        impl std::ops::Neg for $name {
            type Output = Self;
            fn neg(self) -> Self {
                Self(-self.0)
            }
        }
    };
}

quantity! {
    /// A length.
    Length {
        /// In nanometres.
        from_nm / nm = 1.0;
        /// In ångströms.
        from_angstrom / angstrom = 0.1;
        /// In micrometres.
        from_um / um = 1000.0;
    }
}
quantity! {
    /// A plane angle.
    Angle {
        /// In degrees.
        from_degrees / degrees = 1.0;
    }
}
quantity! {
    /// A share, or a percentage.
    Share {
        /// As a fraction of one.
        from_fraction / fraction = 1.0;
        /// In percent.
        from_percent / percent = 0.01;
    }
}
quantity! {
    /// A duration.
    Duration {
        /// In seconds.
        from_s / s = 1.0;
        /// In minutes.
        from_min / min = 60.0;
        /// In hours.
        from_h / h = 3600.0;
    }
}
quantity! {
    /// A resistance.
    Resistance {
        /// In ohms.
        from_ohm / ohm = 1.0;
        /// In kiloohms.
        from_kohm / kohm = 1000.0;
    }
}
quantity! {
    /// A capacitance.
    Capacitance {
        /// In attofarads.
        from_af / af = 1.0;
        /// In femtofarads.
        from_ff / ff = 1000.0;
        /// In picofarads.
        from_pf / pf = 1_000_000.0;
    }
}
quantity! {
    /// A capacitance per length of line.
    CapacitancePerLength {
        /// In attofarads per micrometre.
        from_af_per_um / af_per_um = 1.0;
    }
}
quantity! {
    /// A resistance per length of line.
    ResistancePerLength {
        /// In ohms per micrometre.
        from_ohm_per_um / ohm_per_um = 1.0;
    }
}
quantity! {
    /// A time of signal propagation.
    Delay {
        /// In picoseconds.
        from_ps / ps = 1.0;
        /// In nanoseconds.
        from_ns / ns = 1000.0;
    }
}
quantity! {
    /// A gas pressure.
    Pressure {
        /// In pascals.
        from_pa / pa = 1.0;
        /// In torr.
        from_torr / torr = 101_325.0 / 760.0;
        /// In millitorr.
        from_mtorr / mtorr = 0.101_325 / 0.76;
    }
}
quantity! {
    /// A mechanical stress or stiffness, tensile positive.
    Stress {
        /// In megapascals.
        from_mpa / mpa = 1.0;
        /// In gigapascals.
        from_gpa / gpa = 1000.0;
    }
}
quantity! {
    /// A voltage.
    Voltage {
        /// In volts.
        from_v / v = 1.0;
        /// In millivolts.
        from_mv / mv = 0.001;
    }
}

/// Zero of the Celsius scale, in kelvin.
const ZERO_CELSIUS_K: f64 = 273.15;

/// A temperature, which has two scales of different zero.
#[derive(Debug, Clone, Copy, PartialEq, PartialOrd, Default, Serialize, Deserialize)]
pub struct Temperature(f64);

impl Temperature {
    /// In degrees Celsius.
    pub const fn from_celsius(value: f64) -> Self {
        Self(value)
    }

    /// In kelvin.
    pub const fn from_kelvin(value: f64) -> Self {
        Self(value - ZERO_CELSIUS_K)
    }

    /// In degrees Celsius.
    pub const fn celsius(self) -> f64 {
        self.0
    }

    /// In kelvin.
    pub const fn kelvin(self) -> f64 {
        self.0 + ZERO_CELSIUS_K
    }
}

/// An amount with its tolerance: three standard deviations of a normal distribution.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Amount<T> {
    /// The nominal value.
    pub nominal: T,
    /// Three standard deviations, absolute, same unit; zero when none was given.
    pub three_sigma: T,
}

impl<T: Default> Amount<T> {
    /// An amount without tolerance.
    pub fn exact(nominal: T) -> Self {
        Self { nominal, three_sigma: T::default() }
    }
}
