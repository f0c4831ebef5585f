//! A sheet cut into as many worksheets as its rows need.

use crate::report::document::{Sheet, Table};
use std::ops::Range;

/// Rows kept for a chart.
pub(super) const CHART_ROWS: usize = 20;
/// Rows of a table besides its data: the gap above it, its caption, its header.
const FRAME_ROWS: usize = 3;

/// What one worksheet shows of a sheet.
pub(super) struct Page<'a> {
    /// The sheet.
    pub sheet: &'a Sheet,
    /// Whether it begins here: facts stand on the first page alone.
    pub first: bool,
    /// Its tables, or parts of them.
    pub parts: Vec<Part<'a>>,
}

/// Some rows of a table.
pub(super) struct Part<'a> {
    /// The table.
    pub table: &'a Table,
    /// Which of its rows.
    pub rows: Range<usize>,
}

/// The worksheets of a sheet, each at most `most_rows` long.
pub(super) fn pages(sheet: &Sheet, most_rows: usize) -> Vec<Page<'_>> {
    let mut pages = vec![Page { sheet, first: true, parts: Vec::new() }];
    let mut left = most_rows.saturating_sub(1 + sheet.facts.len());
    for table in &sheet.tables {
        let chart = if sheet.chart.as_ref().is_some_and(|c| c.table == table.name) { CHART_ROWS } else { 0 };
        let frame = FRAME_ROWS + chart;
        let mut begin = 0;
        loop {
            if left < frame + 1 {
                pages.push(Page { sheet, first: false, parts: Vec::new() });
                left = most_rows.saturating_sub(1).max(frame + 1);
            }
            let end = table.rows.len().min(begin + left - frame);
            left = left.saturating_sub(frame + (end - begin).max(1));
            if let Some(page) = pages.last_mut() {
                page.parts.push(Part { table, rows: begin..end });
            }
            begin = end;
            if begin >= table.rows.len() {
                break;
            }
        }
    }
    pages
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::report::document::Row;
    use std::sync::Arc;

    fn table(rows: usize) -> Arc<Table> {
        let rows = vec![Row { cells: Vec::new(), group: false }; rows];
        Arc::new(Table { name: String::new(), caption: String::new(), columns: Vec::new(), rows, when_empty: String::new() })
    }

    fn layout(facts: usize, tables: &[usize], most: usize) -> Vec<Vec<(usize, usize)>> {
        let facts = vec![(String::new(), String::new()); facts];
        let sheet = Sheet { name: String::new(), facts, tables: tables.iter().map(|&n| table(n)).collect(), chart: None };
        pages(&sheet, most).iter().map(|p| p.parts.iter().map(|t| (t.rows.start, t.rows.end)).collect()).collect()
    }

    #[test]
    fn rows_that_do_not_fit_go_on_in_a_further_worksheet() {
        assert_eq!(layout(0, &[], 10), [vec![]]);
        assert_eq!(layout(0, &[6], 10), [vec![(0, 6)]]);
        assert_eq!(layout(0, &[7], 10), [vec![(0, 6)], vec![(6, 7)]]);
        assert_eq!(layout(2, &[0, 3], 12), [vec![(0, 0), (0, 2)], vec![(2, 3)]]);
        assert_eq!(layout(9, &[2], 10), [vec![], vec![(0, 2)]]);
        assert_eq!(layout(0, &[13], 10), [vec![(0, 6)], vec![(6, 12)], vec![(12, 13)]]);
    }
}
