//! The circuit list as read.

use super::{Draft, number, opt, text};
use crate::quantity::Unit;
use crate::report::Source;
use crate::report::document::{ColumnKind, Table};
use crate::visit::{Between, Run};
use crate::wording::Language;

/// Loads a run can have.
fn connections(source: &Source) -> Vec<Between> {
    let legs = source.visit.system.legs();
    let mut all: Vec<Between> = legs.iter().map(|l| Between::LineNeutral(*l)).collect();
    all.extend(Between::LINE_LINE);
    all
}

/// Every run.
pub(super) fn circuits(source: &Source, language: &Language) -> Option<Table> {
    let connections = connections(source);
    let mut draft = Draft::new("circuits", language)
        .column("circuit", ColumnKind::Name, None)
        .column("fed-from", ColumnKind::Name, None)
        .column("serves", ColumnKind::Text, None)
        .column("legs", ColumnKind::Name, None)
        .column("breaker", ColumnKind::Number, Some(Unit::Ampere))
        .column("tie", ColumnKind::Name, None)
        .column("wire", ColumnKind::Name, None)
        .column("neutral-wire", ColumnKind::Name, None)
        .column("length", ColumnKind::Number, Some(Unit::Metre));
    for between in &connections {
        let heading = format!("{} {between}", language.text("table-circuits.load"));
        draft = draft.term(&format!("load_{between}").to_lowercase().replace('-', "_"), heading, ColumnKind::Number, Some(Unit::Watt));
    }
    draft = draft.column("load-kind", ColumnKind::Name, None).column("remarks", ColumnKind::Text, None);
    for run in &source.visit.runs {
        let mut cells = vec![
            text(&run.name.value),
            text(&run.fed_from.as_ref().map_or_else(|| language.text("report.utility"), |f| f.value.clone())),
            opt(run.serves.as_ref(), |s| text(&s.value)),
            opt(run.legs.as_ref(), |l| text(&l.value.to_string())),
            opt(run.breaker.as_ref(), |b| number(b.value.0, u8::from(b.value.0.fract() != 0.0))),
            opt(run.tie.as_ref(), |t| text(&language.text(if t.value { "report.yes" } else { "report.no" }))),
            opt(run.wire.as_ref(), |w| text(&w.value.to_string())),
            opt(run.neutral_wire.as_ref(), |w| text(&w.value.to_string())),
            opt(run.length.as_ref(), |l| number(l.value.0, 1)),
        ];
        cells.extend(connections.iter().map(|b| opt(load(run, *b), |w| number(w, 0))));
        cells.push(opt(run.load_kind.as_ref(), |k| text(&language.text(&format!("report.{}", k.value.name())))));
        cells.push(opt(run.remarks.as_ref(), |r| text(&r.value)));
        draft.row(cells);
    }
    draft.finish()
}

/// Watts between two conductors at the run's far end.
fn load(run: &Run, between: Between) -> Option<f64> {
    let loads: Vec<f64> = run.loads.iter().filter(|l| l.between == between).map(|l| l.watts.value.0).collect();
    (!loads.is_empty()).then(|| loads.iter().sum())
}
