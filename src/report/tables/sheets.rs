//! Sheets of the workbook that are shown as they are.

use super::{Draft, opt, stage, text, unread};
use crate::report::Source;
use crate::report::document::{Cell, ColumnKind, Number, Table};
use crate::wording::Language;

/// Instruments and their calibration.
pub(super) fn instruments(source: &Source, language: &Language) -> Option<Table> {
    let mut draft = Draft::new("instruments", language)
        .column("instrument", ColumnKind::Text, None)
        .column("measures", ColumnKind::Name, None)
        .column("serial", ColumnKind::Name, None)
        .column("calibrated-until", ColumnKind::Name, None)
        .column("accuracy", ColumnKind::Text, None);
    for i in &source.visit.instruments {
        let accuracy = i.accuracy().map_or_else(
            || language.text("report.not-stated"),
            |a| {
                let counts = format!("±({} % + {} × {})", trimmed(a.percent), trimmed(a.counts), trimmed(a.resolution));
                counts.replace('.', &language.number(0.5, 1)[1..2])
            },
        );
        draft.row(vec![
            text(&i.name.value),
            text(&language.text(&format!("report.{}", i.measures.value.name()))),
            opt(i.serial.as_ref(), |s| text(&s.value)),
            opt(i.calibrated_until.as_ref(), |d| text(&d.value.to_string())),
            text(&accuracy),
        ]);
    }
    draft.finish()
}

/// A number without trailing zeros.
fn trimmed(value: f64) -> String {
    let shown = format!("{value:.4}");
    shown.trim_end_matches('0').trim_end_matches('.').to_owned()
}

/// Results of tests.
pub(super) fn tests(source: &Source, language: &Language) -> Option<Table> {
    let mut draft = Draft::new("tests", language)
        .column("location", ColumnKind::Name, None)
        .column("test", ColumnKind::Text, None)
        .column("value", ColumnKind::Number, None)
        .column("unit", ColumnKind::Name, None)
        .column("stage", ColumnKind::Text, None)
        .column("remarks", ColumnKind::Text, None);
    for t in &source.visit.tests {
        let value = t.value.value.value().map_or_else(
            || unread(t.value.value),
            |v| Cell::Number(Number { cell: Some(t.value.cell.clone()), ..Number::new(v, if v.abs() < 10.0 { 2 } else { 1 }) }),
        );
        draft.row(vec![
            opt(t.location.as_ref(), |l| text(&l.value)),
            text(&t.name.value),
            value,
            text(t.unit.symbol()),
            text(&stage(language, t.stage)),
            opt(t.remarks.as_ref(), |r| text(&r.value)),
        ]);
    }
    draft.finish()
}

/// What was seen.
pub(super) fn observations(source: &Source, language: &Language) -> Option<Table> {
    let mut draft = Draft::new("observations", language)
        .column("signal", ColumnKind::Signal, None)
        .column("location", ColumnKind::Name, None)
        .column("text", ColumnKind::Text, None)
        .column("advice", ColumnKind::Text, None)
        .column("photo", ColumnKind::Name, None);
    for o in &source.visit.observations {
        draft.row(vec![
            opt(o.signal.as_ref(), |s| Cell::Signal(s.value)),
            opt(o.location.as_ref(), |l| text(&l.value)),
            text(&o.text.value),
            opt(o.advice.as_ref(), |a| text(&a.value)),
            opt(o.photo.as_ref(), |p| text(&p.value)),
        ]);
    }
    draft.finish()
}

/// What was done.
pub(super) fn work(source: &Source, language: &Language) -> Option<Table> {
    let mut draft = Draft::new("work", language)
        .column("date", ColumnKind::Name, None)
        .column("location", ColumnKind::Name, None)
        .column("done", ColumnKind::Text, None)
        .column("parts", ColumnKind::Text, None);
    for w in &source.visit.work {
        draft.row(vec![
            opt(w.date.as_ref(), |d| text(&d.value.to_string())),
            opt(w.location.as_ref(), |l| text(&l.value)),
            text(&w.done.value),
            opt(w.parts.as_ref(), |p| text(&p.value)),
        ]);
    }
    draft.finish()
}

/// Issues of the report.
pub(super) fn revisions(source: &Source, language: &Language) -> Option<Table> {
    let mut draft = Draft::new("revisions", language)
        .column("issue", ColumnKind::Name, None)
        .column("date", ColumnKind::Name, None)
        .column("reason", ColumnKind::Text, None);
    for r in &source.visit.revisions {
        draft.row(vec![
            text(&r.issue.value),
            opt(r.date.as_ref(), |d| text(&d.value.to_string())),
            opt(r.reason.as_ref(), |t| text(&t.value)),
        ]);
    }
    draft.finish()
}
