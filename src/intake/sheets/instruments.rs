//! The Instruments sheet.

use super::Tables;
use crate::diag::Located;
use crate::intake::cell::{Expected, Reader};
use crate::intake::header::{Field, Row};
use crate::intake::words::{Column, Kind};
use crate::quantity::Unit;
use crate::quantity::parse::written;
use crate::visit::{Instrument, Measures};
use crate::wording::Sentence;

pub(super) fn read<'a>(tables: &'a Tables<'a>, reader: &mut Reader<'a>) -> Vec<Instrument> {
    let mut instruments = Vec::new();
    for table in tables.of(Kind::Instruments) {
        for row in table.body() {
            instruments.extend(instrument(&row, reader));
        }
    }
    instruments
}

fn instrument(row: &Row<'_>, reader: &mut Reader<'_>) -> Option<Instrument> {
    if row.filled() < 2 {
        return None;
    }
    let Some(name) = row.field(Column::Instrument).and_then(|f| reader.name(f)) else {
        reader.row_without(row, Column::Instrument);
        return None;
    };
    let measures = measures(row, reader)?;
    let (mut percent, mut counts) = (None, None);
    if let Some(field) = row.field(Column::Accuracy) {
        (percent, counts) = accuracy(field, reader);
    }
    let number =
        |column, unit, most, reader: &mut Reader<'_>| row.field(column).and_then(|f| reader.number(f, &Expected::new(unit, 0.0, most)));
    Some(Instrument {
        serial: row.field(Column::Serial).and_then(|f| reader.text(f)),
        calibrated_until: row.field(Column::CalibratedUntil).and_then(|f| reader.date(f)),
        accuracy_percent: number(Column::AccuracyPercent, Unit::Percent, 20.0, reader).or(percent),
        accuracy_counts: number(Column::AccuracyCounts, Unit::One, 500.0, reader).or(counts),
        resolution: number(Column::Resolution, unit(measures.value), 100.0, reader),
        name,
        measures,
        cell: row.first(),
    })
}

fn unit(measures: Measures) -> Unit {
    match measures {
        Measures::Volts => Unit::Volt,
        Measures::Amperes => Unit::Ampere,
        Measures::Ohms => Unit::Ohm,
        Measures::Temperature => Unit::Celsius,
    }
}

/// What the row is for; an instrument that does not say measures volts where no column asks, and that is said.
fn measures(row: &Row<'_>, reader: &mut Reader<'_>) -> Option<Located<Measures>> {
    let Some(field) = row.field(Column::Measures) else {
        let cell = row.cell(Column::Measures);
        let severity = crate::diag::Severity::Warning;
        reader.at(severity, &cell, "", Sentence::new("intake.measures-assumed"));
        return Some(Located::new(Measures::Volts, cell));
    };
    let measures = match reader.choice(field, "measures")? {
        "amps" => Measures::Amperes,
        "ohms" => Measures::Ohms,
        "temperature" => Measures::Temperature,
        _ => Measures::Volts,
    };
    Some(Located::new(measures, field.cell()))
}

/// An accuracy in one cell: `0.5 % + 2`, `±(1% + 3 dgt)`; a bare number is per cent.
fn accuracy(field: Field<'_>, reader: &mut Reader<'_>) -> (Option<Located<f64>>, Option<Located<f64>>) {
    let Some(text) = reader.text(field) else { return (None, None) };
    let bare = text.value.replace(['\u{b1}', '(', ')'], " ").replace("+/-", " ");
    let mut parts = bare.splitn(2, '+').map(|part| number_before_words(part.trim()));
    match (parts.next().flatten(), parts.next()) {
        (Some(percent), None) => (Some(Located::new(percent, field.cell())), None),
        (Some(percent), Some(Some(counts))) => (Some(Located::new(percent, field.cell())), Some(Located::new(counts, field.cell()))),
        _ => {
            reader.error(field, Sentence::new("intake.not-an-accuracy"));
            (None, None)
        }
    }
}

fn number_before_words(text: &str) -> Option<f64> {
    let end = text.find(|c: char| !(c.is_ascii_digit() || c == '.' || c == ',')).unwrap_or(text.len());
    written(&text[..end]).ok()?.number.value()
}
