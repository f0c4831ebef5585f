//! Names of circuits, locations and instruments, and times of day.

use super::date::{serial_date, time_of_day};
use super::{Reader, plain_text};
use crate::diag::Located;
use crate::intake::grid::Value;
use crate::intake::header::Field;
use crate::visit::Date;
use crate::wording::Sentence;

impl Reader<'_> {
    /// The name of a circuit or a location. A spreadsheet that took `1/3` for a date is told apart and named.
    pub fn name(&mut self, field: Field<'_>) -> Option<Located<String>> {
        if let Value::DateTime(serial) = field.value
            && let Some(date) = serial_date(*serial)
        {
            let likely = circuit_name(date);
            self.read_from_date(field, &likely);
            return Some(Located::new(likely, field.cell()));
        }
        self.text(field)
    }

    /// Says what was read of an entry that the spreadsheet took for a date.
    pub fn read_from_date(&mut self, field: Field<'_>, likely: &str) {
        self.warning(field, Sentence::new("intake.made-a-date").with("likely", likely)).hint =
            Some(Sentence::new("intake.made-a-date-hint"));
    }
}

/// What was typed where a spreadsheet made a date of a circuit's name: the poles upwards, two or three of them.
pub(super) fn circuit_name(date: Date) -> String {
    let (a, b) = (date.month.min(date.day), date.month.max(date.day));
    let third = date.year.rem_euclid(100);
    if i16::from(b) + 2 == third && a + 2 == b { format!("{a}/{b}/{third}") } else { format!("{a}/{b}") }
}

/// Poles that a spreadsheet took for a date, as they were written.
pub(crate) fn poles_as_date(value: &Value) -> Option<String> {
    match value {
        Value::DateTime(serial) => serial_date(*serial).map(circuit_name),
        _ => None,
    }
}

/// A gauge or a rating with a number of conductors or poles that a spreadsheet took for a date: `12/2`, `20/1`.
pub(crate) fn larger_first(value: &Value) -> Option<String> {
    let Value::DateTime(serial) = value else { return None };
    serial_date(*serial).map(|date| format!("{}/{}", date.month.max(date.day), date.month.min(date.day)))
}

/// A time as written; of a time of the spreadsheet, hours and minutes.
pub(crate) fn written_time(field: Field<'_>) -> Option<Located<String>> {
    let text = match field.value {
        Value::DateTime(serial) if serial.is_finite() => time_of_day(*serial),
        Value::Number(n) if (0.0..1.0).contains(n) => time_of_day(*n),
        value => plain_text(value),
    };
    (!text.is_empty()).then(|| Located::new(text, field.cell()))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn dates_that_were_circuits_are_named_by_their_poles_upwards() {
        for (year, month, day, name) in [
            (2026, 1, 3, "1/3"),
            (2026, 3, 1, "1/3"),
            (2026, 12, 14, "12/14"),
            (2026, 7, 5, "5/7"),
            (2006, 2, 4, "2/4/6"),
            (2005, 3, 1, "1/3/5"),
        ] {
            assert_eq!(circuit_name(Date { year, month, day }), name);
        }
    }
}
