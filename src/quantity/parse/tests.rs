use super::*;

#[test]
fn plain_numbers_read_as_they_stand() {
    for (text, value) in [
        ("119.6", 119.6),
        ("119,6", 119.6),
        (" 119.6 ", 119.6),
        ("0", 0.0),
        ("-3", -3.0),
        ("\u{2212}3.5", -3.5),
        ("+4", 4.0),
        (".5", 0.5),
        ("0,123", 0.123),
        ("1,234.5", 1234.5),
        ("1.234,5", 1234.5),
        ("1,234,567", 1_234_567.0),
        ("1.234.567", 1_234_567.0),
        ("1 234.5", 1234.5),
        ("1\u{202f}234,5", 1234.5),
        ("1'234.5", 1234.5),
        ("1.2E+02", 120.0),
        ("1234,567", 1234.567),
        ("119,62", 119.62),
        ("1.234", 1.234),
        ("120.", 120.0),
        ("1196", 1196.0),
        ("１１９．６", 119.6),
    ] {
        assert_eq!(written(text), Ok(Written { number: Measured::Value(value), unit: None, doubt: false }), "{text}");
    }
}

#[test]
fn units_are_told_from_numbers() {
    for (text, value, unit) in [
        ("119.6 V", 119.6, "V"),
        ("119.6V", 119.6, "V"),
        ("0.4 kV", 0.4, "kV"),
        ("350 mV", 350.0, "mV"),
        ("12 A", 12.0, "A"),
        ("12 amps", 12.0, "A"),
        ("6 mA", 6.0, "mA"),
        ("25 \u{3a9}", 25.0, "ohm"),
        ("25 ohms", 25.0, "ohm"),
        ("1.2 M\u{3a9}", 1.2, "Mohm"),
        ("40 ft", 40.0, "ft"),
        ("40'", 40.0, "ft"),
        ("12 m", 12.0, "m"),
        ("18 in", 18.0, "in"),
        ("72 \u{b0}F", 72.0, "\u{b0}F"),
        ("119,6 Volts", 119.6, "V"),
        ("119.6 V AC", 119.6, "V"),
        ("120 VAC", 120.0, "V"),
        ("1.5 kW", 1.5, "kW"),
        ("119.6 (V)", 119.6, "V"),
    ] {
        let read = written(text).unwrap_or_else(|e| panic!("{text}: {e:?}"));
        assert_eq!((read.number, read.unit, read.doubt), (Measured::Value(value), unit_word(unit), false), "{text}");
    }
}

#[test]
fn not_measured_is_not_zero() {
    for text in ["", " ", "-", "n/a", "N/A", "n.m.", "OL", "ol", "O.L.", "\u{2014}", "not measured", "...", "#N/A"] {
        assert_eq!(written(text).map(|w| w.number), Ok(Measured::NotMeasured), "{text}");
    }
}

#[test]
fn bounds_and_over_range_are_kept() {
    for (text, number) in [
        ("<0.5", Measured::AtMost(0.5)),
        ("< 0,5 V", Measured::AtMost(0.5)),
        ("\u{2264}0.5", Measured::AtMost(0.5)),
        ("less than 1", Measured::AtMost(1.0)),
        (">999", Measured::OverRange(Some(999.0))),
        ("> 999 M\u{3a9}", Measured::OverRange(Some(999.0))),
        ("OL (600 V)", Measured::OverRange(Some(600.0))),
        ("OL >600", Measured::OverRange(Some(600.0))),
        ("OL 600 V", Measured::OverRange(Some(600.0))),
    ] {
        assert_eq!(written(text).map(|w| w.number), Ok(number), "{text}");
    }
}

#[test]
fn doubtful_numbers_are_read_and_marked() {
    for text in [
        "119.6?",
        "119.6 ?",
        "~119.6",
        "about 119.6",
        "119.6*",
        "119.6 flickering",
        "119.6 V steady",
        "119.6 (at noon)",
        "119.6 \u{b1} 0.9",
        "119.6 V?",
    ] {
        let read = written(text).unwrap_or_else(|e| panic!("{text}: {e:?}"));
        assert_eq!((read.number, read.doubt), (Measured::Value(119.6), true), "{text}");
    }
}

#[test]
fn letters_for_digits_are_named() {
    for (text, likely) in [
        ("12o.1", "120.1"),
        ("12O.1", "120.1"),
        ("l19.6", "119.6"),
        ("1l9.6 V", "119.6 V"),
        ("12O", "120"),
        ("I20.1", "120.1"),
        ("11S.6", "115.6"),
    ] {
        assert_eq!(written(text), Err(NumberError::Letters { likely: likely.to_owned() }), "{text}");
    }
}

#[test]
fn what_reads_two_ways_is_an_error() {
    assert_eq!(written("1,234"), Err(NumberError::TwoWays { decimal: 1.234, grouped: 1234.0 }));
    assert_eq!(written("119,625 V"), Err(NumberError::TwoWays { decimal: 119.625, grouped: 119_625.0 }));
    assert_eq!(written("119.6 120.1"), Err(NumberError::Several));
    for text in ["119-121", "119.6/120.1", "119.6 120.1", "120 at 3 pm", "1.2.3", "12,34,5"] {
        assert!(written(text).is_err(), "{text}: {:?}", written(text));
    }
}

#[test]
fn words_are_no_numbers() {
    for text in ["abc", "dead", "see note 3", "3 outlets dead", "L1", "?", "V", "12ab", "--5", "#DIV/0!", "e5", "=SUM(A1)"] {
        assert!(written(text).is_err(), "{text}: {:?}", written(text));
    }
}

#[test]
fn feet_and_inches_are_one_length() {
    for (text, feet) in [("12' 6\"", 12.5), ("12 ft 6 in", 12.5), ("12'6\"", 12.5), ("40-1/2 ft", 40.5), ("3 1/4'", 3.25)] {
        assert_eq!(feet_and_inches(text), Some(feet), "{text}");
    }
    for text in ["12", "12'", "abc", "12 m", "1/2"] {
        assert_eq!(feet_and_inches(text), None, "{text}");
    }
}

#[test]
fn a_letter_within_a_number_makes_it_no_two_numbers() {
    assert_eq!(written("11q.3"), Err(NumberError::Words { rest: "q.3".to_owned() }));
    assert_eq!(written("119.6/120.1"), Err(NumberError::Several));
}
