//! The typed tables: whole, and every formula yields the number that stands with it.

use crate::samples::{SAMPLES, checked, report};
use midwire::report::document::{Cell, Formula, Row, Table};
use std::collections::BTreeSet;

/// The value of a formula over a row, as a spreadsheet works it out; none where a cell it needs holds no number.
fn value(formula: &Formula, table: &Table, row: &Row) -> Option<f64> {
    let of = |f: &Formula| value(f, table, row);
    Some(match formula {
        Formula::Column(key) => {
            let at = table.columns.iter().position(|c| c.key == *key)?;
            let Cell::Number(number) = &row.cells[at] else { return None };
            number.value
        }
        Formula::Constant(c) => *c,
        Formula::Add(a, b) => of(a)? + of(b)?,
        Formula::Subtract(a, b) => of(a)? - of(b)?,
        Formula::Multiply(a, b) => of(a)? * of(b)?,
        Formula::Divide(a, b) => of(a)? / of(b)?,
        Formula::Sqrt(a) => of(a)?.sqrt(),
    })
}

fn tables() -> Vec<(String, Table)> {
    let of = |sample: &&str| {
        let document = report(checked(sample), "client");
        let tables: Vec<Table> = document.sheets.iter().flat_map(|s| s.tables.iter().map(|t| (**t).clone())).collect();
        tables.into_iter().map(|t| (format!("{} of {sample}", t.name), t)).collect::<Vec<_>>()
    };
    SAMPLES.iter().flat_map(of).collect()
}

#[test]
fn formulas_yield_what_stands_with_them() {
    let mut formulas = 0;
    for (name, table) in tables() {
        for row in &table.rows {
            for cell in &row.cells {
                let Cell::Number(number) = cell else { continue };
                let Some(formula) = &number.formula else { continue };
                let worked_out = value(formula, &table, row).unwrap_or_else(|| panic!("{name}: {formula:?} needs what is not there"));
                assert!((worked_out - number.value).abs() < 1e-9, "{name}: {formula:?} is {worked_out}, not {}", number.value);
                formulas += 1;
            }
        }
    }
    assert!(formulas > 100, "{formulas}");
}

#[test]
fn columns_have_one_key_and_a_heading_each() {
    for (name, table) in tables() {
        let keys: BTreeSet<&str> = table.columns.iter().map(|c| c.key.as_str()).collect();
        assert_eq!(keys.len(), table.columns.len(), "{name}");
        assert!(table.columns.iter().all(|c| !c.heading.is_empty() && !c.heading.contains('⟨')), "{name}");
        assert!(!table.caption.is_empty() && !table.caption.contains('⟨'), "{name}: {}", table.caption);
        assert!(table.rows.iter().all(|r| r.cells.len() == table.columns.len()), "{name}");
    }
}

#[test]
fn every_reading_is_traced_to_its_cell() {
    for sample in SAMPLES {
        let checked = checked(sample);
        let document = report(checked, "client");
        let Some(readings) = document.sheets.iter().flat_map(|s| &s.tables).find(|t| t.name == "readings") else { continue };
        let shown: BTreeSet<String> = readings
            .rows
            .iter()
            .flat_map(|r| &r.cells)
            .filter_map(|c| if let Cell::Number(n) = c { n.cell.as_ref() } else { None })
            .map(ToString::to_string)
            .collect();
        for reading in checked.visit.rows.iter().flat_map(|r| &r.readings).filter(|r| r.value.value().is_some()) {
            assert!(shown.contains(&reading.cell.to_string()), "{sample}: {}", reading.cell);
        }
    }
}
