//! A user's own layout.

use super::book::{Book, circuits, problems, readings};
use crate::intake::Mapping;
use crate::wording::Language;

const MAPPING: &str = r#"
[sheets]
readings = "Blatt 3"
none = ["Skizze"]

[readings]
Location = "Messpunkt"
L1-N = ["Phase gegen N", "U1"]
N-G = "Schutzleiter"

[circuits]
Circuit = "Stromkreis"
"Fed from" = "Zuleitung"
Length = "Weg"
"Load W L1" = "Anschlusswert"

[visit]
Client = "Auftraggeber"

[fixed.visit]
System = "230/400"
"Visit date" = 2026-09-14

[fixed.readings]
Instrument = "Meter M1"
Stage = "as left"

[fixed.circuits]
"Load kind" = "resistive"

[units]
Length = "m"
N-G = "mV"
"Load W L1" = "kW"
"#;

#[test]
fn a_layout_of_ones_own_is_read() {
    let mapping = Mapping::from_toml(MAPPING, "own.toml").expect("a sound mapping");
    let out = Book::new()
        .sheet("Deckblatt", "Item|Entry\nAuftraggeber|Lantern Row Bakery")
        .sheet("Kreise", "Stromkreis|Zuleitung|Weg|Anschlusswert\nHV||12|\n1|HV|9.5|2.2")
        .sheet("Blatt 3", "Messpunkt|Phase gegen N|Schutzleiter\nHV|230.2|400\n1|229|0.3 V")
        .sheet("Skizze", "Location|L1-N\nHV|1")
        .read_with(Some(&mapping))
        .expect("readings");
    assert_eq!(readings(&out.value), "HV (as left): L1-N 230.2, N-G 0.4\n1 (as left): L1-N 229, N-G 0.3");
    assert_eq!(circuits(&out.value), "HV 12.00 m resistive\n1 < HV 9.50 m L1-N 2200 W resistive");
    assert_eq!(problems(&out.problems), "");
    let visit = out.value;
    assert_eq!(visit.system.name, "230/400");
    assert_eq!(visit.site.client.map(|c| c.value).as_deref(), Some("Lantern Row Bakery"));
    assert_eq!(visit.site.date.map(|d| d.cell.to_string()).as_deref(), Some("own.toml!A22"));
    assert_eq!(visit.rows[0].instrument.as_ref().map(|i| i.value.as_str()), Some("Meter M1"));
}

#[test]
fn a_location_may_be_fixed_for_a_sheet_without_one() {
    let mapping = Mapping::from_toml("[fixed.readings]\nLocation = \"SVC\"\n[fixed.visit]\nSystem = \"120/240\"", "m.toml").expect("sound");
    let out = Book::new().sheet("Log", "Time|L1-N\n@09:04|120.1\n@09:05|120.3").read_with(Some(&mapping)).expect("readings");
    assert_eq!(readings(&out.value), "SVC: L1-N 120.1\nSVC: L1-N 120.3");
}

#[test]
fn what_is_wrong_with_a_mapping_is_named_with_key_and_line() {
    let text = "[sheets]\nreading = \"A\"\n[readings]\nLocaton = \"B\"\nL1-N = 5\nL2-N = {}\n[fixed.readings]\nL1-N = \"120\"\n[units]\nLength = \"furlong\"\n[colours]\n";
    let english = Language::english();
    let said: Vec<String> = Mapping::from_toml(text, "own.toml").expect_err("wrong").iter().map(|p| p.say(&english)).collect();
    let starts = [
        "own.toml, line 2: `sheets.reading` is `reading`; expected one of visit,",
        "own.toml, line 4: `readings.Locaton` is `Locaton`; expected one of Instrument,",
        "own.toml, line 6: `readings.L2-N` is `{}`; expected a text in quotes.",
        "own.toml, line 8: `fixed.readings.L1-N` is `\"120\"`; expected a column that is no reading or load; those can't be fixed.",
        "own.toml, line 10: `units.Length` is `\"furlong\"`; expected a unit, as in `m` or `mV`.",
        "own.toml, line 11: `colours` is `colours`; expected one of visit,",
    ];
    assert_eq!(said.len(), starts.len(), "{said:#?}");
    for (said, start) in said.iter().zip(starts) {
        assert!(said.starts_with(start), "{said}\n{start}");
    }
    assert!(said[0].ends_with("Did you mean `readings`?") && said[1].ends_with("Did you mean `Location`?"), "{said:#?}");
    let broken = Mapping::from_toml("[readings\nx", "own.toml").expect_err("wrong");
    assert!(broken[0].say(&english).starts_with("own.toml, line 1: "), "{broken:?}");
}

#[test]
fn the_manual_page_shows_a_sound_mapping() {
    let page = include_str!("../../../docs/your-own-layout.md");
    let example = page.split("```toml").nth(1).and_then(|rest| rest.split("```").next()).expect("an example");
    let english = Language::english();
    let said: Vec<String> = Mapping::from_toml(example, "layout.toml").err().into_iter().flatten().map(|p| p.say(&english)).collect();
    assert_eq!(said, Vec::<String>::new());
}
