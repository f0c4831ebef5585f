//! A column formula as a spreadsheet writes it, and what it yields.

use super::grid::Grid;
use crate::report::document::{Cell, Formula, Number, Row};
use rust_xlsxwriter::utility::row_col_to_cell;

/// How far a recalculation may be from the computed value, relative to the larger of it and 1: rounding, nothing more.
const ROUNDING: f64 = 1e-9;

/// One row of a table on its worksheet.
#[derive(Clone, Copy)]
pub(super) struct Line<'a> {
    /// Where the columns stand.
    pub grid: &'a Grid<'a>,
    /// The row.
    pub row: &'a Row,
    /// Its worksheet row.
    pub at: u32,
}

/// The number's formula over its row, if it has one and a recalculation yields the computed value. Where a column it names has no
/// number in this row, a spreadsheet would calculate with 0: the number then stands alone.
pub(super) fn live(number: &Number, line: Line) -> Option<String> {
    let formula = number.formula.as_ref()?;
    let yields = value(formula, line)?;
    let agrees = (yields - number.value).abs() <= ROUNDING * number.value.abs().max(1.0);
    if agrees { text(formula, line, 0) } else { None }
}

/// What the formula yields in this row; `None` where a number is missing or the result is not finite.
fn value(formula: &Formula, line: Line) -> Option<f64> {
    let both = |a, b| Some((value(a, line)?, value(b, line)?));
    let yields = match formula {
        Formula::Column(key) => match line.row.cells.get(line.grid.find(key)?.index)? {
            Cell::Number(n) => n.value,
            _ => return None,
        },
        Formula::Constant(c) => *c,
        Formula::Add(a, b) => both(a, b).map(|(a, b)| a + b)?,
        Formula::Subtract(a, b) => both(a, b).map(|(a, b)| a - b)?,
        Formula::Multiply(a, b) => both(a, b).map(|(a, b)| a * b)?,
        Formula::Divide(a, b) => both(a, b).map(|(a, b)| a / b)?,
        Formula::Sqrt(a) => value(a, line)?.sqrt(),
    };
    yields.is_finite().then_some(yields)
}

/// The formula in A1 notation, with no more brackets than its order of evaluation needs; `binds` is how tightly its place binds.
fn text(formula: &Formula, line: Line, binds: u8) -> Option<String> {
    let (a, sign, b, own) = match formula {
        Formula::Column(key) => return Some(row_col_to_cell(line.at, line.grid.find(key)?.at)),
        Formula::Constant(c) if *c < 0.0 => return Some(format!("({c})")),
        Formula::Constant(c) => return Some(c.to_string()),
        Formula::Sqrt(a) => return Some(format!("SQRT({})", text(a, line, 0)?)),
        Formula::Add(a, b) => (a, '+', b, 1),
        Formula::Subtract(a, b) => (a, '-', b, 1),
        Formula::Multiply(a, b) => (a, '*', b, 2),
        Formula::Divide(a, b) => (a, '/', b, 2),
    };
    let written = format!("{}{sign}{}", text(a, line, own)?, text(b, line, own + 1)?);
    Some(if own < binds { format!("({written})") } else { written })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::render::xlsx::grid;
    use crate::report::document::{Column, ColumnKind, Table};

    fn column(key: &str) -> Formula {
        Formula::Column(key.to_owned())
    }

    fn pair(make: fn(Box<Formula>, Box<Formula>) -> Formula, a: Formula, b: Formula) -> Formula {
        make(Box::new(a), Box::new(b))
    }

    /// The formula of a number in a row that holds 120.5 ± 0.9, 118.5, nothing and 239.
    fn written(value: f64, formula: Formula) -> Option<String> {
        let measured = Number { uncertainty: Some(0.9), ..Number::new(120.5, 1) };
        let cells = vec![Cell::Number(measured), Cell::Number(Number::new(118.5, 1)), Cell::Empty, Cell::Number(Number::new(239.0, 1))];
        let row = Row { cells, group: false };
        let columns = ["a", "b", "none", "ab"].map(|key| Column {
            key: key.to_owned(),
            heading: String::new(),
            unit: None,
            kind: ColumnKind::Number,
        });
        let table =
            Table { name: String::new(), caption: String::new(), columns: columns.to_vec(), rows: vec![row], when_empty: String::new() };
        let grid = grid::of(&table);
        live(&Number { formula: Some(formula), ..Number::new(value, 1) }, Line { grid: &grid, row: &table.rows[0], at: 6 })
    }

    #[test]
    fn formulas_name_cells_and_keep_their_order() {
        use Formula::{Add, Constant, Divide, Multiply, Sqrt, Subtract};
        let sum = || pair(Add, column("a"), column("b"));
        assert_eq!(written(239.0, sum()).as_deref(), Some("A7+C7"));
        assert_eq!(written(0.0, pair(Subtract, sum(), column("ab"))).as_deref(), Some("A7+C7-E7"));
        assert_eq!(written(0.0, pair(Subtract, column("ab"), sum())).as_deref(), Some("E7-(A7+C7)"));
        assert_eq!(written(119.5, pair(Divide, sum(), Constant(2.0))).as_deref(), Some("(A7+C7)/2"));
        assert_eq!(written(-241.0, pair(Multiply, column("a"), Constant(-2.0))).as_deref(), Some("A7*(-2)"));
        assert_eq!(written(11.0, Sqrt(Box::new(pair(Add, column("a"), Constant(0.5))))).as_deref(), Some("SQRT(A7+0.5)"));
    }

    #[test]
    fn a_formula_that_would_say_something_else_is_not_written() {
        use Formula::{Add, Constant, Divide, Sqrt};
        assert_eq!(written(120.5, pair(Add, column("a"), column("none"))), None);
        assert_eq!(written(120.5, column("unknown")), None);
        assert_eq!(written(239.1, pair(Add, column("a"), column("b"))), None);
        assert_eq!(written(f64::INFINITY, pair(Divide, column("a"), Constant(0.0))), None);
        assert_eq!(written(f64::NAN, Sqrt(Box::new(Constant(-1.0)))), None);
    }
}
