//! The Tests sheet: insulation, electrodes, loops, trip times, torque, temperatures, elements.

use super::Tables;
use crate::diag::{Located, Severity};
use crate::intake::cell::{Expected, Reader, plain_text};
use crate::intake::grid::Value;
use crate::intake::header::Row;
use crate::intake::words::{Column, Kind};
use crate::quantity::parse::{Dimension, Scale, not_measured, unit_word, written};
use crate::quantity::{Measured, Unit};
use crate::visit::{Stage, Test, TestKind};
use crate::wording::Sentence;

pub(super) fn read<'a>(tables: &'a Tables<'a>, reader: &mut Reader<'a>) -> Vec<Test> {
    let mut tests = Vec::new();
    for row in tables.of(Kind::Tests).flat_map(|table| table.body()) {
        tests.extend(test(&row, reader));
    }
    tests
}

fn test(row: &Row<'_>, reader: &mut Reader<'_>) -> Option<Test> {
    if row.is_note() {
        return None;
    }
    let Some(name) = row.field(Column::Test).and_then(|f| reader.text(f)) else {
        reader.row_without(row, Column::Test);
        return None;
    };
    let remarks = row.field(Column::Remarks).and_then(|f| reader.entry(f));
    let stated = unit_beside(row, reader)?;
    let field = row.field(Column::Value)?;
    let written_unit = written(&plain_text(field.value)).ok().and_then(|w| w.unit).or(stated).or(field.unit);
    let details = format!("{} {}", name.value, remarks.as_ref().map_or("", |r| &r.value));
    let kind = kind(&name.value, &details, written_unit);
    let unit = usual_unit(&kind).or_else(|| written_unit.map(base_unit)).unwrap_or(Unit::One);
    if written_unit.is_none() && unit != Unit::One && field_is_number(field.value) {
        let message = Sentence::new("intake.test-unit-assumed").with("unit", unit.symbol());
        reader.at(Severity::Warning, &field.cell(), plain_text(field.value), message);
    }
    let (least, most) = bounds(&kind);
    let difference = matches!(kind, TestKind::TemperatureRise { .. });
    let expected = Expected { stated, difference, ..Expected::new(unit, least, most) };
    let value = if over_range(field.value) { Measured::OverRange(None) } else { reader.measured(field, &expected)? };
    if value == Measured::NotMeasured {
        return None;
    }
    let stage = row.field(Column::Stage).and_then(|f| reader.choice(f, "stage"));
    Some(Test {
        location: row.field(Column::Location).and_then(|f| reader.name(f)),
        kind,
        name,
        value: Located::new(value, field.cell()),
        unit,
        stage: if stage == Some("as-left") { Stage::AsLeft } else { Stage::AsFound },
        remarks,
    })
}

/// The unit column; `Some(None)` where it is silent, `None` where it holds no unit that is known, which is named.
fn unit_beside(row: &Row<'_>, reader: &mut Reader<'_>) -> Option<Option<Scale>> {
    let Some(field) = row.field(Column::Unit) else { return Some(None) };
    let text = plain_text(field.value);
    if not_measured(&text) && unit_word(&text).is_none() {
        return Some(None);
    }
    let unit = unit_word(&text);
    if unit.is_none() && !reader.broken(field) {
        reader.error(field, Sentence::new("intake.unknown-unit"));
    }
    unit.map(Some)
}

fn field_is_number(value: &Value) -> bool {
    matches!(value, Value::Number(_)) || matches!(value, Value::Text(t) if written(t).is_ok_and(|w| w.number != Measured::NotMeasured))
}

/// Over range is a result of a test of resistance: an open element, insulation beyond the instrument's range.
fn over_range(value: &Value) -> bool {
    let text = plain_text(value).to_lowercase();
    ["ol", "o.l.", "o.l", "over range", "overrange", "o/l"].contains(&text.as_str())
}

/// What a test is, by its name; times tell a trip time from a trip current where the name does not.
fn kind(name: &str, details: &str, unit: Option<Scale>) -> TestKind {
    let name = name.to_lowercase();
    let has = |words: &[&str]| words.iter().any(|w| name.contains(w));
    let dimension = unit.map(|u| u.dimension);
    if has(&["insulation"]) || name.split_whitespace().any(|w| w == "ir") {
        TestKind::InsulationResistance { test_volts: number_with(details, Dimension::Voltage) }
    } else if has(&["gfci", "gfi", "rcd", "residual", "ground-fault", "ground fault", "rccb", "elcb"]) {
        if dimension == Some(Dimension::Time) || (dimension.is_none() && !has(&["current", "trip ma"])) || has(&["time"]) {
            TestKind::GfciTripTime { test_milliamperes: number_with(details, Dimension::Current).map(|a| a * 1e3) }
        } else {
            TestKind::GfciTripCurrent
        }
    } else if has(&[
        "electrode",
        "ground rod",
        "earth rod",
        "fall of potential",
        "fall-of-potential",
        "earth resistance",
        "ground resistance",
    ]) {
        TestKind::GroundElectrode
    } else if has(&["loop"]) {
        TestKind::LoopImpedance
    } else if has(&["torque", "tightness"]) {
        // A bare specified torque is in the unit of the result.
        let factor = unit.filter(|u| u.dimension == Dimension::Torque).map_or(1.0, |u| u.factor);
        let bare = number_behind(details, &["specified", "spec", "required", "rated"]).map(|torque| torque * factor);
        TestKind::Torque { specified: number_with(details, Dimension::Torque).or(bare) }
    } else if has(&["temperature", "temp rise", "temp. rise", "delta t", "\u{3b4}t", "thermograph", "thermal", "hot spot"]) {
        TestKind::TemperatureRise { over_ambient: details.to_lowercase().contains("ambient") }
    } else if has(&["element", "filament", "lamp", "bulb", "heater resistance"]) {
        TestKind::ElementResistance {
            rated_watts: number_with(details, Dimension::Power),
            rated_volts: number_with(details, Dimension::Voltage),
            filament: has(&["filament", "lamp", "bulb"]),
        }
    } else {
        TestKind::Other
    }
}

fn usual_unit(kind: &TestKind) -> Option<Unit> {
    match kind {
        TestKind::InsulationResistance { .. } => Some(Unit::Megohm),
        TestKind::GroundElectrode | TestKind::LoopImpedance | TestKind::ElementResistance { .. } => Some(Unit::Ohm),
        TestKind::GfciTripTime { .. } => Some(Unit::Millisecond),
        TestKind::GfciTripCurrent => Some(Unit::Milliampere),
        TestKind::Torque { .. } => Some(Unit::NewtonMetre),
        TestKind::TemperatureRise { .. } => Some(Unit::Celsius),
        TestKind::Other => None,
    }
}

/// The unit a result of no known test is kept in.
fn base_unit(scale: Scale) -> Unit {
    match scale.dimension {
        Dimension::Voltage => Unit::Volt,
        Dimension::Current if scale.factor < 1.0 => Unit::Milliampere,
        Dimension::Current => Unit::Ampere,
        Dimension::Resistance if scale.factor > 1e5 => Unit::Megohm,
        Dimension::Resistance => Unit::Ohm,
        Dimension::Power => Unit::Watt,
        Dimension::ApparentPower => Unit::VoltAmpere,
        Dimension::Length => Unit::Metre,
        Dimension::Time if scale.factor < 1.0 => Unit::Millisecond,
        Dimension::Time => Unit::Second,
        Dimension::Temperature => Unit::Celsius,
        Dimension::Torque => Unit::NewtonMetre,
        Dimension::Ratio => Unit::Percent,
    }
}

/// Bounds beyond which a result can hardly be true.
fn bounds(kind: &TestKind) -> (f64, f64) {
    match kind {
        TestKind::InsulationResistance { .. } => (0.0, 1e7),
        TestKind::GroundElectrode | TestKind::ElementResistance { .. } => (0.0, 1e6),
        TestKind::LoopImpedance => (0.0, 1e4),
        TestKind::GfciTripTime { .. } => (0.0, 1e4),
        TestKind::GfciTripCurrent => (0.0, 1e3),
        TestKind::Torque { .. } => (0.0, 500.0),
        TestKind::TemperatureRise { .. } => (-50.0, 500.0),
        TestKind::Other => (f64::MIN, f64::MAX),
    }
}

/// The number in a text that bears a unit of a dimension: `500` V of "insulation at 500 V DC".
fn number_with(text: &str, dimension: Dimension) -> Option<f64> {
    let words: Vec<&str> = text.split(|c: char| c.is_whitespace() || "(),;:".contains(c)).filter(|w| !w.is_empty()).collect();
    words.iter().enumerate().find_map(|(i, word)| {
        let beside = words.get(i + 1).map(|next| format!("{word} {next}"));
        let candidates = [Some((*word).to_owned()), beside];
        candidates.into_iter().flatten().find_map(|candidate| {
            let read = written(&candidate).ok()?;
            let unit = read.unit.filter(|u| u.dimension == dimension)?;
            read.number.value().map(|v| v * unit.factor)
        })
    })
}

/// The bare number behind one of some words: `1.6` of "specified 1.6".
fn number_behind(text: &str, marks: &[&str]) -> Option<f64> {
    let lower = text.to_lowercase();
    let mut words = lower.split(|c: char| c.is_whitespace() || "(),;:=".contains(c)).filter(|w| !w.is_empty());
    words.by_ref().find(|w| marks.contains(w))?;
    words.find_map(|word| written(word).ok()?.number.value())
}

#[cfg(test)]
mod tests {
    use super::*;

    fn of(name: &str, unit: &str) -> TestKind {
        kind(name, name, unit_word(unit))
    }

    #[test]
    fn tests_are_told_by_their_names() {
        assert_eq!(of("Insulation resistance at 500 V", "M\u{3a9}"), TestKind::InsulationResistance { test_volts: Some(500.0) });
        assert_eq!(of("IR 1 kV", "Mohm"), TestKind::InsulationResistance { test_volts: Some(1000.0) });
        assert_eq!(of("GFCI trip time at 6 mA", "ms"), TestKind::GfciTripTime { test_milliamperes: Some(6.0) });
        assert_eq!(of("GFCI trip", "mA"), TestKind::GfciTripCurrent);
        assert_eq!(of("GFCI trip current", ""), TestKind::GfciTripCurrent);
        assert_eq!(of("ground electrode resistance", "ohm"), TestKind::GroundElectrode);
        assert_eq!(of("Loop impedance", "ohm"), TestKind::LoopImpedance);
        assert_eq!(of("torque of the device terminals, specified 1.6", "N\u{b7}m"), TestKind::Torque { specified: Some(1.6) });
        assert_eq!(of("Torque, spec 20 in-lb", "in-lb"), TestKind::Torque { specified: Some(20.0 * 4.448_221_615_260_5 * 0.0254) });
        assert_eq!(of("Torque, specified 20", "in-lb"), TestKind::Torque { specified: Some(20.0 * 4.448_221_615_260_5 * 0.0254) });
        assert_eq!(of("Temperature rise over ambient", "\u{b0}C"), TestKind::TemperatureRise { over_ambient: true });
        assert_eq!(
            of("Element resistance 1500 W 120 V", "ohm"),
            TestKind::ElementResistance { rated_watts: Some(1500.0), rated_volts: Some(120.0), filament: false }
        );
        assert_eq!(of("Noise", "dB"), TestKind::Other);
    }
}
