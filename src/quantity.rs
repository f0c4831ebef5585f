//! Physical quantities as types, and the values a field sheet can hold.
//!
//! A voltage is [`Volts`], never a bare number; arithmetic is defined where it has a meaning (`Volts / Amperes` is [`Ohms`]).
//! "Not measured", "over range" and "0" are different values: see [`Measured`]. Parsing text and formatting numbers both live
//! below this module.

pub mod math;
pub mod parse;

use std::fmt;
use std::ops::{Add, Div, Mul, Neg, Sub};

macro_rules! quantities {
    ($($(#[$doc:meta])* $name:ident, $unit:expr;)*) => {$(
        $(#[$doc])*
        #[derive(Clone, Copy, Debug, Default, PartialEq, PartialOrd)]
        pub struct $name(pub f64);
        impl $name {
            /// The unit its number is in.
            pub const UNIT: Unit = $unit;
            /// Magnitude.
            #[must_use]
            pub fn abs(self) -> Self { Self(self.0.abs()) }
        }
        impl Add for $name { type Output = Self; fn add(self, o: Self) -> Self { Self(self.0 + o.0) } }
        impl Sub for $name { type Output = Self; fn sub(self, o: Self) -> Self { Self(self.0 - o.0) } }
        impl Neg for $name { type Output = Self; fn neg(self) -> Self { Self(-self.0) } }
        impl Mul<f64> for $name { type Output = Self; fn mul(self, k: f64) -> Self { Self(self.0 * k) } }
        impl Div<f64> for $name { type Output = Self; fn div(self, k: f64) -> Self { Self(self.0 / k) } }
        impl Div for $name { type Output = f64; fn div(self, o: Self) -> f64 { self.0 / o.0 } }
        impl std::iter::Sum for $name { fn sum<I: Iterator<Item = Self>>(i: I) -> Self { Self(i.map(|x| x.0).sum()) } }
    )*};
}

quantities! {
    /// Electric potential difference, RMS, in volts.
    Volts, Unit::Volt;
    /// Electric current, RMS, in amperes.
    Amperes, Unit::Ampere;
    /// Resistance or impedance magnitude in ohms.
    Ohms, Unit::Ohm;
    /// Active power in watts.
    Watts, Unit::Watt;
    /// Apparent power in volt-amperes.
    VoltAmperes, Unit::VoltAmpere;
    /// Length in metres.
    Metres, Unit::Metre;
    /// Temperature or temperature difference in degrees Celsius.
    Celsius, Unit::Celsius;
    /// Time in seconds.
    Seconds, Unit::Second;
}

macro_rules! products {
    ($($a:ty, $b:ty => $c:ident;)*) => {$(
        impl Mul<$b> for $a { type Output = $c; fn mul(self, o: $b) -> $c { $c(self.0 * o.0) } }
    )*};
}
macro_rules! quotients {
    ($($a:ty, $b:ty => $c:ident;)*) => {$(
        impl Div<$b> for $a { type Output = $c; fn div(self, o: $b) -> $c { $c(self.0 / o.0) } }
    )*};
}
products! { Amperes, Ohms => Volts; Ohms, Amperes => Volts; Volts, Amperes => VoltAmperes; Amperes, Volts => VoltAmperes; }
quotients! { Volts, Amperes => Ohms; Volts, Ohms => Amperes; VoltAmperes, Volts => Amperes; Watts, Volts => Amperes; }

impl Metres {
    /// Metres in one international foot, exact by definition.
    pub const PER_FOOT: f64 = 0.3048;

    /// From a length in feet.
    #[must_use]
    pub fn from_feet(feet: f64) -> Self {
        Self(feet * Self::PER_FOOT)
    }

    /// The same length in feet.
    #[must_use]
    pub fn feet(self) -> f64 {
        self.0 / Self::PER_FOOT
    }
}

/// The units values are kept and shown in. Input in other units (kV, ft, °F) is converted when it is read.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Unit {
    /// Volt.
    Volt,
    /// Ampere.
    Ampere,
    /// Milliampere (residual currents).
    Milliampere,
    /// Ohm.
    Ohm,
    /// Megohm (insulation resistance).
    Megohm,
    /// Watt.
    Watt,
    /// Volt-ampere.
    VoltAmpere,
    /// Metre.
    Metre,
    /// Second.
    Second,
    /// Millisecond (trip times).
    Millisecond,
    /// Degree Celsius, also for differences.
    Celsius,
    /// Newton-metre (torque).
    NewtonMetre,
    /// Per cent.
    Percent,
    /// A bare number.
    One,
}

impl Unit {
    /// Its symbol as printed: `V`, `Ω`, `N·m`; empty for a bare number.
    #[must_use]
    pub fn symbol(self) -> &'static str {
        match self {
            Self::Volt => "V",
            Self::Ampere => "A",
            Self::Milliampere => "mA",
            Self::Ohm => "Ω",
            Self::Megohm => "MΩ",
            Self::Watt => "W",
            Self::VoltAmpere => "VA",
            Self::Metre => "m",
            Self::Second => "s",
            Self::Millisecond => "ms",
            Self::Celsius => "°C",
            Self::NewtonMetre => "N·m",
            Self::Percent => "%",
            Self::One => "",
        }
    }
}

impl fmt::Display for Unit {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.symbol())
    }
}

/// What a cell for a number can say. Only [`Measured::Value`] enters arithmetic as it is.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Measured {
    /// Empty, `n/a`, `-`: nobody measured it. Not zero.
    NotMeasured,
    /// A number in the quantity's own unit.
    Value(f64),
    /// The instrument showed over range; with the range where it was written (`>999`, `OL (600 V)`).
    OverRange(Option<f64>),
    /// An upper bound (`<0.5`).
    AtMost(f64),
}

impl Measured {
    /// The number, where one was measured.
    #[must_use]
    pub fn value(self) -> Option<f64> {
        match self {
            Self::Value(v) => Some(v),
            _ => None,
        }
    }
}
