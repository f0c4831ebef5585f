//! One worksheet: title, facts, tables, chart, print set-up.

use super::formula::{self, Line};
use super::grid::{self, Grid, Place};
use super::page::{CHART_ROWS, Page, Part};
use super::style::{Styles, color, inset, mark_words};
use super::{cell, chart, width};
use crate::render::text::{not_finite, visible};
use crate::report::document::{Cell, ColumnKind, Meta, Number, PageSize};
use rust_xlsxwriter::{Format, Formula, IgnoreError, Worksheet, XlsxError};

/// Rows above the data that may stay in view while it scrolls.
const MOST_FROZEN: u32 = 8;
/// From so many columns on, the names at the left stay in view too.
const WIDE_TABLE: u16 = 8;
/// Width in characters that a portrait page prints at full size.
const PORTRAIT: f64 = 96.0;
/// Height of a line of text in points.
const LINE: f64 = 15.0;
/// The highest a row may be, in points (ECMA-376: 409.5).
const HIGHEST: f64 = 405.0;
/// Width of the lines of a long fact.
const FACT_ROOM: f64 = 78.0;
/// Width of a column that was given none.
const DEFAULT_WIDTH: f64 = 8.43;

/// Writes one worksheet.
pub(super) fn write(sheet: &mut Worksheet, page: &Page, meta: &Meta, styles: &Styles) -> Result<(), XlsxError> {
    let widths = width::columns(page);
    for (col, width) in (0..).zip(&widths) {
        sheet.set_column_width(col, *width)?;
    }
    set_up_print(sheet, meta, widths.iter().sum::<f64>() > PORTRAIT);
    sheet.set_screen_gridlines(false).set_tab_color(color(styles.accent));
    let mut writer = Writer { sheet, page, styles, widths: &widths, row: 0 };
    writer.title()?;
    writer.facts()?;
    for part in &page.parts {
        writer.part(part)?;
    }
    Ok(())
}

struct Writer<'a> {
    sheet: &'a mut Worksheet,
    page: &'a Page<'a>,
    styles: &'a Styles,
    widths: &'a [f64],
    /// The next free row.
    row: u32,
}

impl Writer<'_> {
    fn title(&mut self) -> Result<(), XlsxError> {
        self.sheet.set_row_height(0, 27)?;
        let name = self.sheet.name();
        self.row = 1;
        cell::write(self.sheet, 0, 0, &name, &self.styles.title)
    }

    fn facts(&mut self) -> Result<(), XlsxError> {
        let facts: &[(String, String)] = if self.page.first { &self.page.sheet.facts } else { &[] };
        for (label, value) in facts {
            cell::write(self.sheet, self.row, 0, label, &self.styles.label)?;
            self.fact(value)?;
            self.row += 1;
        }
        Ok(())
    }

    /// A value runs on over the empty cells at its right; one too long for them is wrapped over as many as a line needs.
    fn fact(&mut self, value: &str) -> Result<(), XlsxError> {
        let (mut last, mut room) = (0, 0.0);
        while room < FACT_ROOM {
            last += 1;
            room += self.widths.get(usize::from(last)).copied().unwrap_or(DEFAULT_WIDTH);
        }
        let lines = width::lines(value, room);
        if lines == 1 {
            return cell::write(self.sheet, self.row, 1, value, &self.styles.value);
        }
        let wrapped = self.styles.value.clone().set_text_wrap();
        if last > 1 {
            self.sheet.merge_range(self.row, 1, self.row, last, "", &wrapped)?;
        }
        self.set_lines(lines)?;
        cell::write(self.sheet, self.row, 1, value, &wrapped)
    }

    /// Makes the row as high as its lines. Programs differ in whether they do so themselves, and none does for merged cells.
    fn set_lines(&mut self, lines: u32) -> Result<(), XlsxError> {
        if lines > 1 {
            self.sheet.set_row_height(self.row, (f64::from(lines) * LINE + 1.0).min(HIGHEST))?;
        }
        Ok(())
    }

    fn part(&mut self, part: &Part) -> Result<(), XlsxError> {
        let alone = self.page.parts.len() == 1;
        self.row += u32::from(self.row > 1);
        let repeats_title = alone && part.table.caption == self.page.sheet.name;
        if !part.table.caption.is_empty() && !repeats_title {
            cell::write(self.sheet, self.row, 0, &part.table.caption, &self.styles.caption)?;
            self.row += 1;
        }
        let grid = grid::of(part.table);
        let header = self.row;
        let filtered = alone && grid.width > 0 && !part.rows.is_empty();
        self.header(&grid, filtered)?;
        if part.rows.is_empty() {
            cell::write(self.sheet, self.row, 0, &part.table.when_empty, &self.styles.value)?;
            self.row += 1;
            return Ok(());
        }
        let first = self.row;
        self.rows(part, &grid)?;
        let last = self.row - 1;
        if grid.width > 0 {
            self.sheet.ignore_error_range(first, 0, last, grid.width - 1, IgnoreError::NumberStoredAsText)?;
            if filtered {
                self.hold_header(&grid, header, last)?;
            }
        }
        self.chart(part, &grid, header, (first, last))
    }

    /// The headings; where the table is filtered, with a line below them for the filter's buttons, which cover what is there.
    fn header(&mut self, grid: &Grid, filtered: bool) -> Result<(), XlsxError> {
        let mut most = 1;
        for place in &grid.places {
            let text = width::heading(place.column);
            let format = match place.column.kind {
                ColumnKind::Number => self.styles.number_heading(place.uncertainty.is_some(), filtered),
                _ => inset(&self.styles.heading(filtered), place.at),
            };
            cell::write(self.sheet, self.row, place.at, &text, &format)?;
            most = most.max(width::lines(&text, self.width(place.at)));
            if let Some(at) = place.uncertainty {
                let unit = place.column.unit.map_or("", |u| u.symbol());
                cell::write(self.sheet, self.row, at, format!("± {unit}").trim_end(), &self.styles.heading(filtered))?;
            }
        }
        self.set_lines(most + u32::from(filtered))?;
        self.row += u32::from(grid.width > 0);
        Ok(())
    }

    fn width(&self, col: u16) -> f64 {
        self.widths.get(usize::from(col)).copied().unwrap_or(DEFAULT_WIDTH)
    }

    fn rows(&mut self, part: &Part, grid: &Grid) -> Result<(), XlsxError> {
        let first = self.row;
        let mut words = vec![false; part.table.columns.len()];
        for row in part.table.rows.get(part.rows.clone()).unwrap_or_default() {
            let line = Line { grid, row, at: self.row };
            let mut most = 1;
            for place in &grid.places {
                let cell = row.cells.get(place.index).unwrap_or(&Cell::Empty);
                words[place.index] |= matches!(cell, Cell::Signal(_) | Cell::Verdict(_));
                self.cell(cell, place, line)?;
                most = most.max(if row.group { 1 } else { self.lines(cell, place) });
            }
            self.set_lines(most)?;
            self.row += 1;
        }
        for place in grid.places.iter().filter(|p| words[p.index]) {
            mark_words(self.sheet, (first, self.row - 1), place.at)?;
        }
        Ok(())
    }

    fn cell(&mut self, content: &Cell, place: &Place, line: Line) -> Result<(), XlsxError> {
        let Self { styles, row, .. } = *self;
        let text = &inset(if line.row.group { &styles.group } else { &styles.text }, place.at);
        if let Some(beside) = place.uncertainty {
            self.sheet.write_blank(row, beside, text)?;
        }
        match content {
            Cell::Empty => self.sheet.write_blank(row, place.at, text).map(|_| ()),
            Cell::Text(words) => cell::write(self.sheet, row, place.at, words, text),
            Cell::Rich(words) => cell::write_rich(self.sheet, row, place.at, words, text),
            Cell::Number(number) => self.number(number, place, line),
            Cell::Signal(signal) => cell::write(self.sheet, row, place.at, signal.word(), text),
            Cell::Verdict(verdict) => cell::write(self.sheet, row, place.at, verdict.name(), text),
        }
    }

    fn lines(&self, content: &Cell, place: &Place) -> u32 {
        match content {
            Cell::Text(text) => width::lines(text, self.width(place.at)),
            Cell::Rich(text) => width::lines(&cell::plain(text), self.width(place.at)),
            Cell::Empty | Cell::Number(_) | Cell::Signal(_) | Cell::Verdict(_) => 1,
        }
    }

    fn number(&mut self, number: &Number, place: &Place, line: Line) -> Result<(), XlsxError> {
        let format = self.styles.number(number, place.uncertainty.is_some());
        if !number.value.is_finite() {
            return cell::write(self.sheet, self.row, place.at, not_finite(number.value), &format);
        }
        match formula::live(number, line) {
            Some(text) => {
                let formula = Formula::new(text).set_result(number.value.to_string());
                self.sheet.write_formula_with_format(self.row, place.at, formula, &format)?
            }
            None => self.sheet.write_number_with_format(self.row, place.at, number.value, &format)?,
        };
        if let (Some(at), Some(uncertainty)) = (place.uncertainty, number.uncertainty.filter(|u| u.is_finite())) {
            self.sheet.write_number_with_format(self.row, at, uncertainty, &self.styles.uncertainty(number.decimals))?;
        }
        Ok(())
    }

    /// Filter, frozen and repeated header of a table that has its worksheet to itself.
    fn hold_header(&mut self, grid: &Grid, header: u32, last: u32) -> Result<(), XlsxError> {
        self.sheet.autofilter(header, 0, last, grid.width - 1)?;
        self.sheet.set_repeat_rows(header, header)?;
        let named = grid.places.first().is_some_and(|p| p.column.kind == ColumnKind::Name);
        if header < MOST_FROZEN {
            self.sheet.set_freeze_panes(header + 1, u16::from(named && grid.width >= WIDE_TABLE))?;
        }
        Ok(())
    }

    fn chart(&mut self, part: &Part, grid: &Grid, header: u32, rows: (u32, u32)) -> Result<(), XlsxError> {
        let Some(wanted) = self.page.sheet.chart.as_ref().filter(|c| c.table == part.table.name) else {
            return Ok(());
        };
        self.row += 1;
        let mut cells = part.table.rows.iter().flat_map(|row| &row.cells);
        let below_zero = cells.any(|c| matches!(c, Cell::Number(n) if n.value < 0.0));
        let place = chart::Place { sheet: &self.sheet.name(), grid, header, rows, below_zero, title: self.row };
        if let Some(drawn) = chart::column(wanted, &place, self.styles.accent) {
            // The title is a cell's text, behind the chart: a text given to the chart itself could be taken for a reference.
            cell::write(self.sheet, self.row, 0, &wanted.title, &Format::new())?;
            self.sheet.insert_chart(self.row, 0, &drawn)?;
            self.row += u32::try_from(CHART_ROWS).unwrap_or(0) - 1;
        }
        Ok(())
    }
}

/// Paper, direction, one page wide, running lines.
fn set_up_print(sheet: &mut Worksheet, meta: &Meta, wide: bool) {
    sheet.set_paper_size(match meta.page {
        PageSize::Letter => 1,
        PageSize::A4 => 9,
    });
    if wide {
        sheet.set_landscape();
    }
    sheet.set_margins(0.6, 0.6, 0.8, 0.8, 0.4, 0.4).set_print_fit_to_pages(1, 0);
    sheet.set_header(format!("&L{}&R{}", running(&meta.header_left), running(&meta.header_right)));
    let pages = if meta.page_words.is_empty() { "{page} / {pages}" } else { &meta.page_words };
    let pages = running(pages).replace("{pages}", "&N").replace("{page}", "&P");
    sheet.set_footer(format!("&L{}&C&A&R{pages}", running(&meta.footer_left)));
}

/// A running text: `&` begins a code there and is doubled; the whole line may have 255 characters, so each text gets 50.
fn running(text: &str) -> String {
    let line = visible(text).replace(['\n', '\t'], " ");
    let cut: String = line.chars().take(50).collect();
    cut.replace('&', "&&")
}
