//! The Tests sheet's tables: insulation resistance, temperature rise; and the accuracy of instruments.

use super::{Check, check};
use midwire::electrics::insulation::{Edition, least};
use midwire::electrics::thermography::{Grade, over_ambient, over_similar};
use midwire::quantity::{Celsius, Volts};
use midwire::visit::Accuracy;

pub fn checks() -> Vec<Check> {
    let mut all = insulation();
    all.extend(accuracy());
    all
}

fn insulation() -> Vec<Check> {
    let iec = "IEC 60364-6:2006, table of minimum insulation resistance (trv.banenor.no)";
    let older = "older texts: BS 7671 table 71A and an instrument manual";
    let neta = "ANSI/NETA ATS table 100.1, from memory";
    let mut all = Vec::new();
    for (source, edition, nominal, extra_low, test, megohms) in [
        (iec, Edition::Iec2006, 48.0, true, 250.0, 0.5),
        (iec, Edition::Iec2006, 230.0, false, 500.0, 1.0),
        (iec, Edition::Iec2006, 500.0, false, 500.0, 1.0),
        (iec, Edition::Iec2006, 600.0, false, 1000.0, 1.0),
        (older, Edition::Older, 48.0, true, 250.0, 0.25),
        (older, Edition::Older, 230.0, false, 500.0, 0.5),
        (older, Edition::Older, 690.0, false, 1000.0, 1.0),
        (neta, Edition::Neta, 240.0, false, 500.0, 25.0),
        (neta, Edition::Neta, 480.0, false, 1000.0, 100.0),
    ] {
        let minimum = least(edition, Volts(nominal), extra_low);
        all.push(check(source, format!("test voltage at {nominal} V"), minimum.map_or(f64::NAN, |m| m.test.0), test, 0.0));
        all.push(check(source, format!("megohms at {nominal} V"), minimum.map_or(f64::NAN, |m| m.ohms.0 / 1e6), megohms, 1e-12));
    }
    all
}

fn accuracy() -> Vec<Check> {
    let kpu = "kpu.ca, multimeter accuracy page: ±(2.5 % + 3 digits) of 32.00 V is 0.83 V";
    let forum = "electrical-contractor.net 31601: ±(0.7 % + 2 counts) at 120.0 V is 1.04 V";
    let computed = "JCGM 100, 4.3.7: rectangle of half-width a has u = a/√3, computed";
    let stated = |percent, counts, resolution| Accuracy { percent, counts, resolution, assumed: false };
    let half = |a: Accuracy, v| a.standard(v) * 3f64.sqrt();
    let usual = stated(0.7, 2.0, 0.1);
    vec![
        check(kpu, "32.00 V", half(stated(2.5, 3.0, 0.01), 32.0), 0.83, 1e-9),
        check(forum, "120.0 V", half(usual, 120.0), 1.04, 1e-9),
        check(computed, "u at 120.0 V", usual.standard(120.0), 0.6004, 5e-5),
        check(computed, "U at 120.0 V", usual.expanded(120.0), 1.2009, 5e-5),
        check(computed, "u at 125.5 V", usual.standard(125.5), 0.62267, 5e-6),
        check(computed, "u at 113.6 V", usual.standard(113.6), 0.57458, 5e-6),
    ]
}

/// ANSI/NETA MTS table 100.18, arpedon.com/tools/delta-t-criteria. The gaps between whole degrees are the table's own; the more
/// severe grade is this project's choice.
#[test]
fn temperature_rises_are_graded() {
    use Grade::{Major, Monitor, Possible, Probable, Unremarkable};
    for (rise, grade) in
        [(0.5, Unremarkable), (1.0, Possible), (3.0, Possible), (3.5, Probable), (4.0, Probable), (15.0, Probable), (15.1, Major)]
    {
        assert_eq!(over_similar(Celsius(rise)), grade, "{rise} °C over similar");
    }
    for (rise, grade) in [
        (0.5, Unremarkable),
        (1.0, Possible),
        (10.0, Possible),
        (10.5, Probable),
        (11.0, Probable),
        (20.0, Probable),
        (20.5, Monitor),
        (40.0, Monitor),
        (40.5, Major),
    ] {
        assert_eq!(over_ambient(Celsius(rise)), grade, "{rise} °C over ambient");
    }
}
