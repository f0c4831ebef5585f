//! What one cell can hold, column by column.

use super::book::{Book, VISIT, circuits, measured, problems};

/// One reading under a header, with what was said of it.
fn reading(header: &str, cell: &str) -> String {
    let out = Book::new().sheet("Visit", VISIT).sheet("Readings", &format!("Location | {header}\nSVC | {cell}")).visit();
    let values: Vec<String> = out.value.rows.iter().flat_map(|r| &r.readings).map(|r| measured(r.value)).collect();
    let keys = problems(&out.problems);
    let keys = keys.lines().map(|l| l.rsplit(' ').next().unwrap_or("")).collect::<Vec<_>>();
    [values, keys.into_iter().map(str::to_owned).collect()].concat().join(" ")
}

fn check(header: &str, cases: &[(&str, &str)]) {
    for (cell, expected) in cases {
        assert_eq!(reading(header, cell), *expected, "{cell} under {header}");
    }
}

#[test]
fn volts() {
    check(
        "L1-N",
        &[
            ("119.6", "119.6"),
            ("'119.6", "119.6"),
            ("'119,6", "119.6"),
            ("119.6 V", "119.6"),
            ("119,6 V", "119.6"),
            ("119.6V", "119.6"),
            ("119.6 volts", "119.6"),
            ("119.6 VAC", "119.6"),
            ("0.12 kV", "120"),
            ("350 mV", "0.35"),
            ("0", "0"),
            ("0.0", "0"),
            ("'0", "0"),
            ("'  119.6  ", "119.6"),
            ("'119.6\u{a0}V", "119.6"),
            ("\u{2212}1", "-1 hardly-true"),
            ("-120", "-120 hardly-true"),
            ("1196", "1196 hardly-true"),
            ("119.6 kV", "119600 hardly-true"),
            ("240", "240"),
            ("359", "359"),
            ("361", "361 hardly-true"),
            ("119.6?", "119.6 doubtful"),
            ("~119.6", "119.6 doubtful"),
            ("about 120", "120 doubtful"),
            ("119.6 flickering", "119.6 doubtful"),
            ("119.6 \u{b1} 0.9", "119.6 doubtful"),
            ("1196?", "1196 doubtful hardly-true"),
            ("12o.1", "letters"),
            ("12O.1", "letters"),
            ("l19.6", "letters"),
            ("1,234", "two-ways"),
            ("119-121", "several"),
            ("119.6 120.1", "several"),
            ("see photo", "not-a-number"),
            ("dead", "not-a-number"),
            ("?", "not-a-number"),
            ("TRUE", "not-a-number"),
            ("119.6 A", "other-unit"),
            ("14 ft", "other-unit"),
            ("119.6 widgets", "119.6 doubtful"),
            ("120 widgets", "words-behind"),
            ("@2026-01-19", "date-not-number"),
            ("#DIV/0!", "error-value"),
            ("#REF!", "error-value"),
            ("#N/A", "error-value"),
            ("#VALUE!", "error-value"),
            ("=B1*2", "no-result"),
            ("=#REF!", "no-result"),
            ("", ""),
            ("n/a", ""),
            ("N/A", ""),
            ("-", ""),
            ("\u{2014}", ""),
            ("n.m.", ""),
            ("NM", ""),
            ("OL", ""),
            ("O.L.", ""),
            ("not measured", ""),
            ("none", ""),
            ("OL (600 V)", ">600"),
            (">600", ">600"),
            ("> 600 V", ">600"),
            ("<0.5", "<0.5 bound-not-used"),
            ("< 0,5 V", "<0.5 bound-not-used"),
            ("\u{2264}0.5", "<0.5 bound-not-used"),
        ],
    );
}

#[test]
fn neutral_to_ground_has_a_rule_for_bounds() {
    check("N-G", &[("<0.5", "<0.5"), ("0.4", "0.4"), ("400 mV", "0.4"), ("1196", "1196 hardly-true"), ("less than 1", "<1")]);
}

#[test]
fn amperes() {
    check(
        "I L1",
        &[
            ("14.7", "14.7"),
            ("14,7 A", "14.7"),
            ("14.7 amps", "14.7"),
            ("350 mA", "0.35"),
            ("0", "0"),
            ("600", "600"),
            ("601", "601 hardly-true"),
            ("1473", "1473 hardly-true"),
            ("-3", "-3 hardly-true"),
            ("14.7 V", "other-unit"),
            ("n/a", ""),
        ],
    );
}

#[test]
fn the_headers_unit_is_that_of_bare_numbers() {
    check("L1-N (V)", &[("119.6", "119.6"), ("0.12 kV", "120")]);
    check("N-G (mV)", &[("400", "0.4"), ("0.4 V", "0.4"), ("<500", "<0.5")]);
    check("L1-N [kV]", &[("0.1196", "119.6")]);
    check("L1-N, V", &[("119.6", "119.6")]);
    check("L1-N V", &[("119.6", "119.6")]);
    check("I L1 (mA)", &[("350", "0.35"), ("0.35 A", "0.35")]);
    check("L1 (A)", &[("14.7", "14.7")]);
}

/// One circuit under a header, with what was said of it.
fn circuit(header: &str, cell: &str) -> String {
    let list = format!("Circuit | Fed from | {header}\nSVC\n9 | SVC | {cell}");
    let out = Book::new().sheet("Visit", VISIT).sheet("Circuits", &list).sheet("Readings", "Location | L1-N\nSVC | 120").visit();
    let line = circuits(&out.value).lines().last().unwrap_or("").trim_start_matches("9 < SVC").trim().to_owned();
    let keys = problems(&out.problems);
    let keys = keys.lines().map(|l| l.rsplit(' ').next().unwrap_or(""));
    [line.as_str()].into_iter().filter(|l| !l.is_empty()).chain(keys).collect::<Vec<_>>().join("; ")
}

fn check_circuit(header: &str, cases: &[(&str, &str)]) {
    for (cell, expected) in cases {
        assert_eq!(circuit(header, cell), *expected, "{cell} under {header}");
    }
}

#[test]
fn breakers() {
    check_circuit(
        "Breaker A",
        &[
            ("20", "20 A"),
            ("'20", "20 A"),
            ("20 A", "20 A"),
            ("20A", "20 A"),
            ("20 amp", "20 A"),
            ("twenty", "not-a-number"),
            ("2O", "letters"),
            ("20?", "20 A; doubtful"),
            ("<20", "bound-not-allowed"),
            ("-20", "-20 A; hardly-true"),
            ("20000", "20000 A; hardly-true"),
            ("15/20", "several"),
            ("20/1", "20 A"),
            ("30/2", "30 A tied"),
            ("30A/2P", "30 A tied"),
            ("2P-30A", "30 A tied"),
            ("1P 20A", "20 A"),
            ("20A AFCI", "20 A"),
            ("GFCI 20", "20 A"),
            ("30/2 GFCI", "30 A tied"),
            ("@2026-01-20", "20 A; made-a-date"),
            ("@2026-09-14", "date-not-number"),
            ("n/a", ""),
        ],
    );
}

#[test]
fn lengths() {
    check_circuit(
        "Length ft",
        &[
            ("40", "12.19 m"),
            ("40 ft", "12.19 m"),
            ("40'", "12.19 m"),
            ("12 m", "12.00 m"),
            ("12' 6\"", "3.81 m"),
            ("40-1/2 ft", "12.34 m"),
            ("480 in", "12.19 m"),
            ("~40", "12.19 m; doubtful"),
            ("40000", "12192.00 m; hardly-true"),
            ("long", "not-a-number"),
            ("12 A", "other-unit"),
            ("@2026-01-19", "date-not-number"),
        ],
    );
    check_circuit("Length m", &[("12", "12.00 m"), ("12,5", "12.50 m"), ("40 ft", "12.19 m")]);
    check_circuit("Length (m)", &[("12", "12.00 m")]);
    check_circuit("Length (M)", &[("12", "12.00 m")]);
    check_circuit("Length, feet", &[("40", "12.19 m")]);
    check_circuit("Length", &[("12", "length-unit"), ("12 m", "12.00 m"), ("40 ft", "12.19 m"), ("n/a", "")]);
}

#[test]
fn wires() {
    check_circuit(
        "Wire",
        &[
            ("12 Cu", "12 Cu"),
            ("#12 CU", "12 Cu"),
            ("12 AWG copper", "12 Cu"),
            ("12", "12 Cu; no-metal"),
            ("12/2 NM", "12 Cu; no-metal"),
            ("4/0 AL SER", "4/0 Al"),
            ("4/0-4/0-2/0 Al", "4/0 Al; wire-others"),
            ("250 kcmil Cu", "250 kcmil Cu"),
            ("2.5mm\u{b2}", "2.5 mm2 Cu; no-metal"),
            ("2.5 mm2 Cu", "2.5 mm2 Cu"),
            ("@2026-12-02", "12 Cu; made-a-date; no-metal"),
            ("2.5", "wire-no-unit"),
            ("13 Cu", "no-such-size"),
            ("12 Cu/Al", "two-metals"),
            ("blue", "not-a-wire"),
            ("2x4/0 Al", "wire-parallel"),
            ("-", ""),
            ("#REF!", "error-value"),
        ],
    );
    check_circuit("Wire (mm\u{b2})", &[("2.5", "2.5 mm2 Cu; no-metal"), ("6 Al", "6 mm2 Al")]);
    check_circuit("AWG", &[("12", "12 Cu; no-metal")]);
}

#[test]
fn legs() {
    check_circuit(
        "Legs",
        &[
            ("L1", "[L1]"),
            ("B", "[L2]"),
            ("2", "[L2]"),
            ("L1 L2", "[L1 L2]"),
            ("L1-L2", "[L1-L2]"),
            ("L1/L2/N", "[L1 L2]"),
            ("2P", "legs-neutral"),
            ("A/B", "legs-neutral"),
            ("'1,3", "legs-neutral"),
            ("@2026-01-03", "legs-neutral"),
            ("L1&L2", "legs-neutral"),
            ("3P", "legs-which"),
            ("blue", "not-legs"),
            ("n/a", ""),
        ],
    );
}

#[test]
fn ties_and_kinds() {
    check_circuit(
        "Tie",
        &[
            ("yes", "tied"),
            ("Y", "tied"),
            ("x", "tied"),
            ("\u{2713}", "tied"),
            ("TRUE", "tied"),
            ("1", "tied"),
            ("handle tie", "tied"),
            ("no", "not tied"),
            ("FALSE", "not tied"),
            ("0", "not tied"),
            ("-", ""),
            ("perhaps", "choice"),
        ],
    );
    check_circuit(
        "Load kind",
        &[
            ("resistive", "resistive"),
            ("Heater", "resistive"),
            ("incandescent", "filament"),
            ("LED", "electronic"),
            ("motor", "motor"),
            ("resistve", "choice"),
            ("n/a", ""),
        ],
    );
}

#[test]
fn loads() {
    check_circuit(
        "Legs | Load W L1",
        &[
            ("L1 | 500", "[L1] L1-N 500 W"),
            ("L1 | 1.5 kW", "[L1] L1-N 1500 W"),
            ("L1 | 500 VA", "[L1] L1-N 500 W"),
            ("L1 | 0", "[L1] L1-N 0 W"),
            ("L1 | ", "[L1]"),
            ("L1 | -5", "[L1]; hardly-true"),
            ("L1 | some", "[L1]; not-a-number"),
            ("L2 | 500", "[L2]; load-impossible"),
            ("L1-L2 | 500", "[L1-L2]; load-impossible"),
            ("2P | 500", "[L1 L2] L1-N 500 W"),
        ],
    );
    check_circuit(
        "Legs | Load W",
        &[
            ("L2 | 500", "[L2] L2-N 500 W"),
            ("L1-L2 | 4500", "[L1-L2] L1-L2 4500 W"),
            ("L1 L2 | 500", "[L1 L2]; load-where"),
            (" | 500", "load-where"),
        ],
    );
    check_circuit("Legs | Load kW L1-L2", &[("L1-L2 | 4.5", "[L1-L2] L1-L2 4500 W")]);
}

/// A date of the Visit sheet, with what was said of it.
fn date(cell: &str) -> String {
    let sheet = format!("{VISIT}\nVisit date | {cell}");
    let out = Book::new().sheet("Visit", &sheet).sheet("Readings", "Location | L1-N\nSVC | 120").visit();
    let date = out.value.site.date.map(|d| d.value.to_string());
    let keys = problems(&out.problems);
    let keys = keys.lines().map(|l| l.rsplit(' ').next().unwrap_or("").to_owned());
    date.into_iter().chain(keys).collect::<Vec<_>>().join(" ")
}

#[test]
fn dates() {
    for (cell, expected) in [
        ("@2026-09-14", "2026-09-14"),
        ("46279", "2026-09-14"),
        ("20260914", "2026-09-14"),
        ("'2026-09-14", "2026-09-14"),
        ("14.09.2026", "2026-09-14"),
        ("9/14/2026", "2026-09-14"),
        ("14 Sep 2026", "2026-09-14"),
        ("September 14, 2026", "2026-09-14"),
        ("3/4/2026", "date-two-ways"),
        ("14.09.26?", "not-a-date"),
        ("Monday", "not-a-date"),
        ("12", "not-a-date"),
        ("@1900-01-05", "not-a-date"),
        ("TRUE", "not-a-date"),
        ("#NUM!", "error-value"),
        ("n/a", ""),
    ] {
        assert_eq!(date(cell), expected, "{cell}");
    }
}
