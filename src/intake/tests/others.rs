//! Instruments, tests, observations, photos, work and revisions.

use super::book::{Book, VISIT, measured, problems};
use crate::visit::{Measures, TestKind};

fn book(name: &str, rows: &str) -> Book {
    Book::new().sheet("Visit", VISIT).sheet(name, rows).sheet("R", "Location|L1-N\nSVC|120")
}

#[test]
fn instruments() {
    let out = book(
        "Instruments",
        "Instrument|Measures|Serial|Calibrated until|Accuracy % of reading|Accuracy counts|Resolution\nM1|volts|AF-3307|@2027-02-28|0.5|2|0.1\nC1|Amps|1190|2027-02-28|1.5 %|3|100 mA\nX|sounds||||",
    )
    .visit();
    let [m1, c1] = &out.value.instruments[..] else { panic!("{:?}", out.value.instruments) };
    assert_eq!((m1.measures.value, c1.measures.value), (Measures::Volts, Measures::Amperes));
    assert_eq!(c1.serial.as_ref().map(|s| s.value.as_str()), Some("1190"));
    assert_eq!(c1.calibrated_until.as_ref().map(|d| d.value.to_string()).as_deref(), Some("2027-02-28"));
    let accuracy = c1.accuracy().expect("stated");
    assert_eq!((accuracy.percent, accuracy.counts, accuracy.resolution), (1.5, 3.0, 0.1));
    assert_eq!(problems(&out.problems), "error Instruments!B4 choice");
}

#[test]
fn accuracy_in_one_cell() {
    for (cell, expected, said) in [
        ("0.5 % + 2", Some((0.5, 2.0)), ""),
        ("\u{b1}(1.0% + 3 counts)", Some((1.0, 3.0)), ""),
        ("1 %", Some((1.0, 0.0)), ""),
        ("good", None, "error I!C2 not-an-accuracy"),
    ] {
        let out = book("I", &format!("Meter|Function|Accuracy\nM1|volts|{cell}")).visit();
        assert_eq!(out.value.instruments[0].accuracy().map(|a| (a.percent, a.counts)), expected, "{cell}");
        assert_eq!(problems(&out.problems), said, "{cell}");
    }
}

#[test]
fn an_instrument_nobody_listed_is_named_once() {
    let out = Book::new()
        .sheet("Visit", VISIT)
        .sheet("I", "Instrument|Measures\nMeter M1|volts")
        .sheet("R", "Location|Instrument|L1-N\nSVC|meter m1|120\n9|Meter M2|120\n8|Meter M2|120")
        .visit();
    assert_eq!(problems(&out.problems), "warning R!B3 unknown-instrument");
}

#[test]
fn a_location_nobody_listed_is_named_once() {
    let out = Book::new()
        .sheet("Visit", VISIT)
        .sheet("C", "Circuit|Fed from\nSVC|\n9|SVC")
        .sheet("R", "Location|L1-N\nSVC|120\nPorch|120\nporch|119")
        .visit();
    assert_eq!(problems(&out.problems), "warning R!A3 unknown-location");
    assert_eq!(out.value.rows.iter().map(|r| r.run).collect::<Vec<_>>(), [Some(0), None, None]);
}

#[test]
fn tests_of_every_kind() {
    let rows = "Location|Test|Value|Unit|Stage|Remarks\n\
        SVC|ground electrode resistance|14|ohm||\n\
        8|GFCI trip time at 6 mA|180|ms|as found|\n\
        8|GFCI trip time|0.18|s||at 6 mA\n\
        1/3b|torque of the device terminals, specified 1.6|1.6|N\u{b7}m|as left|\n\
        9|Insulation resistance at 500 V|>999|M\u{3a9}||\n\
        9|Insulation resistance|550|kohm||500 V DC\n\
        9|Element resistance, 1500 W 120 V|OL|ohm||\n\
        9|Temperature rise over ambient|18|\u{b0}F||\n\
        9|Loop impedance|0.4||\n\
        9|Noise|40|dB||\n\
        9|Insulation resistance|n/a|||";
    let out = book("Tests", rows).visit();
    let read: Vec<String> = out.value.tests.iter().map(|t| format!("{} {}", measured(t.value.value), t.unit)).collect();
    assert_eq!(read, ["14 Ω", "180 ms", "180 ms", "1.6 N·m", ">999 MΩ", "0.55 MΩ", "> Ω", "10 °C", "0.4 Ω"]);
    assert_eq!(out.value.tests[1].kind, TestKind::GfciTripTime { test_milliamperes: Some(6.0) });
    assert_eq!(out.value.tests[2].kind, TestKind::GfciTripTime { test_milliamperes: Some(6.0) });
    assert_eq!(out.value.tests[5].kind, TestKind::InsulationResistance { test_volts: Some(500.0) });
    assert_eq!(problems(&out.problems), "warning Tests!C10 test-unit-assumed\nerror Tests!D11 unknown-unit");
}

#[test]
fn observations_and_their_photos() {
    let rows = "Location|Observation|Signal word|Advice|Photo\nSVC|Lamps brighten|Warning|Call the utility|panel.png\n9|Scorched cover|bad||\n|note only|||\n8||CAUTION||";
    let out = book("Observations", rows).visit();
    assert_eq!(out.value.observations.len(), 3);
    assert_eq!(out.value.observations[0].signal.as_ref().map(|s| s.value.word()), Some("WARNING"));
    assert_eq!(out.value.photos.iter().map(|p| (p.file.value.as_str(), p.bytes.is_some())).collect::<Vec<_>>(), [("panel.png", true)]);
    assert_eq!(problems(&out.problems), "error Observations!C3 choice\nerror Observations!B5 row-without");
}

#[test]
fn photos_that_cannot_be_used_are_named() {
    let rows = "File|Location|Caption\npanel.png|SVC|Panel\npanel.jpg||\npanel.gif||\n../secret.png||\nlost.png||\nlocked.png||";
    let out = book("Photos", rows).visit();
    assert_eq!(out.value.photos.iter().filter(|p| p.bytes.is_some()).count(), 2);
    assert_eq!(out.value.photos.len(), 6);
    assert_eq!(
        problems(&out.problems),
        "warning Photos!A4 photo-kind\nwarning Photos!A5 photo-outside\nwarning Photos!A6 photo-missing\nwarning Photos!A7 photo-unreadable"
    );
}

#[test]
fn work_and_revisions() {
    let out = book("Work", "Date|Location|Work done|Parts\n@2026-09-14|1/3b|Splice remade|one splice\n|8||a box").visit();
    assert_eq!(out.value.work.len(), 1);
    assert_eq!(problems(&out.problems), "error Work!C3 row-without");
    let out = book("Revisions", "Issue|Date|Reason\n1|@2026-09-14|first issue\nB|2026-09-20|address corrected").visit();
    assert_eq!(out.value.revisions.iter().map(|r| r.issue.value.as_str()).collect::<Vec<_>>(), ["1", "B"]);
    assert_eq!(problems(&out.problems), "");
}
