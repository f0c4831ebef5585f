//! Readings as read, with what follows from them row by row.

use super::findings::judged;
use super::{Draft, opt, stage, state, text, unread};
use crate::quantity::Unit;
use crate::report::Source;
use crate::report::document::{Cell, ColumnKind, Formula, Number, Table};
use crate::results::Verdict;
use crate::visit::{Arrangement, Leg, Quantity, ReadingRow, Stage};
use crate::wording::Language;
use std::collections::{BTreeMap, HashMap};

/// All rows of readings, one column a quantity, leg sum and deviation from nominal beside them.
pub(super) fn readings(source: &Source, language: &Language) -> Option<Table> {
    let visit = source.visit;
    let mut draft = Draft::new("readings", language)
        .column("location", ColumnKind::Name, None)
        .column("state", ColumnKind::Text, None)
        .column("stage", ColumnKind::Text, None)
        .column("time", ColumnKind::Name, None);
    for quantity in Quantity::ALL {
        draft = draft.term(&key(quantity), quantity.to_string(), ColumnKind::Number, Some(quantity.unit()));
    }
    let split = visit.system.arrangement == Arrangement::SplitPhase;
    draft = draft.column("leg-sum", ColumnKind::Number, Some(Unit::Volt));
    for leg in visit.system.legs() {
        let heading = format!("{} {}", Quantity::line_neutral(*leg), language.text("table-readings.off-nominal"));
        draft = draft.term(&format!("off-{}", leg.name()), heading, ColumnKind::Number, Some(Unit::Percent));
    }
    draft = draft.column("remarks", ColumnKind::Text, None);
    let judged = verdicts(source);
    // A column that says `as found` in every row says nothing.
    let stated = visit.rows.iter().any(|r| r.state != Stage::AsFound.name());
    let staged = visit.rows.iter().any(|r| r.stage != Stage::AsFound);
    for row in &visit.rows {
        let mut cells = vec![
            text(&row.location.value),
            if stated { text(&state(language, &row.state)) } else { Cell::Empty },
            if staged { text(&stage(language, row.stage)) } else { Cell::Empty },
            opt(row.time.as_ref(), |t| text(&t.value)),
        ];
        cells.extend(Quantity::ALL.map(|q| reading(source, row, q, &judged)));
        cells.push(if split { leg_sum(row) } else { Cell::Empty });
        cells.extend(visit.system.legs().iter().map(|leg| off_nominal(source, row, *leg)));
        cells.push(opt(row.remarks.as_ref(), |r| text(&r.value)));
        draft.row(cells);
    }
    draft.finish()
}

/// Column key of a quantity.
fn key(quantity: Quantity) -> String {
    quantity.to_string().to_lowercase().replace([' ', '-'], "_")
}

/// The worst verdict on each cell from the rules that judge the cell as their primary one.
type Verdicts<'a> = HashMap<&'a crate::diag::CellRef, Verdict>;

fn verdicts<'a>(source: &Source<'a>) -> Verdicts<'a> {
    let mut verdicts = Verdicts::new();
    for finding in source.findings {
        if let (Some(cell), Some(_)) = (finding.cells.first(), finding.limit) {
            let worst = verdicts.entry(cell).or_insert(finding.verdict);
            *worst = (*worst).max(finding.verdict);
        }
    }
    verdicts
}

fn reading(source: &Source, row: &ReadingRow, quantity: Quantity, verdicts: &Verdicts) -> Cell {
    let Some(reading) = row.readings.iter().find(|r| r.quantity == quantity) else { return Cell::Empty };
    match reading.value.value() {
        Some(value) => {
            let accuracy = source.visit.accuracy_of(row, quantity);
            let decimals = if accuracy.resolution < 0.05 { 2 } else { 1 };
            Cell::Number(judged(value, decimals, None, verdicts.get(&reading.cell).copied(), Some(reading.cell.clone())))
        }
        None => unread(reading.value),
    }
}

fn column(quantity: Quantity) -> Box<Formula> {
    Box::new(Formula::Column(key(quantity)))
}

/// L1-N and L2-N against L1-L2.
fn leg_sum(row: &ReadingRow) -> Cell {
    let [one, two, both] = [Quantity::line_neutral(Leg::L1), Quantity::line_neutral(Leg::L2), Quantity::L1_L2];
    let (Some(v1), Some(v2), Some(v12)) = (row.value(one), row.value(two), row.value(both)) else { return Cell::Empty };
    let formula = Formula::Subtract(Box::new(Formula::Add(column(one), column(two))), column(both));
    Cell::Number(Number { formula: Some(formula), ..Number::new(v1 + v2 - v12, 1) })
}

/// Deviation of a leg from nominal in per cent.
fn off_nominal(source: &Source, row: &ReadingRow, leg: Leg) -> Cell {
    let quantity = Quantity::line_neutral(leg);
    let (Some(value), Some(nominal)) = (row.value(quantity), source.visit.system.nominal(quantity)) else { return Cell::Empty };
    let ratio = Formula::Divide(column(quantity), Box::new(Formula::Constant(nominal.0)));
    let formula = Formula::Multiply(
        Box::new(Formula::Subtract(Box::new(ratio), Box::new(Formula::Constant(1.0)))),
        Box::new(Formula::Constant(100.0)),
    );
    Cell::Number(Number { formula: Some(formula), ..Number::new((value / nominal.0 - 1.0) * 100.0, 1) })
}

/// As found and as left side by side, for each place and state that was read at both stages.
pub(super) fn before_after(source: &Source, language: &Language) -> Option<Table> {
    let mut draft = Draft::new("before-after", language)
        .column("location", ColumnKind::Name, None)
        .column("quantity", ColumnKind::Name, None)
        .column("state", ColumnKind::Text, None)
        .column("unit", ColumnKind::Name, None)
        .column("found", ColumnKind::Number, None)
        .column("left", ColumnKind::Number, None)
        .column("change", ColumnKind::Number, None);
    let judged = verdicts(source);
    let mut found: BTreeMap<(&str, &str), &ReadingRow> = BTreeMap::new();
    for row in source.visit.rows.iter().filter(|r| r.stage == Stage::AsFound) {
        found.entry((&row.location.value, &row.state)).or_insert(row);
    }
    for left in source.visit.rows.iter().filter(|r| r.stage == Stage::AsLeft) {
        let Some(found) = found.get(&(left.location.value.as_str(), left.state.as_str())) else { continue };
        for quantity in Quantity::ALL {
            let (Some(before), Some(after)) = (found.value(quantity), left.value(quantity)) else { continue };
            let change = Formula::Subtract(Box::new(Formula::Column("left".into())), Box::new(Formula::Column("found".into())));
            draft.row(vec![
                text(&left.location.value),
                text(&quantity.to_string()),
                text(&state(language, &left.state)),
                text(quantity.unit().symbol()),
                reading(source, found, quantity, &judged),
                reading(source, left, quantity, &judged),
                Cell::Number(Number { formula: Some(change), ..Number::new(after - before, 1) }),
            ]);
        }
    }
    draft.finish()
}
