//! Dates and times as spreadsheets keep them: days since an epoch, told from plain numbers by the number format alone.
//!
//! Serial 1 is 1900-01-01 in the 1900 date system, which counts a 29th of February 1900 that never was; so from March 1900 on, and
//! for every date a workbook of measurements can hold, it is days since 1899-12-30. The 1904 system counts from 1904-01-01
//! (ECMA-376 part 1, 18.17.4.1).

use crate::intake::grid::Value;

/// Serial of 1904-01-01 in the 1900 date system.
const EPOCH_1904: f64 = 1462.0;

/// What a number format makes of a number.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Kind {
    /// A number.
    Plain,
    /// A date, a time of day, or both.
    Moment,
    /// Elapsed time: `[h]:mm`.
    Elapsed,
}

impl Kind {
    /// Of a built-in format (ECMA-376 part 1, 18.8.30; 27–36 and 50–58 are the East Asian dates).
    pub fn builtin(id: u32) -> Self {
        match id {
            46 => Self::Elapsed,
            14..=22 | 27..=36 | 45 | 47 | 50..=58 => Self::Moment,
            _ => Self::Plain,
        }
    }

    /// A built-in format of this kind.
    pub fn example(self) -> u16 {
        match self {
            Self::Plain => 0,
            Self::Moment => 22,
            Self::Elapsed => 46,
        }
    }

    /// Of a format code: `yyyy\-mm\-dd`, `[h]:mm`, `0.0" V"`. The first section decides.
    pub fn of_code(code: &str) -> Self {
        let mut chars = code.chars();
        let mut kind = Self::Plain;
        let mut bare = String::new();
        while let Some(c) = chars.next() {
            match c {
                ';' => break,
                '"' => drop(chars.by_ref().find(|c| *c == '"')),
                '\\' | '_' | '*' => drop(chars.next()),
                '[' => {
                    let inside: String = chars.by_ref().take_while(|c| *c != ']').collect::<String>().to_ascii_lowercase();
                    if !inside.is_empty() && ["h", "m", "s"].iter().any(|unit| inside.trim_start_matches(unit).is_empty()) {
                        return Self::Elapsed;
                    }
                }
                c => bare.push(c.to_ascii_lowercase()),
            }
        }
        if bare != "general" && bare.contains(['y', 'm', 'd', 'h', 's']) {
            kind = Self::Moment;
        }
        kind
    }

    /// A number with this format, in a workbook of either date system. What is no number is an error, as spreadsheets show it.
    pub fn value(self, number: f64, from_1904: bool) -> Value {
        match self {
            _ if !number.is_finite() => Value::Error("#NUM!".to_owned()),
            Self::Plain => Value::Number(number),
            // A time of day without a date is the same in both systems.
            Self::Moment if from_1904 && number >= 1.0 => Value::DateTime(number + EPOCH_1904),
            Self::Moment | Self::Elapsed => Value::DateTime(number),
        }
    }
}

/// The serial of an ISO 8601 date, date and time, or time of day: `2026-03-14`, `2026-03-14T09:30:00`, `09:30:00`.
pub fn of_iso(text: &str) -> Option<f64> {
    let text = text.trim().trim_end_matches('Z');
    match text.split_once('T') {
        Some((date, time)) => Some(days(date)? + of_clock(time)?),
        None if text.contains(':') => of_clock(text),
        None => days(text),
    }
}

/// The serial of an ISO 8601 duration of days and below: `PT09H30M00S`, `P1DT2H`.
pub fn of_duration(text: &str) -> Option<f64> {
    let (sign, text) = text.strip_prefix('-').map_or((1.0, text), |rest| (-1.0, rest));
    let (date, time) = text.strip_prefix('P')?.split_once('T').unwrap_or((text.strip_prefix('P')?, ""));
    let parts = [(date, 'D', 86_400.0), (time, 'H', 3600.0), (time, 'M', 60.0), (time, 'S', 1.0)];
    let known = date.chars().chain(time.chars()).all(|c| c.is_ascii_digit() || ".DHMS".contains(c));
    let seconds = parts.iter().try_fold(0.0, |sum, (text, unit, seconds)| Some(sum + amount(text, *unit)? * seconds))?;
    (known && seconds.is_finite()).then_some(sign * seconds / 86_400.0)
}

/// The number before a unit letter in a part of a duration; 0 without that unit.
fn amount(text: &str, unit: char) -> Option<f64> {
    let Some((before, _)) = text.split_once(unit) else { return Some(0.0) };
    let digits = before.rsplit(|c: char| c.is_ascii_alphabetic()).next()?;
    digits.parse().ok()
}

fn of_clock(text: &str) -> Option<f64> {
    let mut parts = text.split(':');
    let [hours, minutes] = [parts.next()?, parts.next()?].map(|p| p.parse::<u8>().ok());
    let seconds = parts.next().map_or(Some(0.0), |s| s.parse::<f64>().ok())?;
    let good = hours? <= 24 && minutes? < 60 && (0.0..60.0).contains(&seconds) && parts.next().is_none();
    good.then_some((f64::from(hours?) * 3600.0 + f64::from(minutes?) * 60.0 + seconds) / 86_400.0)
}

fn days(text: &str) -> Option<f64> {
    let date: jiff::civil::Date = text.parse().ok()?;
    let days = (date - jiff::civil::date(1899, 12, 30)).get_days();
    Some(f64::from(days))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn formats_tell_dates_from_numbers() {
        for code in ["yyyy\\-mm\\-dd", "m/d/yy h:mm", "[$-409]mmmm d, yyyy;@", "hh:mm:ss AM/PM", "DD.MM.YYYY", "mm:ss.0"] {
            assert_eq!(Kind::of_code(code), Kind::Moment, "{code}");
        }
        for code in ["[h]:mm", "[HH]:MM:SS", "[mm]:ss", "[s]"] {
            assert_eq!(Kind::of_code(code), Kind::Elapsed, "{code}");
        }
        for code in ["General", "0.0\" volts measured\"", "0.00E+00", "#,##0.0_m", "[Red]0.0", "0\\d", "\"sum\" 0;yyyy", "@", "*d0", ""] {
            assert_eq!(Kind::of_code(code), Kind::Plain, "{code}");
        }
    }

    /// 2008-01-01 is serial 39448 (Microsoft, DATE function), 1900-03-01 follows the 29 February that never was as 61, and the two date
    /// systems lie 1462 days apart (Microsoft, "Date systems in Excel").
    #[test]
    fn iso_dates_have_the_published_serials() {
        assert_eq!(of_iso("1900-03-01"), Some(61.0));
        assert_eq!(of_iso("2008-01-01"), Some(39_448.0));
        assert_eq!(of_iso("1904-01-01"), Some(1462.0));
        assert_eq!(of_iso("2008-01-01T12:00:00"), Some(39_448.5));
        assert_eq!(of_iso("06:00"), Some(0.25));
        assert_eq!(of_iso("2026-02-30"), None);
        assert_eq!(of_iso("25:61"), None);
    }

    #[test]
    fn durations_are_parts_of_days() {
        assert_eq!(of_duration("PT06H00M00S"), Some(0.25));
        assert_eq!(of_duration("P1DT12H"), Some(1.5));
        assert_eq!(of_duration("-PT36H"), Some(-1.5));
        for bad in ["", "6H", "PT6X", "PTH", "PT1e9H"] {
            assert_eq!(of_duration(bad), None, "{bad}");
        }
    }
}
