//! Units as they are written, and what they are of the units values are kept in.

use crate::quantity::Unit;

/// What a unit measures.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Dimension {
    /// Volts.
    Voltage,
    /// Amperes.
    Current,
    /// Ohms.
    Resistance,
    /// Watts.
    Power,
    /// Volt-amperes.
    ApparentPower,
    /// Metres.
    Length,
    /// Seconds.
    Time,
    /// Degrees Celsius.
    Temperature,
    /// Newton-metres.
    Torque,
    /// A ratio in per cent.
    Ratio,
}

/// A unit as written: what one of it is in the base unit of its dimension (V, A, Ω, W, VA, m, s, °C, N·m, %).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Scale {
    /// What it measures.
    pub dimension: Dimension,
    /// Base units in one.
    pub factor: f64,
    /// Base value of its zero; only temperatures have one.
    pub offset: f64,
}

impl Scale {
    /// The unit values are kept in.
    #[must_use]
    pub fn of(unit: Unit) -> Option<Self> {
        let (dimension, factor) = match unit {
            Unit::Volt => (Dimension::Voltage, 1.0),
            Unit::Ampere => (Dimension::Current, 1.0),
            Unit::Milliampere => (Dimension::Current, 1e-3),
            Unit::Ohm => (Dimension::Resistance, 1.0),
            Unit::Megohm => (Dimension::Resistance, 1e6),
            Unit::Watt => (Dimension::Power, 1.0),
            Unit::VoltAmpere => (Dimension::ApparentPower, 1.0),
            Unit::Metre => (Dimension::Length, 1.0),
            Unit::Second => (Dimension::Time, 1.0),
            Unit::Millisecond => (Dimension::Time, 1e-3),
            Unit::Celsius => (Dimension::Temperature, 1.0),
            Unit::NewtonMetre => (Dimension::Torque, 1.0),
            Unit::Percent => (Dimension::Ratio, 1.0),
            Unit::One => return None,
        };
        Some(Self { dimension, factor, offset: 0.0 })
    }

    /// A value in this unit, converted to another of the same dimension; `None` for another dimension. A difference of
    /// temperatures has no zero to shift.
    #[must_use]
    pub fn convert(self, value: f64, to: Unit, difference: bool) -> Option<f64> {
        let target = Self::of(to)?;
        if target.dimension != self.dimension {
            return None;
        }
        let offset = if difference { 0.0 } else { self.offset };
        // Powers of ten are divided rather than multiplied by an inexact reciprocal, so that 350 mV is 0.35 V to the last bit.
        let ratio = self.factor / target.factor;
        Some(if ratio < 1.0 && (1.0 / ratio).fract() == 0.0 { value / (1.0 / ratio) + offset } else { value * ratio + offset })
    }
}

/// Pound-force inch in newton-metres: 4.4482216152605 N × 0.0254 m, both exact by definition.
const POUND_INCH: f64 = 4.448_221_615_260_5 * 0.0254;

type Word = (&'static str, Dimension, f64);

/// Spellings in lower case.
const WORDS: &[Word] = &[
    ("v", Dimension::Voltage, 1.0),
    ("volt", Dimension::Voltage, 1.0),
    ("volts", Dimension::Voltage, 1.0),
    ("vac", Dimension::Voltage, 1.0),
    ("v ac", Dimension::Voltage, 1.0),
    ("vdc", Dimension::Voltage, 1.0),
    ("v dc", Dimension::Voltage, 1.0),
    ("v rms", Dimension::Voltage, 1.0),
    ("vrms", Dimension::Voltage, 1.0),
    ("volts ac", Dimension::Voltage, 1.0),
    ("kv", Dimension::Voltage, 1e3),
    ("kilovolt", Dimension::Voltage, 1e3),
    ("kilovolts", Dimension::Voltage, 1e3),
    ("millivolt", Dimension::Voltage, 1e-3),
    ("millivolts", Dimension::Voltage, 1e-3),
    ("a", Dimension::Current, 1.0),
    ("amp", Dimension::Current, 1.0),
    ("amps", Dimension::Current, 1.0),
    ("ampere", Dimension::Current, 1.0),
    ("amperes", Dimension::Current, 1.0),
    ("aac", Dimension::Current, 1.0),
    ("a ac", Dimension::Current, 1.0),
    ("amps ac", Dimension::Current, 1.0),
    ("ma", Dimension::Current, 1e-3),
    ("milliamp", Dimension::Current, 1e-3),
    ("milliamps", Dimension::Current, 1e-3),
    ("milliampere", Dimension::Current, 1e-3),
    ("milliamperes", Dimension::Current, 1e-3),
    ("ka", Dimension::Current, 1e3),
    ("\u{3c9}", Dimension::Resistance, 1.0),
    ("ohm", Dimension::Resistance, 1.0),
    ("ohms", Dimension::Resistance, 1.0),
    ("k\u{3c9}", Dimension::Resistance, 1e3),
    ("kohm", Dimension::Resistance, 1e3),
    ("kohms", Dimension::Resistance, 1e3),
    ("kilohm", Dimension::Resistance, 1e3),
    ("kilohms", Dimension::Resistance, 1e3),
    ("mohms", Dimension::Resistance, 1e6),
    ("megohm", Dimension::Resistance, 1e6),
    ("megohms", Dimension::Resistance, 1e6),
    ("meg", Dimension::Resistance, 1e6),
    ("megs", Dimension::Resistance, 1e6),
    ("megaohm", Dimension::Resistance, 1e6),
    ("megaohms", Dimension::Resistance, 1e6),
    ("gohm", Dimension::Resistance, 1e9),
    ("g\u{3c9}", Dimension::Resistance, 1e9),
    ("gigaohm", Dimension::Resistance, 1e9),
    ("milliohm", Dimension::Resistance, 1e-3),
    ("milliohms", Dimension::Resistance, 1e-3),
    ("w", Dimension::Power, 1.0),
    ("watt", Dimension::Power, 1.0),
    ("watts", Dimension::Power, 1.0),
    ("kw", Dimension::Power, 1e3),
    ("kilowatt", Dimension::Power, 1e3),
    ("kilowatts", Dimension::Power, 1e3),
    ("va", Dimension::ApparentPower, 1.0),
    ("kva", Dimension::ApparentPower, 1e3),
    ("volt-amperes", Dimension::ApparentPower, 1.0),
    ("volt amperes", Dimension::ApparentPower, 1.0),
    ("m", Dimension::Length, 1.0),
    ("metre", Dimension::Length, 1.0),
    ("metres", Dimension::Length, 1.0),
    ("meter", Dimension::Length, 1.0),
    ("meters", Dimension::Length, 1.0),
    ("mtr", Dimension::Length, 1.0),
    ("mtrs", Dimension::Length, 1.0),
    ("cm", Dimension::Length, 0.01),
    ("mm", Dimension::Length, 0.001),
    ("km", Dimension::Length, 1e3),
    ("ft", Dimension::Length, 0.3048),
    ("ft.", Dimension::Length, 0.3048),
    ("feet", Dimension::Length, 0.3048),
    ("foot", Dimension::Length, 0.3048),
    ("'", Dimension::Length, 0.3048),
    ("in", Dimension::Length, 0.0254),
    ("in.", Dimension::Length, 0.0254),
    ("inch", Dimension::Length, 0.0254),
    ("inches", Dimension::Length, 0.0254),
    ("\"", Dimension::Length, 0.0254),
    ("''", Dimension::Length, 0.0254),
    ("yd", Dimension::Length, 0.9144),
    ("yds", Dimension::Length, 0.9144),
    ("yard", Dimension::Length, 0.9144),
    ("yards", Dimension::Length, 0.9144),
    ("s", Dimension::Time, 1.0),
    ("sec", Dimension::Time, 1.0),
    ("secs", Dimension::Time, 1.0),
    ("second", Dimension::Time, 1.0),
    ("seconds", Dimension::Time, 1.0),
    ("ms", Dimension::Time, 1e-3),
    ("msec", Dimension::Time, 1e-3),
    ("millisecond", Dimension::Time, 1e-3),
    ("milliseconds", Dimension::Time, 1e-3),
    ("\u{b0}c", Dimension::Temperature, 1.0),
    ("c", Dimension::Temperature, 1.0),
    ("deg c", Dimension::Temperature, 1.0),
    ("degc", Dimension::Temperature, 1.0),
    ("celsius", Dimension::Temperature, 1.0),
    ("degrees c", Dimension::Temperature, 1.0),
    ("k", Dimension::Temperature, 1.0),
    ("\u{2103}", Dimension::Temperature, 1.0),
    ("n\u{b7}m", Dimension::Torque, 1.0),
    ("nm", Dimension::Torque, 1.0),
    ("n.m", Dimension::Torque, 1.0),
    ("n-m", Dimension::Torque, 1.0),
    ("n m", Dimension::Torque, 1.0),
    ("newton metres", Dimension::Torque, 1.0),
    ("newton meters", Dimension::Torque, 1.0),
    ("in-lb", Dimension::Torque, POUND_INCH),
    ("in-lbs", Dimension::Torque, POUND_INCH),
    ("in lb", Dimension::Torque, POUND_INCH),
    ("in lbs", Dimension::Torque, POUND_INCH),
    ("in.-lb", Dimension::Torque, POUND_INCH),
    ("in.lb", Dimension::Torque, POUND_INCH),
    ("in\u{b7}lb", Dimension::Torque, POUND_INCH),
    ("lb-in", Dimension::Torque, POUND_INCH),
    ("lb\u{b7}in", Dimension::Torque, POUND_INCH),
    ("lbf-in", Dimension::Torque, POUND_INCH),
    ("lbf\u{b7}in", Dimension::Torque, POUND_INCH),
    ("in-lbf", Dimension::Torque, POUND_INCH),
    ("inlb", Dimension::Torque, POUND_INCH),
    ("inlbs", Dimension::Torque, POUND_INCH),
    ("inch-pounds", Dimension::Torque, POUND_INCH),
    ("inch pounds", Dimension::Torque, POUND_INCH),
    ("pound-inches", Dimension::Torque, POUND_INCH),
    ("ft-lb", Dimension::Torque, 12.0 * POUND_INCH),
    ("ft-lbs", Dimension::Torque, 12.0 * POUND_INCH),
    ("ft lb", Dimension::Torque, 12.0 * POUND_INCH),
    ("ft lbs", Dimension::Torque, 12.0 * POUND_INCH),
    ("ft\u{b7}lb", Dimension::Torque, 12.0 * POUND_INCH),
    ("ft.lb", Dimension::Torque, 12.0 * POUND_INCH),
    ("lb-ft", Dimension::Torque, 12.0 * POUND_INCH),
    ("lbf\u{b7}ft", Dimension::Torque, 12.0 * POUND_INCH),
    ("lbf-ft", Dimension::Torque, 12.0 * POUND_INCH),
    ("foot-pounds", Dimension::Torque, 12.0 * POUND_INCH),
    ("foot pounds", Dimension::Torque, 12.0 * POUND_INCH),
    ("ftlb", Dimension::Torque, 12.0 * POUND_INCH),
    ("ftlbs", Dimension::Torque, 12.0 * POUND_INCH),
    ("%", Dimension::Ratio, 1.0),
    ("percent", Dimension::Ratio, 1.0),
    ("per cent", Dimension::Ratio, 1.0),
    ("pct", Dimension::Ratio, 1.0),
];

const FAHRENHEIT: &[&str] = &["\u{b0}f", "f", "deg f", "degf", "fahrenheit", "degrees f", "\u{2109}"];

/// A unit by its spelling. Letter case matters only where it tells milli from mega.
#[must_use]
pub fn unit_word(text: &str) -> Option<Scale> {
    let text = text.trim().replace('\u{2126}', "\u{3a9}").replace(['\u{22c5}', '\u{2022}'], "\u{b7}");
    let scale = |dimension, factor| Some(Scale { dimension, factor, offset: 0.0 });
    match text.as_str() {
        "mV" | "mv" | "mVAC" => return scale(Dimension::Voltage, 1e-3),
        "m\u{3a9}" | "mohm" | "mOhm" => return scale(Dimension::Resistance, 1e-3),
        "M\u{3a9}" | "Mohm" | "MOhm" | "MOHM" | "M" => return scale(Dimension::Resistance, 1e6),
        "MV" | "MW" | "MVA" | "MA" => return None,
        _ => {}
    }
    let lower = text.to_lowercase();
    if FAHRENHEIT.contains(&lower.as_str()) {
        return Some(Scale { dimension: Dimension::Temperature, factor: 5.0 / 9.0, offset: -160.0 / 9.0 });
    }
    let &(_, dimension, factor) = WORDS.iter().find(|w| w.0 == lower)?;
    scale(dimension, factor)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Conversion factors: SI prefixes and NIST SP 811 appendix B.8 (foot, inch, pound-force inch, degree Fahrenheit).
    #[test]
    fn units_convert() {
        for (value, unit, to, expected) in [
            (0.4, "kV", Unit::Volt, 400.0),
            (350.0, "mV", Unit::Volt, 0.35),
            (6.0, "mA", Unit::Milliampere, 6.0),
            (0.006, "A", Unit::Milliampere, 6.0),
            (30.0, "ms", Unit::Millisecond, 30.0),
            (0.03, "s", Unit::Millisecond, 30.0),
            (500.0, "k\u{3a9}", Unit::Megohm, 0.5),
            (2.0, "G\u{3a9}", Unit::Megohm, 2000.0),
            (100.0, "ft", Unit::Metre, 30.48),
            (10.0, "in", Unit::Metre, 0.254),
            (212.0, "\u{b0}F", Unit::Celsius, 100.0),
            (32.0, "F", Unit::Celsius, 0.0),
            (1.0, "in-lb", Unit::NewtonMetre, 0.112_984_8),
            (1.0, "ft-lb", Unit::NewtonMetre, 1.355_818),
            (2.2, "m\u{2126}", Unit::Ohm, 0.0022),
        ] {
            let got = unit_word(unit).and_then(|u| u.convert(value, to, false));
            assert!(
                got.is_some_and(|g| (g - expected).abs() <= 1e-6 * expected.abs().max(1e-6)),
                "{value} {unit}: {got:?}, not {expected}"
            );
        }
    }

    #[test]
    fn another_dimension_does_not_convert_and_differences_have_no_zero() {
        assert_eq!(unit_word("A").and_then(|u| u.convert(1.0, Unit::Volt, false)), None);
        assert_eq!(unit_word("\u{b0}F").and_then(|u| u.convert(18.0, Unit::Celsius, true)), Some(10.0));
        assert_eq!(unit_word("widgets"), None);
    }
}
