//! The unit symbols of flow files, what kind of quantity each measures, and its factor.

use super::{
    Angle, Capacitance, CapacitancePerLength, Delay, Duration, Length, Pressure, Resistance,
    ResistancePerLength, Share, Stress, Temperature, Voltage,
};

/// What a unit measures.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum UnitKind {
    /// Base nm.
    Length,
    /// Base degree.
    Angle,
    /// Base °C.
    Temperature,
    /// Base s.
    Duration,
    /// Base 1.
    Share,
    /// Base ohm.
    Resistance,
    /// Base aF.
    Capacitance,
    /// Base aF/µm.
    CapacitancePerLength,
    /// Base ohm/µm.
    ResistancePerLength,
    /// Base ps.
    Delay,
    /// Base Pa.
    Pressure,
    /// Base MPa.
    Stress,
    /// Base V.
    Voltage,
}

impl UnitKind {
    /// In words, with its article: `a length`.
    pub const fn words(self) -> &'static str {
        match self {
            Self::Length => "a length",
            Self::Angle => "an angle",
            Self::Temperature => "a temperature",
            Self::Duration => "a time",
            Self::Share => "a percentage",
            Self::Resistance => "a resistance",
            Self::Capacitance => "a capacitance",
            Self::CapacitancePerLength => "a capacitance per length",
            Self::ResistancePerLength => "a resistance per length",
            Self::Delay => "a delay",
            Self::Pressure => "a pressure",
            Self::Stress => "a stress",
            Self::Voltage => "a voltage",
        }
    }

    /// Its symbols as a list for messages: `nm, um or A`.
    pub fn symbols(self) -> String {
        let symbols: Vec<_> =
            Unit::ALL.iter().filter(|unit| unit.kind() == self).map(|unit| unit.symbol()).collect();
        match symbols.as_slice() {
            [rest @ .., last] if !rest.is_empty() => format!("{} or {last}", rest.join(", ")),
            _ => symbols.concat(),
        }
    }
}

macro_rules! units {
    ($($variant:ident $symbol:literal $kind:ident ($number:ident => $base:expr);)+) => {
        /// A unit of the flow language.
        #[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
        pub enum Unit {
            $(
                #[doc = concat!("`", $symbol, "`")]
                $variant,
            )+
        }

        impl Unit {
            /// All units, in the order of the documentation.
            pub const ALL: &[Self] = &[$(Self::$variant,)+];

            /// As written in a flow.
            pub const fn symbol(self) -> &'static str {
                match self { $(Self::$variant => $symbol,)+ }
            }

            /// What it measures.
            pub const fn kind(self) -> UnitKind {
                match self { $(Self::$variant => UnitKind::$kind,)+ }
            }

            /// A difference of so many of this unit, in the base unit of its kind.
            pub const fn difference(self, number: f64) -> f64 {
                match self { $(Self::$variant => { let $number = number; $base })+ }
            }
        }
    };
}

units! {
    Nanometre "nm" Length (n => n);
    Micrometre "um" Length (n => n * 1000.0);
    Angstrom "A" Length (n => n / 10.0);
    Degree "deg" Angle (n => n);
    Celsius "C" Temperature (n => n);
    Kelvin "K" Temperature (n => n);
    Second "s" Duration (n => n);
    Minute "min" Duration (n => n * 60.0);
    Hour "h" Duration (n => n * 3600.0);
    Percent "%" Share (n => n / 100.0);
    Ohm "ohm" Resistance (n => n);
    Kiloohm "kohm" Resistance (n => n * 1000.0);
    Attofarad "aF" Capacitance (n => n);
    Femtofarad "fF" Capacitance (n => n * 1000.0);
    Picofarad "pF" Capacitance (n => n * 1_000_000.0);
    AttofaradPerMicrometre "aF/um" CapacitancePerLength (n => n);
    OhmPerMicrometre "ohm/um" ResistancePerLength (n => n);
    Picosecond "ps" Delay (n => n);
    Nanosecond "ns" Delay (n => n * 1000.0);
    Pascal "Pa" Pressure (n => n);
    Torr "Torr" Pressure (n => Pressure::from_torr(n).pa());
    Millitorr "mTorr" Pressure (n => Pressure::from_mtorr(n).pa());
    Megapascal "MPa" Stress (n => n);
    Gigapascal "GPa" Stress (n => n * 1000.0);
    Millivolt "mV" Voltage (n => n / 1000.0);
    Volt "V" Voltage (n => n);
}

impl Unit {
    /// The unit of a symbol; case matters. `µm` (either mu) and `Å` are read as well.
    pub fn of_symbol(symbol: &str) -> Option<Self> {
        match symbol {
            "\u{b5}m" | "\u{3bc}m" => Some(Self::Micrometre),
            "\u{c5}" | "\u{212b}" => Some(Self::Angstrom),
            _ => Self::ALL.iter().copied().find(|unit| unit.symbol() == symbol),
        }
    }

    /// So many of this unit, in the base unit of its kind.
    pub fn absolute(self, number: f64) -> f64 {
        match self {
            Self::Kelvin => Temperature::from_kelvin(number).celsius(),
            _ => self.difference(number),
        }
    }
}

/// A quantity that an amount with a unit can be read as.
pub trait Dimensioned: Copy + Default {
    /// What its units measure.
    const KIND: UnitKind;

    /// From the base unit of its kind.
    fn from_base(value: f64) -> Self;

    /// In the base unit of its kind.
    fn base(self) -> f64;
}

macro_rules! dimensioned {
    ($($quantity:ident $from:ident $to:ident;)+) => {
        $(impl Dimensioned for $quantity {
            const KIND: UnitKind = UnitKind::$quantity;

            fn from_base(value: f64) -> Self {
                Self::$from(value)
            }

            fn base(self) -> f64 {
                self.$to()
            }
        })+
    };
}

dimensioned! {
    Length from_nm nm;
    Angle from_degrees degrees;
    Temperature from_celsius celsius;
    Duration from_s s;
    Share from_fraction fraction;
    Resistance from_ohm ohm;
    Capacitance from_af af;
    CapacitancePerLength from_af_per_um af_per_um;
    ResistancePerLength from_ohm_per_um ohm_per_um;
    Delay from_ps ps;
    Pressure from_pa pa;
    Stress from_mpa mpa;
    Voltage from_v v;
}
