//! The Visit sheet and the system.

use super::book::{Book, problems};

const READINGS: &str = "Location|L1-N\nSVC|120";

fn system(items: &str) -> (String, String) {
    let out = Book::new().sheet("Visit", &format!("Item|Entry\n{items}")).sheet("R", READINGS).visit();
    (out.value.system.name, problems(&out.problems))
}

#[test]
fn the_system_is_named_computed_or_assumed_and_said() {
    for (items, name, said) in [
        ("System|120/240", "120/240", ""),
        ("System|208Y/120 V 3\u{f8} 4W", "208Y/120", ""),
        ("System|240/120", "240/120", ""),
        ("System|230", "230", ""),
        ("Service|120/208", "120/208", ""),
        ("Service|120/240 V 200 A", "120/240", ""),
        ("Service|200 A\nSystem|208Y/120", "208Y/120", ""),
        ("Client|Orla Penhallow", "120/240", "warning Visit system-assumed"),
        ("System|", "120/240", "warning workbook system-assumed"),
        ("System|n/a", "120/240", "warning Visit system-assumed"),
        ("System|two hots and a neutral", "120/240", "error Visit!B2 unknown-system"),
        ("System|#REF!", "120/240", "error Visit!B2 error-value"),
        ("Nominal L-N|127\nNominal L-L|220", "220Y/127", ""),
        ("Nominal L-N|120 V\nNominal L-L|240 V", "120/240", ""),
        ("Nominal L-N|120\nNominal L-L|300", "120/240", "warning Visit!B2 system-assumed\nerror Visit!B3 nominal-pair"),
        ("Nominal L-N|120", "120/240", "warning Visit!B2 system-assumed"),
        ("System|120/240\nNominal L-N|115\nNominal L-L|230", "115/230", ""),
        ("System|120/240\nNominal L-N|120", "120/240", ""),
        ("System|120/240\nNominal L-L|208", "104/208", ""),
        ("System|120/240\nNominal L-N|120\nNominal L-L|208", "120/240", "error Visit!B4 nominal-against-system"),
        ("System|odd\nNominal L-N|120\nNominal L-L|208", "208Y/120", "error Visit!B2 unknown-system"),
    ] {
        assert_eq!(system(items), (name.to_owned(), said.to_owned()), "{items}");
    }
}

#[test]
fn items_are_read_under_a_header_or_as_a_form() {
    let items = "Job number|AF-2101\nClient|Orla Penhallow\nSite address|4 Quarry Lane, Alder Ferry\nVisit date|@2026-09-14\nPurpose|Home inspection\nPrepared by|Ines Marlow\nLicence|Inspector 0417\nCompany|Kestrel & Rowe Electrical\nSystem|120/240\nService rating|200 A\nSupplied by|Ferry Valley Light & Water\nCode in force|as adopted\nWeather|dry\nRemarks|none of note";
    let form = format!("Kestrel & Rowe Electrical\n\n{}", items.replace('|', ":|"));
    let beside = "Job no.|AF-2101||Customer|Orla Penhallow\nAddress|4 Quarry Lane, Alder Ferry||Date|@2026-09-14\nType of visit|inspection||Inspector|Ines Marlow\nLicense|Inspector 0417||Contractor|Kestrel & Rowe Electrical\nSystem|120/240||Main breaker|200 A\nUtility|Ferry Valley Light & Water||Code|as adopted\nWeather|dry||Notes|none of note";
    let pairs = items.lines().filter_map(|line| line.split_once('|'));
    let (heads, entries): (Vec<&str>, Vec<&str>) = pairs.unzip();
    let across = format!("{}\n{}", heads.join("|"), entries.join("|"));
    for sheet in [format!("Item|Entry\n{items}"), items.to_owned(), form, beside.to_owned(), across] {
        let out = Book::new().sheet("Any", &sheet).sheet("R", READINGS).visit();
        let site = out.value.site;
        let texts = [
            &site.job,
            &site.client,
            &site.address,
            &site.purpose,
            &site.prepared_by,
            &site.licence,
            &site.company,
            &site.service_rating,
            &site.supplied_by,
            &site.code,
            &site.weather,
            &site.remarks,
        ];
        let texts: Vec<&str> = texts.into_iter().map(|t| t.as_ref().map_or("", |t| &t.value)).collect();
        assert_eq!(
            texts,
            [
                "AF-2101",
                "Orla Penhallow",
                "4 Quarry Lane, Alder Ferry",
                "inspection",
                "Ines Marlow",
                "Inspector 0417",
                "Kestrel & Rowe Electrical",
                "200 A",
                "Ferry Valley Light & Water",
                "as adopted",
                "dry",
                "none of note",
            ],
            "{sheet}"
        );
        assert_eq!(site.date.map(|d| d.value.to_string()).as_deref(), Some("2026-09-14"));
        assert_eq!(site.service_amperes.map(|a| a.value), Some(200.0));
        assert_eq!(problems(&out.problems), "", "{sheet}");
    }
}

#[test]
fn a_form_may_stand_above_the_readings() {
    let sheet = "Client:|Jun Okabe\nDate:|@2026-09-14\nSystem:|120/240\n\nLocation|L1-N\nSVC|120";
    let out = Book::new().sheet("Field sheet", sheet).visit();
    assert_eq!(out.value.site.client.map(|c| c.value).as_deref(), Some("Jun Okabe"));
    assert_eq!(out.value.rows.len(), 1);
    assert_eq!(problems(&out.problems), "");
}

#[test]
fn one_workbook_is_one_visit() {
    let first = "Item|Entry\nSystem|120/240\nVisit date|@2026-09-14";
    let second = "Item|Entry\nClient|Jun Okabe\nVisit date|@2026-09-15";
    let out = Book::new().sheet("Visit", first).sheet("Visit 2", second).sheet("R", READINGS).visit();
    assert_eq!(problems(&out.problems), "error Visit 2!B3 second-visit-dated");
    assert_eq!(out.value.site.client, None);
    let twice = format!("{first}\nVisit date|@2026-09-15");
    let out = Book::new().sheet("Visit", &twice).sheet("R", READINGS).visit();
    assert_eq!(problems(&out.problems), "error Visit!B4 item-twice");
    assert_eq!(out.value.site.date.map(|d| d.value.day), Some(14));
    let again = "Date:|14 Sep 2026\n\nLocation|L1-N\nSVC|120";
    let out = Book::new().sheet("Visit", first).sheet("R", again).visit();
    assert_eq!(problems(&out.problems), "");
    let other = again.replace("14 Sep", "15 Sep");
    let out = Book::new().sheet("Visit", first).sheet("R", &other).visit();
    assert_eq!(problems(&out.problems), "error R!B1 second-visit-dated");
    let dated = "Date|Location|L1-N\n@2026-09-14|SVC|120\n@2026-09-15|SVC|121\n@2026-09-15|9|119";
    let out = Book::new().sheet("Visit", first).sheet("R", dated).visit();
    assert_eq!(problems(&out.problems), "warning R!A3 other-date");
    assert_eq!(out.value.rows.len(), 3);
}

#[test]
fn unknown_items_and_entries_are_named() {
    let out = Book::new()
        .sheet("Visit", "Item|Entry\nSystem|120/240\nClinet|Jun Okabe\nShoe size|44\nPurpose|curiosity")
        .sheet("R", READINGS)
        .visit();
    assert_eq!(problems(&out.problems), "warning Visit!A3 unknown-item\nwarning Visit!A4 unknown-item\nwarning Visit!B5 unknown-purpose");
    assert_eq!(out.value.site.purpose.map(|p| p.value).as_deref(), Some("curiosity"));
}
