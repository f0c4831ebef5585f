//! Conductors: `12 Cu`, `#12 CU`, `12/2 NM`, `4/0 AL SER`, `250 kcmil`, `2.5 mm2 Cu`.

use super::{Reader, larger_first, plain_text};
use crate::diag::Located;
use crate::intake::grid::Value;
use crate::intake::header::Field;
use crate::intake::words::Words;
use crate::quantity::parse::{NumberError, written};
use crate::visit::{Metal, Wire, WireSize};
use crate::wording::Sentence;

/// Why a text is no conductor.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum WireError {
    /// Nothing like one.
    NotAWire,
    /// A number that is no size of conductors.
    NoSuchSize,
    /// A bare number that is no gauge: of square millimetres or kcmil, but it does not say which.
    NoUnit,
    /// More than one metal, or one that is not known.
    TwoMetals,
    /// Several conductors in parallel, which one size can't describe.
    Parallel,
}

/// A conductor as a text gives it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct WireText {
    pub wire: Wire,
    /// Other sizes stood behind (`4/0-4/0-2/0 Al`).
    pub others: bool,
}

impl Reader<'_> {
    /// A conductor. A metal that is not named is copper, and said.
    pub fn wire(&mut self, field: Field<'_>) -> Option<Located<Wire>> {
        if self.broken(field) {
            return None;
        }
        let text = larger_first(field.value).unwrap_or_else(|| plain_text(field.value));
        if matches!(field.value, Value::DateTime(_)) {
            self.read_from_date(field, &text);
        } else if crate::quantity::parse::not_measured(&text) {
            return None;
        }
        match read(self.words, &text, field.square_millimetres) {
            Ok(WireText { wire, others }) => {
                if wire.metal_assumed {
                    self.warning(field, Sentence::new("intake.no-metal").with("wire", wire.to_string()));
                }
                if others {
                    self.warning(field, Sentence::new("intake.wire-others").with("wire", wire.to_string()));
                }
                Some(Located::new(wire, field.cell()))
            }
            Err(error) => {
                let (key, hint) = match error {
                    WireError::NotAWire => ("intake.not-a-wire", "intake.wire-hint"),
                    WireError::NoSuchSize => ("intake.no-such-size", "intake.wire-hint"),
                    WireError::NoUnit => ("intake.wire-no-unit", "intake.wire-unit-hint"),
                    WireError::TwoMetals => ("intake.two-metals", "intake.wire-hint"),
                    WireError::Parallel => ("intake.wire-parallel", "intake.wire-parallel-hint"),
                };
                self.error(field, Sentence::new(key)).hint = Some(Sentence::new(hint));
                None
            }
        }
    }
}

/// Reads a conductor; `millimetres` where the header says that bare numbers are square millimetres.
pub(super) fn read(words: &Words, text: &str, millimetres: bool) -> Result<WireText, WireError> {
    let text = text
        .to_lowercase()
        .replace('\u{b2}', "2")
        .replace("sq. mm", "mm2")
        .replace("sq mm", "mm2")
        .replace("sqmm", "mm2")
        .replace("mm^2", "mm2");
    if parallel(&text) {
        return Err(WireError::Parallel);
    }
    let mut metal = None;
    let mut size: Option<WireSize> = None;
    let mut others = false;
    for token in tokens(&text) {
        match words.choice("metal", &token) {
            Some(name) => {
                let named = if name == "copper" { Metal::Copper } else { Metal::Aluminium };
                if metal.replace(named).is_some_and(|m| m != named) {
                    return Err(WireError::TwoMetals);
                }
                continue;
            }
            None if words.choice("clad", &token).is_some() => return Err(WireError::TwoMetals),
            // What kind of cable it is, its insulation, its colour: not asked here.
            None if token.starts_with(|c: char| c.is_alphabetic()) && unit_of(&token).is_none() => continue,
            None => {}
        }
        match (unit_of(&token), &mut size) {
            (Some(unit), Some(size)) => *size = in_unit(*size, unit)?,
            (Some(_), None) => return Err(WireError::NotAWire),
            (None, size) => {
                let (read, more) = sizes(&token, size.is_some())?;
                others |= more;
                if size.is_none() {
                    *size = read;
                }
            }
        }
    }
    let size = checked(size.ok_or(WireError::NotAWire)?, millimetres)?;
    let metal_assumed = metal.is_none();
    Ok(WireText { wire: Wire { size, metal: metal.unwrap_or(Metal::Copper), metal_assumed }, others })
}

/// Several conductors: `2x4/0`, `3 \u{d7} 2.5`, `3G2.5`, `(2) 4/0`, `4/0 parallel`.
fn parallel(text: &str) -> bool {
    let times = text
        .chars()
        .filter(|c| !c.is_whitespace())
        .collect::<Vec<_>>()
        .windows(3)
        .any(|w| w[0].is_ascii_digit() && matches!(w[1], 'x' | '*' | '\u{d7}' | 'g') && w[2].is_ascii_digit());
    let counted = text
        .trim_start()
        .strip_prefix('(')
        .and_then(|rest| rest.split_once(')'))
        .is_some_and(|(count, rest)| count.parse::<u8>().is_ok() && rest.trim_start().starts_with(|c: char| c.is_ascii_digit()));
    times || counted || ["parallel", "sets", "per phase"].iter().any(|word| text.contains(word))
}

/// Blank-divided words, with letters and the digits before them parted: `12cu`, `2.5mm2`, `250mcm`.
fn tokens(text: &str) -> Vec<String> {
    let mut out = Vec::new();
    for word in text.split(|c: char| c.is_whitespace() || "();&+\"".contains(c)).filter(|w| !w.is_empty()) {
        let word = word.trim_start_matches('#').trim_matches(['.', ':', ',']);
        let cut = word.find(|c: char| c.is_ascii_alphabetic());
        match cut {
            // Cross-sections and gauges: the unit follows the digits at once.
            Some(cut) if cut > 0 && word.starts_with(|c: char| c.is_ascii_digit()) => {
                out.push(word[..cut].trim_end_matches(['-', '/']).to_owned());
                out.push(word[cut..].to_owned());
            }
            Some(_) if !word.contains(|c: char| c.is_ascii_digit()) => {
                out.extend(word.split('/').filter(|w| !w.is_empty()).map(str::to_owned))
            }
            _ if !word.is_empty() => out.push(word.to_owned()),
            _ => {}
        }
    }
    out
}

#[derive(Clone, Copy)]
enum SizeUnit {
    Kcmil,
    SquareMillimetres,
}

fn unit_of(token: &str) -> Option<SizeUnit> {
    match token {
        "kcmil" | "mcm" | "kcm" | "kc" => Some(SizeUnit::Kcmil),
        "mm2" | "mm\u{b2}" | "mm" | "qmm" => Some(SizeUnit::SquareMillimetres),
        _ => None,
    }
}

/// A bare number is held as square millimetres with a minus until its unit is known.
fn in_unit(size: WireSize, unit: SizeUnit) -> Result<WireSize, WireError> {
    let number = match size {
        WireSize::SquareMillimetres(n) => n.abs(),
        WireSize::Awg(_) | WireSize::Kcmil(_) => return Err(WireError::NotAWire),
    };
    match unit {
        SizeUnit::SquareMillimetres => Ok(WireSize::SquareMillimetres(number)),
        SizeUnit::Kcmil => KCMIL.iter().find(|k| f64::from(**k) == number).map(|k| WireSize::Kcmil(*k)).ok_or(WireError::NoSuchSize),
    }
}

/// The sizes of conductors in kcmil (NEC chapter 9, table 8).
const KCMIL: [u16; 18] = [250, 300, 350, 400, 500, 600, 700, 750, 800, 900, 1000, 1250, 1500, 1750, 2000, 450, 550, 650];
/// The gauges (NEC chapter 9, table 8); 1/0 to 4/0 are 0 to −3.
const AWG: [i8; 15] = [18, 16, 14, 12, 10, 8, 6, 4, 3, 2, 1, 0, -1, -2, -3];

/// The size in a token, if any, and whether further sizes stand there.
fn sizes(token: &str, have: bool) -> Result<(Option<WireSize>, bool), WireError> {
    let aught = |part: &str| match part {
        "1/0" | "0" => Some(0),
        "2/0" | "00" => Some(-1),
        "3/0" | "000" => Some(-2),
        "4/0" | "0000" => Some(-3),
        _ => None,
    };
    if let Some(n) = aught(token) {
        return Ok((Some(WireSize::Awg(n)), have));
    }
    let dashed: Vec<&str> = token.split('-').collect();
    if dashed.len() > 1 && dashed.iter().all(|p| aught(p).is_some() || p.parse::<u16>().is_ok()) {
        // 4/0-4/0-2/0 is one size a conductor; 12-2 is a gauge and a number of conductors, with or without a ground.
        let first = sizes(dashed[0], false)?.0;
        let counts = aught(dashed[0]).is_none() && dashed.len() == 2 && conductors(dashed[1]);
        return Ok((first, have || !counts));
    }
    if let Some((gauge, count)) = token.split_once('/')
        && count.split('/').all(conductors)
    {
        return Ok((sizes(gauge, false)?.0, have));
    }
    match written(token) {
        Ok(number) => {
            let value = number.number.value().filter(|v| *v > 0.0).ok_or(WireError::NotAWire)?;
            Ok((Some(WireSize::SquareMillimetres(-value)), have))
        }
        Err(NumberError::TwoWays { .. }) => Err(WireError::NoSuchSize),
        Err(_) => Err(WireError::NotAWire),
    }
}

/// A number of conductors in a cable.
fn conductors(text: &str) -> bool {
    matches!(text, "1" | "2" | "3" | "4" | "5")
}

/// The size with its unit settled, where it is one of a conductor.
fn checked(size: WireSize, millimetres: bool) -> Result<WireSize, WireError> {
    match size {
        WireSize::SquareMillimetres(n) if n < 0.0 && millimetres => checked(WireSize::SquareMillimetres(-n), true),
        WireSize::SquareMillimetres(n) if n < 0.0 => {
            let gauge = AWG.iter().find(|g| f64::from(**g) == -n && **g > 0);
            let unit_missing = n.fract() != 0.0 || -n > 18.0;
            gauge.map(|g| WireSize::Awg(*g)).ok_or(if unit_missing { WireError::NoUnit } else { WireError::NoSuchSize })
        }
        WireSize::SquareMillimetres(n) if !(0.2..=2500.0).contains(&n) => Err(WireError::NoSuchSize),
        size => Ok(size),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn wire(text: &str) -> String {
        match read(Words::built_in(), text, false) {
            Ok(w) => format!("{}{}{}", w.wire, if w.wire.metal_assumed { " assumed" } else { "" }, if w.others { " others" } else { "" }),
            Err(error) => format!("{error:?}"),
        }
    }

    #[test]
    fn conductors_are_read_as_the_trade_writes_them() {
        for (text, expected) in [
            ("12 Cu", "12 Cu"),
            ("#12 CU", "12 Cu"),
            ("12 AWG Cu", "12 Cu"),
            ("No. 12 copper", "12 Cu"),
            ("12cu", "12 Cu"),
            ("#12", "12 Cu assumed"),
            ("12", "12 Cu assumed"),
            ("12 AWG", "12 Cu assumed"),
            ("12AWG", "12 Cu assumed"),
            ("12/2 NM", "12 Cu assumed"),
            ("12/2", "12 Cu assumed"),
            ("12-2 w/g", "12 Cu assumed"),
            ("12/3 w/ground Cu", "12 Cu"),
            ("14-2 NM-B", "14 Cu assumed"),
            ("12-2-2 Cu", "12 Cu others"),
            ("10/3 Romex", "10 Cu assumed"),
            ("6-3 SER Al", "6 Al"),
            ("4/0 Al", "4/0 Al"),
            ("4/0 AL SER", "4/0 Al"),
            ("4/0 aluminum", "4/0 Al"),
            ("4/0-4/0-2/0 Al", "4/0 Al others"),
            ("2-2-4 Al", "2 Al others"),
            ("0000 Al", "4/0 Al"),
            ("1/0", "1/0 Cu assumed"),
            ("2/0 THHN Cu", "2/0 Cu"),
            ("Al 2/0", "2/0 Al"),
            ("250 kcmil Cu", "250 kcmil Cu"),
            ("250 MCM Al", "250 kcmil Al"),
            ("250MCM", "250 kcmil Cu assumed"),
            ("2.5 mm2 Cu", "2.5 mm2 Cu"),
            ("2.5mm\u{b2}", "2.5 mm2 Cu assumed"),
            ("2,5 mm\u{b2} Cu", "2.5 mm2 Cu"),
            ("16 sq mm Al", "16 mm2 Al"),
            ("1.5 mm^2 Cu", "1.5 mm2 Cu"),
            ("6 Cu", "6 Cu"),
            ("3 Cu", "3 Cu"),
            ("12 AWG THHN/THWN-2 Cu", "12 Cu"),
            ("12 Cu in EMT", "12 Cu"),
            ("blue 14", "14 Cu assumed"),
            ("(12 Cu)", "12 Cu"),
        ] {
            assert_eq!(wire(text), expected, "{text}");
        }
    }

    #[test]
    fn what_is_no_conductor_is_told_apart() {
        for (text, expected) in [
            ("blue", "NotAWire"),
            ("Cu", "NotAWire"),
            ("13 Cu", "NoSuchSize"),
            ("7", "NoSuchSize"),
            ("2.5", "NoUnit"),
            ("250", "NoUnit"),
            ("2.5 Cu", "NoUnit"),
            ("260 kcmil", "NoSuchSize"),
            ("12 Cu Al", "TwoMetals"),
            ("12 CCA", "TwoMetals"),
            ("2x4/0 Al", "Parallel"),
            ("3x2.5 mm2", "Parallel"),
            ("3G2.5 mm2", "Parallel"),
            ("(2) 4/0 Al", "Parallel"),
            ("2 sets 250 kcmil", "Parallel"),
            ("9999 mm2", "NoSuchSize"),
            ("", "NotAWire"),
            ("kcmil", "NotAWire"),
        ] {
            assert_eq!(wire(text), expected, "{text}");
        }
        assert_eq!(read(Words::built_in(), "2.5", true).map(|w| w.wire.to_string()), Ok("2.5 mm2 Cu".to_owned()));
    }
}
