//! Load of the legs, and what would even it.

use super::{Draft, name, number, text};
use crate::quantity::Unit;
use crate::report::Source;
use crate::report::document::{Cell, ColumnKind, Table};
use crate::results::{Balance, LegLoad};
use crate::wording::Language;

/// Each leg's load now and after the moves.
pub(super) fn legs(source: &Source, language: &Language) -> Option<Table> {
    let balance = source.balance?;
    let moved = !balance.moves.is_empty();
    let mut draft = Draft::new("legs", language)
        .column("leg", ColumnKind::Name, None)
        .column("now", ColumnKind::Number, Some(Unit::VoltAmpere))
        .column("after", ColumnKind::Number, Some(Unit::VoltAmpere));
    for (now, after) in balance.legs.iter().zip(&balance.after) {
        draft.row(vec![text(now.leg.name()), number(now.va.0, 0), if moved { number(after.va.0, 0) } else { Cell::Empty }]);
    }
    draft.finish()
}

/// Which circuit loads which leg by how much, the heaviest first.
pub(super) fn circuits(source: &Source, language: &Language) -> Option<Table> {
    let balance = source.balance?;
    let mut draft = Draft::new("leg-circuits", language).column("circuit", ColumnKind::Name, None).column("serves", ColumnKind::Text, None);
    for leg in &balance.legs {
        draft = draft.term(leg.leg.name(), leg.leg.name().to_owned(), ColumnKind::Number, Some(Unit::VoltAmpere));
    }
    for run in heaviest_first(balance) {
        let serves = source.visit.runs.get(run).and_then(|r| r.serves.as_ref()).map_or("", |s| s.value.as_str());
        let mut cells = vec![text(&name(source, run)), text(serves)];
        cells.extend(balance.legs.iter().map(|leg| share(leg, run).map_or(Cell::Empty, |va| number(va, 0))));
        draft.row(cells);
    }
    draft.finish()
}

fn share(leg: &LegLoad, run: usize) -> Option<f64> {
    leg.circuits.iter().find(|c| c.0 == run).map(|c| c.1.0).filter(|va| *va != 0.0)
}

fn heaviest_first(balance: &Balance) -> Vec<usize> {
    let mut total: std::collections::BTreeMap<usize, f64> = std::collections::BTreeMap::new();
    for (run, va) in balance.legs.iter().flat_map(|l| &l.circuits) {
        *total.entry(*run).or_default() += va.0;
    }
    let mut runs: Vec<(usize, f64)> = total.into_iter().filter(|(_, va)| *va > 0.0).collect();
    runs.sort_by(|a, b| b.1.total_cmp(&a.1).then(a.0.cmp(&b.0)));
    runs.into_iter().map(|(run, _)| run).collect()
}

/// The suggested moves.
pub(super) fn moves(source: &Source, language: &Language) -> Option<Table> {
    let mut draft = Draft::new("moves", language).column("circuit", ColumnKind::Name, None).column("from", ColumnKind::Name, None).column(
        "to",
        ColumnKind::Name,
        None,
    );
    for m in &source.balance?.moves {
        draft.row(vec![text(&name(source, m.run)), text(&m.from), text(&m.to)]);
    }
    draft.finish()
}
