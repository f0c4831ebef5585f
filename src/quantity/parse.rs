//! Numbers and units as people write them in a field sheet.
//!
//! Everything that turns text into a quantity is here, so that `119.6 V`, `0.4 kV`, `119,6` and `<0.5` mean the same in every
//! column. What can be read in two ways is an error with both readings, never a guess.

mod unit;

pub use unit::{Dimension, Scale, unit_word};

use super::Measured;

/// What a text for a number says.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Written {
    /// The number in the unit it was written in, or why there is none.
    pub number: Measured,
    /// The unit written beside it.
    pub unit: Option<Scale>,
    /// Something beside number and unit stood there (`119.6?`, `about 120`): read as it stands, worth naming.
    pub doubt: bool,
}

/// Why a text is not a number.
#[derive(Clone, Debug, PartialEq)]
pub enum NumberError {
    /// No number in it.
    NotANumber,
    /// A letter stands where a digit would: `12o.1`; with what was likely meant.
    Letters {
        /// The text with digits in place of the letters.
        likely: String,
    },
    /// A separator that can be a decimal mark or group thousands: `1,234`.
    TwoWays {
        /// Read as a decimal mark.
        decimal: f64,
        /// Read as grouping.
        grouped: f64,
    },
    /// More than one number.
    Several,
    /// Words or a unit that is not known behind the number.
    Words {
        /// What stands behind the number.
        rest: String,
    },
}

const NOT_MEASURED: &[&str] = &[
    "",
    "-",
    "--",
    "---",
    "\u{2013}",
    "\u{2014}",
    "n/a",
    "na",
    "n.a.",
    "n.a",
    "#n/a",
    "n/m",
    "nm",
    "n.m.",
    "n.m",
    "n/t",
    "nt",
    "n.t.",
    "not measured",
    "not taken",
    "not tested",
    "not read",
    "not applicable",
    "ol",
    "o.l.",
    "o.l",
    "0l",
    "0.l",
    "0l.",
    "o/l",
    "over range",
    "overrange",
    "over load",
    "overload",
    "...",
    "\u{2026}",
    "none",
    "none taken",
    "/",
    "\\",
    "n/r",
    "nr",
    "x",
    "--.-",
    "---.-",
];

/// A text that says that nothing was measured: `n/a`, `-`, `OL`, empty.
#[must_use]
pub fn not_measured(text: &str) -> bool {
    let text = text.trim().to_lowercase();
    NOT_MEASURED.contains(&text.as_str())
}

/// Reads a number with its sign of comparison and unit.
///
/// # Errors
/// The text holds no number, several, or one that can be read in two ways.
pub fn written(text: &str) -> Result<Written, NumberError> {
    let plain = plain(text);
    if not_measured(&plain) {
        return Ok(Written { number: Measured::NotMeasured, unit: None, doubt: false });
    }
    let (mut rest, mut doubt) = (plain.as_str(), false);
    if let Some(range) = over_range(rest) {
        let inner = if range.is_empty() { None } else { number_and_unit(range).ok() };
        let (limit, unit) = inner.map_or((None, None), |(n, u, _)| (Some(n), u));
        return Ok(Written { number: limit.map_or(Measured::NotMeasured, |v| Measured::OverRange(Some(v))), unit, doubt: false });
    }
    let mut kind = Sign::Equal;
    loop {
        let (next, sign) = comparison(rest);
        match sign {
            Some(sign) => kind = sign,
            None => match about(next) {
                Some(after) => {
                    doubt = true;
                    rest = after;
                    continue;
                }
                None => break,
            },
        }
        rest = next;
    }
    let (value, unit, more) = number_and_unit(rest).map_err(|e| mended(&plain, e))?;
    let number = match kind {
        Sign::Equal => Measured::Value(value),
        Sign::AtMost => Measured::AtMost(value),
        Sign::Over => Measured::OverRange(Some(value)),
    };
    Ok(Written { number, unit, doubt: doubt || more })
}

/// A length in feet and inches: `12' 6"`, `12 ft 6 in`, `12-1/2 ft`; in feet. `None` for anything else.
#[must_use]
pub fn feet_and_inches(text: &str) -> Option<f64> {
    let plain = plain(text).to_lowercase();
    let (feet, rest) = leading_number(&plain)?;
    let rest = rest.trim_start_matches([' ', '-']);
    if let Some((fraction, rest)) = simple_fraction(rest) {
        return matches!(rest.trim(), "'" | "ft" | "ft." | "feet" | "foot").then_some(feet + fraction);
    }
    let rest = ["feet", "foot", "ft.", "ft", "'"].iter().find_map(|mark| rest.strip_prefix(mark))?;
    let (inches, rest) = leading_number(rest.trim_start_matches([' ', '-']))?;
    matches!(rest.trim(), "\"" | "in" | "in." | "inch" | "inches" | "''").then_some(feet + inches / 12.0)
}

fn simple_fraction(text: &str) -> Option<(f64, &str)> {
    let (top, rest) = leading_number(text)?;
    let (bottom, rest) = leading_number(rest.strip_prefix('/')?)?;
    (bottom > top && [2.0, 4.0, 8.0, 16.0].contains(&bottom)).then_some((top / bottom, rest))
}

fn leading_number(text: &str) -> Option<(f64, &str)> {
    let end = text.find(|c: char| !(c.is_ascii_digit() || c == '.')).unwrap_or(text.len());
    let value = text[..end].trim_end_matches('.').parse().ok()?;
    Some((value, &text[end..]))
}

#[derive(Clone, Copy)]
enum Sign {
    Equal,
    AtMost,
    Over,
}

/// The same text with one kind of blank, minus, apostrophe and digit.
fn plain(text: &str) -> String {
    text.trim()
        .chars()
        .filter(|c| !matches!(c, '\u{200b}' | '\u{feff}' | '\u{200e}' | '\u{200f}'))
        .map(|c| match c {
            '\u{a0}' | '\u{2007}' | '\u{2009}' | '\u{202f}' | '\t' | '\n' | '\r' => ' ',
            '\u{2212}' => '-',
            '\u{2019}' | '\u{2032}' => '\'',
            '\u{2033}' | '\u{201d}' => '"',
            '\u{ff10}'..='\u{ff19}' => char::from_digit(c as u32 - 0xff10, 10).unwrap_or(c),
            '\u{ff0e}' => '.',
            '\u{ff0c}' => ',',
            c => c,
        })
        .collect::<String>()
        .trim()
        .to_owned()
}

/// What stands behind `OL` where a range is stated: `OL (600 V)`, `OL > 600`, `>OL 600`.
fn over_range(text: &str) -> Option<&str> {
    let bare = text.trim_start_matches(['>', ' ']);
    let rest = ["ol", "o.l.", "over range", "overrange", "over-range", "0l"].iter().find_map(|mark| {
        let head = bare.get(..mark.len())?;
        head.eq_ignore_ascii_case(mark).then(|| &bare[mark.len()..])
    })?;
    if rest.starts_with(|c: char| c.is_alphanumeric()) {
        return None;
    }
    Some(rest.trim_matches(|c: char| c == ' ' || "()[]:>=,@".contains(c)).trim_start_matches("at ").trim_start_matches("of ").trim())
}

fn comparison(text: &str) -> (&str, Option<Sign>) {
    for (mark, sign) in [
        ("<=", Sign::AtMost),
        ("=<", Sign::AtMost),
        ("<", Sign::AtMost),
        ("\u{2264}", Sign::AtMost),
        (">=", Sign::Over),
        (">", Sign::Over),
        ("\u{2265}", Sign::Over),
    ] {
        if let Some(rest) = text.strip_prefix(mark) {
            return (rest.trim_start(), Some(sign));
        }
    }
    for (word, sign) in [
        ("less than ", Sign::AtMost),
        ("below ", Sign::AtMost),
        ("under ", Sign::AtMost),
        ("more than ", Sign::Over),
        ("over ", Sign::Over),
        ("above ", Sign::Over),
    ] {
        if text.get(..word.len()).is_some_and(|head| head.eq_ignore_ascii_case(word)) {
            return (text[word.len()..].trim_start(), Some(sign));
        }
    }
    (text, None)
}

/// The text behind a word or mark that means "about".
fn about(text: &str) -> Option<&str> {
    for mark in ["~", "\u{2248}", "=", "\u{b1}"] {
        if let Some(rest) = text.strip_prefix(mark) {
            return Some(rest.trim_start());
        }
    }
    ["approximately ", "approx. ", "approx ", "about ", "abt. ", "abt ", "circa ", "ca. ", "ca ", "c. ", "est. "]
        .iter()
        .find(|word| text.get(..word.len()).is_some_and(|head| head.eq_ignore_ascii_case(word)))
        .map(|word| text[word.len()..].trim_start())
}

/// Value, unit, and whether something else stood there.
fn number_and_unit(text: &str) -> Result<(f64, Option<Scale>, bool), NumberError> {
    let (digits, rest) = split_number(text).ok_or(NumberError::NotANumber)?;
    let value = digits_value(digits)?;
    let (unit, more) = behind(digits, rest)?;
    Ok((value, unit, more))
}

/// The leading number with its separators, and the rest. Blanks belong to it only before groups of three digits.
fn split_number(text: &str) -> Option<(&str, &str)> {
    let bytes = text.as_bytes();
    let at = |i: usize| bytes.get(i).copied().unwrap_or(0);
    let mut end = usize::from(matches!(at(0), b'-' | b'+'));
    if matches!(at(0), b'-' | b'+') && at(1) == b' ' {
        end = 2;
    }
    let begin = end;
    while end < bytes.len() {
        let digit = |i: usize| at(i).is_ascii_digit();
        let group = digit(end + 1) && digit(end + 2) && digit(end + 3) && !digit(end + 4);
        match at(end) {
            b'0'..=b'9' => {}
            b'.' | b',' if end == begin || digit(end - 1) => {}
            b'\'' | b' ' if end > begin && digit(end - 1) && group && !text[begin..end].contains(['.', ',']) => {}
            _ => break,
        }
        end += 1;
    }
    let mut number = &text[..end];
    // A full stop or comma that ends a phrase is not a decimal mark.
    if number.ends_with([',', '.']) && number.len() > 1 {
        number = &number[..number.len() - 1];
    }
    let exponent = exponent_len(&text[number.len()..]);
    let number = &text[..number.len() + exponent];
    number.bytes().any(|b| b.is_ascii_digit()).then(|| (number, text[number.len()..].trim_start_matches(['.', ','])))
}

fn exponent_len(rest: &str) -> usize {
    let b = rest.as_bytes();
    if !matches!(b.first(), Some(b'e' | b'E')) {
        return 0;
    }
    let sign = usize::from(matches!(b.get(1), Some(b'+' | b'-')));
    let digits = b[1 + sign..].iter().take_while(|c| c.is_ascii_digit()).count();
    // Without a sign `1e5` is still a number; more than three digits are none.
    if (1..=3).contains(&digits) { 1 + sign + digits } else { 0 }
}

/// The value of digits with separators.
fn digits_value(digits: &str) -> Result<f64, NumberError> {
    let compact: String = digits.chars().filter(|c| !matches!(c, ' ' | '\'')).collect();
    let blanks = compact.len() < digits.trim_start_matches(['-', '+', ' ']).len() && digits.contains(['\'', ' ']);
    let (dots, commas) = (compact.matches('.').count(), compact.matches(',').count());
    let parse = |s: &str| s.parse::<f64>().ok().filter(|v| v.is_finite()).ok_or(NumberError::NotANumber);
    match (dots, commas) {
        (0 | 1, 0) => parse(&compact),
        (0, 1) => one_comma(&compact, blanks),
        (0, _) if grouped(&compact, ',') => parse(&compact.replace(',', "")),
        (_, 0) if grouped(&compact, '.') => parse(&compact.replace('.', "")),
        (1, _) if compact.rfind('.') > compact.rfind(',') => grouped_then(&compact, ',', '.'),
        (_, 1) if compact.rfind(',') > compact.rfind('.') => grouped_then(&compact, '.', ','),
        _ => Err(NumberError::NotANumber),
    }
}

fn one_comma(compact: &str, blanks: bool) -> Result<f64, NumberError> {
    let (head, tail) = compact.split_once(',').unwrap_or((compact, ""));
    let decimal: f64 = compact.replace(',', ".").parse().map_err(|_| NumberError::NotANumber)?;
    let whole = head.trim_start_matches(['-', '+']);
    let may_group =
        tail.len() == 3 && tail.bytes().all(|b| b.is_ascii_digit()) && (1..=3).contains(&whole.len()) && !whole.starts_with('0');
    if may_group && !blanks {
        let grouped = compact.replace(',', "").parse().map_err(|_| NumberError::NotANumber)?;
        return Err(NumberError::TwoWays { decimal, grouped });
    }
    Ok(decimal)
}

/// Groups of three behind each separator.
fn grouped(compact: &str, mark: char) -> bool {
    let mut groups = compact.trim_start_matches(['-', '+']).split(mark);
    let first = groups.next().unwrap_or("");
    (1..=3).contains(&first.len()) && !first.starts_with('0') && groups.all(|g| g.len() == 3 && g.bytes().all(|b| b.is_ascii_digit()))
}

fn grouped_then(compact: &str, group: char, mark: char) -> Result<f64, NumberError> {
    let (whole, fraction) = compact.rsplit_once(mark).unwrap_or((compact, ""));
    if !grouped(whole, group) {
        return Err(NumberError::NotANumber);
    }
    format!("{}.{fraction}", whole.replace(group, "")).parse().map_err(|_| NumberError::NotANumber)
}

/// Words that may follow a reading without changing it.
const PLAIN_WORDS: &[&str] = &["ac", "rms", "vac rms", "(ac)", "(rms)", "trms"];

/// Unit behind a number, and whether other words stood there too.
fn behind(digits: &str, rest: &str) -> Result<(Option<Scale>, bool), NumberError> {
    let rest = rest.trim();
    let bare = rest.trim_end_matches(['?', '*', '!', '~', ' ']);
    let mut doubt = bare.len() < rest.len();
    if bare.is_empty() {
        return Ok((None, doubt));
    }
    if let Some(unit) = unit_word(bare.trim_matches(['(', ')', '[', ']'])) {
        return Ok((Some(unit), doubt));
    }
    let cut = bare.find([' ', '(', '?', ',', ';']).unwrap_or(bare.len());
    let (first, mut more) = bare.split_at(cut);
    let unit = unit_word(first);
    if unit.is_none() {
        more = bare;
    }
    let more = more.trim_start_matches(['?', ',', ';', ' ']).trim();
    let lower = more.to_lowercase();
    if PLAIN_WORDS.contains(&lower.as_str()) || more.is_empty() {
        return Ok((unit, doubt || (more.is_empty() && bare[cut..].contains('?'))));
    }
    if let Some(spread) = more.strip_prefix(['\u{b1}']).or_else(|| more.strip_prefix("+/-")) {
        return number_and_unit(spread.trim()).map(|(_, u, _)| (unit.or(u), true));
    }
    if more.bytes().any(|b| b.is_ascii_digit()) {
        // `11q.3` is one number with something in it, not two.
        let is_one = unit.is_none() && rest.starts_with(char::is_alphabetic);
        return Err(if is_one { NumberError::Words { rest: more.to_owned() } } else { NumberError::Several });
    }
    // "3 outlets dead" is no reading; "119.6 flickering" and "120 V steady" are.
    let note = more.starts_with('(') || unit.is_some() || digits.contains(['.', ',']) || NOTES.contains(&lower.as_str());
    doubt |= note;
    if note && !more.starts_with(|c: char| "/-+x".contains(c)) && !glued(rest, unit) {
        return Ok((unit, doubt));
    }
    Err(NumberError::Words { rest: more.to_owned() })
}

/// Letters follow the digits at once and are no unit.
fn glued(rest: &str, unit: Option<Scale>) -> bool {
    unit.is_none() && rest.starts_with(char::is_alphabetic) && rest.chars().take_while(|c| c.is_alphanumeric()).count() < 3
}

const NOTES: &[&str] = &[
    "approx",
    "approx.",
    "about",
    "est",
    "est.",
    "estimated",
    "ca",
    "ca.",
    "steady",
    "flickering",
    "fluctuating",
    "varying",
    "unsteady",
    "max",
    "min",
    "avg",
    "average",
    "peak",
    "measured",
    "ok",
    "or so",
];

/// Where letters stand for digits, the text with the digits.
fn mended(text: &str, error: NumberError) -> NumberError {
    if error == NumberError::Several && !text.contains(['o', 'O', 'l', 'I', 'S', 'B']) {
        return error;
    }
    let end = text.find(' ').unwrap_or(text.len());
    let (token, rest) = text.split_at(end);
    if !token.bytes().any(|b| b.is_ascii_digit()) {
        return error;
    }
    let digits: String = token
        .chars()
        .map(|c| match c {
            'o' | 'O' => '0',
            'l' | 'I' | 'i' | '|' => '1',
            'S' | 's' => '5',
            'B' => '8',
            c => c,
        })
        .collect();
    let likely = format!("{digits}{rest}");
    if digits != token && number_and_unit(&likely).is_ok_and(|(_, _, more)| !more) { NumberError::Letters { likely } } else { error }
}

#[cfg(test)]
mod tests;
