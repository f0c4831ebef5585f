//! Dates and times: serial numbers of the spreadsheet, and the ways people write a date.

use super::{Reader, did_you_mean, plain_text};
use crate::diag::Located;
use crate::intake::grid::Value;
use crate::intake::header::Field;
use crate::visit::Date;
use crate::wording::Sentence;

/// Serial numbers of the years 1990 to 2100: what a bare number in a column of dates can mean.
const SERIALS: std::ops::Range<f64> = 32_874.0..73_415.0;
/// Years a date of a visit, a calibration or an issue can have.
const YEARS: std::ops::RangeInclusive<i16> = 1990..=2100;

/// Why a text is no date.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum DateError {
    /// Nothing like one.
    NotADate,
    /// Day and month can be either way.
    TwoWays(Date, Date),
    /// A date with something beside it, or with a year that can't be.
    Nearly(Date),
}

impl Reader<'_> {
    /// A date.
    pub fn date(&mut self, field: Field<'_>) -> Option<Located<Date>> {
        if self.broken(field) {
            return None;
        }
        let read = match field.value {
            Value::DateTime(serial) => serial_date(*serial).ok_or(DateError::NotADate),
            Value::Number(n) if SERIALS.contains(n) => serial_date(*n).ok_or(DateError::NotADate),
            Value::Text(text) if crate::quantity::parse::not_measured(text) => return None,
            value => read(&plain_text(value)),
        };
        let error = match read {
            Ok(date) if YEARS.contains(&date.year) => return Some(Located::new(date, field.cell())),
            Ok(date) => DateError::Nearly(date),
            Err(error) => error,
        };
        match error {
            DateError::TwoWays(a, b) => {
                let message = Sentence::new("intake.date-two-ways").with("one", a.to_string()).with("other", b.to_string());
                self.error(field, message).hint = Some(Sentence::new("intake.date-hint"));
            }
            DateError::Nearly(date) if YEARS.contains(&date.year) => {
                self.error(field, Sentence::new("intake.not-a-date")).hint = Some(did_you_mean(&date.to_string()));
            }
            DateError::Nearly(_) | DateError::NotADate => {
                self.error(field, Sentence::new("intake.not-a-date")).hint = Some(Sentence::new("intake.date-hint"));
            }
        }
        None
    }
}

/// The day of a serial number of the 1900 date system. Its day 60, 29 February 1900, never was.
pub(crate) fn serial_date(serial: f64) -> Option<Date> {
    if !(1.0..2_958_466.0).contains(&serial) {
        return None;
    }
    #[allow(clippy::cast_possible_truncation)] // bounded above
    let days = serial.floor() as i64;
    let days = if days < 60 { days + 1 } else { days };
    let epoch = jiff::civil::date(1899, 12, 30);
    let day = epoch.checked_add(jiff::Span::new().try_days(days).ok()?).ok()?;
    Some(Date { year: day.year(), month: day.month(), day: day.day() })
}

/// A date or time of the spreadsheet as ISO 8601 writes it: the day, the time of day, or both.
pub(super) fn written(serial: f64) -> String {
    let time = time_of_day(serial);
    match (serial_date(serial), time.as_str()) {
        (Some(date), "00:00") => date.to_string(),
        (Some(date), time) => format!("{date} {time}"),
        (None, time) => time.to_owned(),
    }
}

/// Hours and minutes of a serial number, with seconds where there are some.
pub(super) fn time_of_day(serial: f64) -> String {
    #[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss)] // 0 to 86 400
    let seconds = (serial.rem_euclid(1.0) * 86_400.0).round() as u32 % 86_400;
    let (h, m, s) = (seconds / 3600, seconds / 60 % 60, seconds % 60);
    if s == 0 { format!("{h:02}:{m:02}") } else { format!("{h:02}:{m:02}:{s:02}") }
}

/// Reads a date as people write it.
pub(super) fn read(text: &str) -> Result<Date, DateError> {
    let text = text.trim().trim_end_matches(['.', ',']);
    let bare = text.trim_matches(|c: char| "?~*() ".contains(c));
    let result = whole(bare).or_else(|error| without_rest(bare).ok_or(error));
    match result {
        Ok(date) if bare.len() < text.len() => Err(DateError::Nearly(date)),
        other => other,
    }
}

/// A date with the time of day or the day of the week beside it.
fn without_rest(text: &str) -> Option<Date> {
    let time = |s: &str| s.contains(':') && s.chars().all(|c| c.is_ascii_digit() || ":.apmAPMTZ ".contains(c));
    let weekday = |s: &str| {
        let s = s.trim_end_matches([',', '.']).to_lowercase();
        ["mon", "tue", "wed", "thu", "fri", "sat", "sun"].iter().any(|d| s.starts_with(d)) && s.chars().all(char::is_alphabetic)
    };
    if let Some((day, rest)) = text.split_once(['T', ' '])
        && time(rest)
    {
        return whole(day).ok();
    }
    let (first, rest) = text.split_once(' ')?;
    weekday(first).then(|| whole(rest).ok()).flatten()
}

fn whole(text: &str) -> Result<Date, DateError> {
    let is_break = |c: char| matches!(c, '-' | '/' | '.' | ' ' | ',' | '\u{2010}'..='\u{2015}');
    let parts: Vec<&str> = text.split(is_break).filter(|p| !p.is_empty()).collect();
    if let [digits] = parts[..]
        && digits.len() == 8
        && digits.bytes().all(|b| b.is_ascii_digit())
    {
        return ymd(number(&digits[..4]), number(&digits[4..6]), number(&digits[6..])).ok_or(DateError::NotADate);
    }
    let &[a, b, c] = &parts[..] else { return Err(DateError::NotADate) };
    match (month_name(a), month_name(b)) {
        (Some(month), _) => return named(month, b, c),
        (_, Some(month)) if a.len() == 4 => return named(month, c, a),
        (_, Some(month)) => return named(month, a, c),
        _ => {}
    }
    let (x, y, z) = (number(a), number(b), number(c));
    if a.len() == 4 {
        return ymd(x, y, z).ok_or(DateError::NotADate);
    }
    let year = year_of(c, z);
    let (day_first, month_first) = (ymd(year, y, x), ymd(year, x, y));
    // With full stops the day comes first wherever that is written.
    if text.contains('.') {
        return day_first.ok_or(DateError::NotADate);
    }
    let two_digits_first = (text.contains('-') && c.len() == 2).then(|| ymd(x.map(|v| 2000 + v), y, z)).flatten();
    let mut readings: Vec<Date> = [month_first, day_first, two_digits_first].into_iter().flatten().collect();
    readings.dedup();
    match readings[..] {
        [] => Err(DateError::NotADate),
        [date] => Ok(date),
        [first, second, ..] => Err(DateError::TwoWays(first, second)),
    }
}

fn named(month: i16, day: &str, year: &str) -> Result<Date, DateError> {
    let day = day.trim_end_matches(|c: char| c.is_ascii_alphabetic());
    ymd(year_of(year, number(year)), Some(month), number(day)).ok_or(DateError::NotADate)
}

fn number(text: &str) -> Option<i16> {
    (text.len() <= 4 && text.bytes().all(|b| b.is_ascii_digit())).then(|| text.parse().ok()).flatten()
}

/// A year of two digits is one of this century.
fn year_of(text: &str, year: Option<i16>) -> Option<i16> {
    match text.len() {
        4 => year,
        2 => year.map(|y| 2000 + y),
        _ => None,
    }
}

fn ymd(year: Option<i16>, month: Option<i16>, day: Option<i16>) -> Option<Date> {
    let (year, month, day) = (year?, i8::try_from(month?).ok()?, i8::try_from(day?).ok()?);
    jiff::civil::Date::new(year, month, day).ok().map(|_| Date { year, month, day })
}

const MONTHS: [&str; 12] =
    ["january", "february", "march", "april", "may", "june", "july", "august", "september", "october", "november", "december"];

fn month_name(text: &str) -> Option<i16> {
    let text = text.to_lowercase();
    let fits = |m: &&str| text.len() >= 3 && (m.starts_with(&text) || (text == "sept" && m.starts_with("sep")));
    (1..).zip(MONTHS.iter()).find(|(_, m)| fits(m)).map(|(n, _)| n)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn dates_are_read_as_they_are_written() {
        for text in [
            "2026-09-14",
            "2026/09/14",
            "2026.09.14",
            "2026-9-14",
            "20260914",
            "14.09.2026",
            "14.9.26",
            "14.09.26",
            "9/14/2026",
            "14/9/2026",
            "9/14/26",
            "14-9-2026",
            "14 Sep 2026",
            "14 September 2026",
            "Sept. 14, 2026",
            "September 14th, 2026",
            "14-Sep-26",
            "14-Sep-2026",
            "2026-Sep-14",
            "Sep 14 2026",
            "2026-09-14 10:30",
            "2026-09-14T10:30:00Z",
            "Monday, 14 September 2026",
            "Mon 14 Sep 2026",
        ] {
            assert_eq!(read(text), Ok(Date { year: 2026, month: 9, day: 14 }), "{text}");
        }
        assert_eq!(read("5/5/2026"), Ok(Date { year: 2026, month: 5, day: 5 }));
    }

    #[test]
    fn what_reads_two_ways_or_is_none_is_said() {
        let date = |year, month, day| Date { year, month, day };
        assert_eq!(read("3/4/2026"), Err(DateError::TwoWays(date(2026, 3, 4), date(2026, 4, 3))));
        assert_eq!(read("03-04-2026"), Err(DateError::TwoWays(date(2026, 3, 4), date(2026, 4, 3))));
        assert!(matches!(read("26-09-14"), Err(DateError::TwoWays(..))));
        assert_eq!(read("14.09.26?"), Err(DateError::Nearly(date(2026, 9, 14))));
        for text in
            ["", "today", "2026", "2026-13-01", "30 Feb 2026", "31.11.2026", "9/2026", "Sep 2026", "1/3", "14.09.026", "a/b/c", "99/99/99"]
        {
            assert_eq!(read(text), Err(DateError::NotADate), "{text}");
        }
    }

    /// Serial numbers as spreadsheets define them (ISO/IEC 29500-1, 18.17.4.1: 1900 date system).
    #[test]
    fn serial_numbers_are_days() {
        for (serial, expected) in
            [(1.0, "1900-01-01"), (59.0, "1900-02-28"), (61.0, "1900-03-01"), (36_526.0, "2000-01-01"), (46_279.0, "2026-09-14")]
        {
            assert_eq!(serial_date(serial).map(|d| d.to_string()).as_deref(), Some(expected));
        }
        assert_eq!(written(46_279.5), "2026-09-14 12:00");
        assert_eq!(written(0.377_777_8), "09:04");
        for bad in [-1.0, 1e9, f64::NAN, f64::INFINITY] {
            assert_eq!(serial_date(bad), None);
        }
    }
}
