//! Numbers with their units.

use super::{Reader, bounded, did_you_mean, plain_text};
use crate::diag::Located;
use crate::intake::grid::Value;
use crate::intake::header::Field;
use crate::quantity::parse::{Dimension, NumberError, Scale, Written, feet_and_inches, written};
use crate::quantity::{Measured, Unit};
use crate::wording::Sentence;

/// What a cell is expected to hold.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Expected {
    /// Unit of the value.
    pub unit: Unit,
    /// Below this the number can hardly be true.
    pub least: f64,
    /// Above this the number can hardly be true.
    pub most: f64,
    /// A unit stated beside the row's value, before the header's.
    pub stated: Option<Scale>,
    /// A difference of temperatures, whose unit has no zero to shift.
    pub difference: bool,
}

impl Expected {
    /// A value in a unit, hardly true outside a range.
    pub fn new(unit: Unit, least: f64, most: f64) -> Self {
        Self { unit, least, most, stated: None, difference: false }
    }
}

impl Reader<'_> {
    /// A number that can be not measured, a bound or over range; `None` where the cell could not be used.
    pub fn measured(&mut self, field: Field<'_>, expected: &Expected) -> Option<Measured> {
        if self.broken(field) {
            return None;
        }
        let Written { number, unit, doubt } = self.written(field, expected)?;
        let scale = unit.or(expected.stated).or(field.unit);
        let number = match scale {
            None => number,
            Some(scale) => self.converted(field, number, scale, expected)?,
        };
        if doubt && let Some(value) = number.value() {
            self.warning(field, Sentence::new("intake.doubtful").number("value", value, decimals(value), expected.unit));
        }
        self.plausible(field, number, expected);
        Some(number)
    }

    /// A plain number; bounds are named and left out.
    pub fn number(&mut self, field: Field<'_>, expected: &Expected) -> Option<Located<f64>> {
        match self.measured(field, expected)? {
            Measured::Value(value) => Some(Located::new(value, field.cell())),
            Measured::NotMeasured => None,
            Measured::AtMost(_) | Measured::OverRange(_) => {
                self.error(field, Sentence::new("intake.bound-not-allowed"));
                None
            }
        }
    }

    fn written(&mut self, field: Field<'_>, expected: &Expected) -> Option<Written> {
        let plain = |value: f64| Written { number: Measured::Value(value), unit: None, doubt: false };
        match field.value {
            Value::Number(n) if n.is_finite() => Some(plain(*n)),
            Value::Text(text) => {
                if expected.unit == Unit::Metre
                    && let Some(feet) = feet_and_inches(text)
                {
                    let foot = Scale { dimension: Dimension::Length, factor: crate::quantity::Metres::PER_FOOT, offset: 0.0 };
                    return Some(Written { unit: Some(foot), ..plain(feet) });
                }
                written(text).map_err(|error| self.not_a_number(field, error, expected)).ok()
            }
            Value::DateTime(_) => {
                self.error(field, Sentence::new("intake.date-not-number").with("unit", unit_name(expected.unit)));
                None
            }
            _ => {
                self.not_a_number(field, NumberError::NotANumber, expected);
                None
            }
        }
    }

    fn not_a_number(&mut self, field: Field<'_>, error: NumberError, expected: &Expected) {
        let unit = unit_name(expected.unit);
        match error {
            NumberError::NotANumber => {
                let empty_hint = plain_text(field.value).chars().any(char::is_alphabetic);
                self.error(field, Sentence::new("intake.not-a-number").with("unit", unit)).hint =
                    empty_hint.then(|| Sentence::new("intake.not-a-number-hint"));
            }
            NumberError::Letters { likely } => {
                self.error(field, Sentence::new("intake.letters")).hint = Some(did_you_mean(&likely));
            }
            NumberError::TwoWays { decimal, grouped } => {
                let message = Sentence::new("intake.two-ways").with("one", decimal.to_string()).with("other", grouped.to_string());
                self.error(field, message).hint = Some(Sentence::new("intake.two-ways-hint"));
            }
            NumberError::Several => {
                self.error(field, Sentence::new("intake.several")).hint = Some(Sentence::new("intake.several-hint"));
            }
            NumberError::Words { rest } => {
                self.error(field, Sentence::new("intake.words-behind").with("rest", bounded(&rest)).with("unit", unit));
            }
        }
    }

    fn converted(&mut self, field: Field<'_>, number: Measured, scale: Scale, expected: &Expected) -> Option<Measured> {
        let scale = as_expected(scale, expected.unit);
        let convert = |value: f64| scale.convert(value, expected.unit, expected.difference);
        let converted = match number {
            Measured::NotMeasured => Some(Measured::NotMeasured),
            Measured::Value(v) => convert(v).map(Measured::Value),
            Measured::AtMost(v) => convert(v).map(Measured::AtMost),
            Measured::OverRange(None) => Some(Measured::OverRange(None)),
            Measured::OverRange(Some(v)) => convert(v).map(|v| Measured::OverRange(Some(v))),
        };
        if converted.is_none() {
            self.error(field, Sentence::new("intake.other-unit").with("unit", unit_name(expected.unit)));
        }
        converted
    }

    /// Says of a number that it can hardly be true; it is kept as it stands.
    fn plausible(&mut self, field: Field<'_>, number: Measured, expected: &Expected) {
        let (Measured::Value(v) | Measured::AtMost(v)) = number else { return };
        if !(expected.least..=expected.most).contains(&v) {
            let message = Sentence::new("intake.hardly-true").number("value", v, decimals(v), expected.unit);
            let message = message.number("least", expected.least, decimals(expected.least), expected.unit);
            self.warning(field, message.number("most", expected.most, decimals(expected.most), expected.unit)).hint =
                Some(Sentence::new("intake.hardly-true-hint"));
        }
    }
}

/// Volt-amperes stand for watts where watts are expected: of a load's rating the difference is below what the list can be
/// trusted for.
fn as_expected(scale: Scale, unit: Unit) -> Scale {
    match (scale.dimension, unit) {
        (Dimension::ApparentPower, Unit::Watt) => Scale { dimension: Dimension::Power, ..scale },
        _ => scale,
    }
}

/// The phrase for a unit in a sentence: `volts`.
fn unit_name(unit: Unit) -> Sentence {
    Sentence::new(match unit {
        Unit::Volt => "intake.unit-volts",
        Unit::Ampere => "intake.unit-amperes",
        Unit::Milliampere => "intake.unit-milliamperes",
        Unit::Ohm => "intake.unit-ohms",
        Unit::Megohm => "intake.unit-megohms",
        Unit::Watt => "intake.unit-watts",
        Unit::VoltAmpere => "intake.unit-volt-amperes",
        Unit::Metre => "intake.unit-length",
        Unit::Second => "intake.unit-seconds",
        Unit::Millisecond => "intake.unit-milliseconds",
        Unit::Celsius => "intake.unit-degrees",
        Unit::NewtonMetre => "intake.unit-torque",
        Unit::Percent => "intake.unit-percent",
        Unit::One => "intake.unit-none",
    })
}

/// Digits a number was likely written with: enough to show it, at most six.
pub(super) fn decimals(value: f64) -> u8 {
    let text = value.to_string();
    let digits = text.split_once('.').map_or(0, |(_, fraction)| fraction.len());
    u8::try_from(digits.min(6)).unwrap_or(0)
}
