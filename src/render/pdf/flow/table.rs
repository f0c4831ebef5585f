//! Tables: widths from the content, numbers aligned on their decimal mark, headers repeated on each page.

mod cell;
mod columns;

use super::super::shape::{Line, Run, Span};
use super::super::strip::{Mark, Paint, Strip};
use super::super::structure::Attribute;
use super::{Flow, LEADING, Place, baseline};
use crate::report::document::{Inline, Row, Table};
use crate::report::drawing::Colour;
use cell::{Content, Entry};
use columns::{BASE, Columns};

/// Above and below the text of a row.
const AIR: f32 = 2.6;
/// Lines of a row that are kept together; a longer row is divided.
const MOST_LINES: usize = 36;

/// Nodes of a table that is being laid out, and how it is.
struct Grid {
    columns: Columns,
    /// Left of the table.
    x: f32,
    /// Position in the list of repeated headers.
    number: usize,
    /// Size of its type.
    size: f32,
}

impl Flow<'_> {
    /// A table with its caption above.
    pub(super) fn table(&mut self, table: &Table, place: Place) {
        if table.columns.is_empty() {
            return;
        }
        let node = self.structure.add(place.node, "Table");
        let first = self.strips.len();
        if !table.caption.is_empty() {
            self.caption(&[Inline::Strong(vec![Inline::Text(table.caption.clone())])], Place { node, ..place });
        }
        if let Some(strip) = self.strips.get_mut(first) {
            strip.gap = 9.0;
        }
        for strip in &mut self.strips[first..] {
            strip.keep = true;
        }
        if table.rows.is_empty() {
            if !table.when_empty.is_empty() {
                let row = self.structure.add(node, "TR");
                let cell = self.structure.add(row, "TD");
                let spans = [Span::new(&table.when_empty, self.colour(Colour::Quiet))];
                self.text(&spans, BASE, Place { node: cell, ..place }, 2.0);
            }
            return;
        }
        let heads: Vec<Entry> = table.columns.iter().map(|c| self.head(c)).collect();
        let rows: Vec<Vec<Entry>> = table.rows.iter().map(|r| self.entries(table, r)).collect();
        let columns = Columns::fit(table, &heads, &rows, place.width);
        let grid = Grid { x: place.x, number: self.headers.len(), size: BASE * columns.scale, columns };
        self.header(heads, &grid, node);
        let body = self.structure.add(node, "TBody");
        let count = table.rows.len();
        for (i, (row, entries)) in table.rows.iter().zip(rows).enumerate() {
            self.row(row, entries, &grid, body);
            // No row of a table stands alone below its header or at the head of a page.
            if let Some(strip) = self.strips.last_mut().filter(|_| count > 1 && (i == 0 || i + 2 == count)) {
                strip.keep = true;
            }
        }
    }

    fn header(&mut self, heads: Vec<Entry>, grid: &Grid, table: usize) {
        let group = self.structure.add(table, "THead");
        let row = self.structure.add(group, "TR");
        let nodes: Vec<usize> = heads.iter().map(|_| self.structure.add_with(row, "TH", Attribute::ColumnScope)).collect();
        let mut strips = self.lay(heads, grid, &nodes, false);
        if let Some(last) = strips.last_mut() {
            let rule = self.rule(grid, last.height, 0.9, Colour::Accent);
            last.marks.push(rule);
        }
        for strip in &mut strips {
            strip.keep = true;
        }
        self.headers.push(strips.clone());
        self.strips.extend(strips.into_iter().map(|s| Strip { table: None, ..s }));
    }

    fn row(&mut self, row: &Row, entries: Vec<Entry>, grid: &Grid, body: usize) {
        let node = self.structure.add(body, "TR");
        let nodes: Vec<usize> = if row.group {
            vec![self.structure.add_with(node, "TD", Attribute::Span(grid.columns.widths.len()))]
        } else {
            entries.iter().map(|_| self.structure.add(node, "TD")).collect()
        };
        let mut strips = self.lay(entries, grid, &nodes, row.group);
        if let Some(last) = strips.last_mut() {
            let rule = self.rule(grid, last.height, 0.35, Colour::Faint);
            last.marks.push(rule);
            last.keep = row.group;
        }
        self.strips.extend(strips);
    }

    fn rule(&self, grid: &Grid, y: f32, width: f32, colour: Colour) -> Mark {
        let points = vec![(grid.x, y), (grid.x + grid.columns.total(), y)];
        Mark { node: None, paints: vec![Paint::Line { points, width, colour: self.colour(colour), dash: None, round: false }] }
    }

    /// One row as strips; more than one where it has more lines than are kept together.
    fn lay(&mut self, entries: Vec<Entry>, grid: &Grid, nodes: &[usize], group: bool) -> Vec<Strip> {
        let mut left = grid.x;
        let mut cells: Vec<(f32, Vec<Line>, Vec<Span>, usize)> = Vec::new();
        for (i, (entry, node)) in entries.into_iter().zip(nodes).enumerate() {
            let width = if group { grid.columns.total() } else { grid.columns.widths.get(i).copied().unwrap_or(0.0) };
            let (lines, spans, shift) = self.place(entry, grid, i, width);
            cells.push((left + shift, lines, spans, *node));
            left += width;
        }
        let count = cells.iter().map(|c| c.1.len()).max().unwrap_or(0).max(1);
        let pitch = grid.size * LEADING * 0.95;
        let parts = count.div_ceil(MOST_LINES);
        let mut strips: Vec<Strip> = (0..parts).map(|_| Strip { table: Some(grid.number), ..Strip::default() }).collect();
        for (x, lines, spans, node) in cells {
            for (i, line) in lines.into_iter().enumerate() {
                let y = AIR + (i % MOST_LINES) as f32 * pitch + baseline(grid.size) - 0.5;
                self.set(&mut strips[i / MOST_LINES], line, &spans, (x, y), node);
            }
        }
        for (part, strip) in strips.iter_mut().enumerate() {
            let lines = (count - part * MOST_LINES).min(MOST_LINES);
            strip.height = lines as f32 * pitch + 2.0 * AIR;
        }
        strips
    }

    /// Lines of a cell with how far they are moved to the right in it.
    fn place(&self, entry: Entry, grid: &Grid, column: usize, width: f32) -> (Vec<Line>, Vec<Span>, f32) {
        let k = grid.columns.scale;
        // A hair more than the widths say, so that rounding breaks no line.
        let room = (width - grid.columns.padding + 0.05).max(1.0) / k;
        match entry.content {
            Content::Empty => (Vec::new(), Vec::new(), 0.0),
            Content::Text(shaped) => (shaped.lines(room).into_iter().map(|l| scaled(l, k)).collect(), entry.spans, 0.0),
            Content::Right(shaped) => {
                let lines: Vec<Line> = shaped.lines(room).into_iter().map(|l| scaled(l, k)).collect();
                let lines = lines.into_iter().map(|l| moved(&l, (room * k - l.width).max(0.0))).collect();
                (lines, entry.spans, 0.0)
            }
            Content::Number { shaped, whole } => {
                let right = grid.columns.behind.get(column).copied().unwrap_or(0.0) * k;
                let shift = (width - grid.columns.padding - right - whole * k).max(0.0);
                (shaped.lines(f32::MAX).into_iter().map(|l| scaled(l, k)).collect(), entry.spans, shift)
            }
        }
    }
}

/// A line in another size.
fn scaled(line: Line, k: f32) -> Line {
    let run = |r: Run| Run {
        x: r.x * k,
        width: r.width * k,
        size: r.size * k,
        glyphs: r
            .glyphs
            .into_iter()
            .map(|g| super::super::shape::Glyph { advance: g.advance * k, offset: (g.offset.0 * k, g.offset.1 * k), ..g })
            .collect(),
        ..r
    };
    Line { width: line.width * k, runs: line.runs.into_iter().map(run).collect() }
}

/// A line moved to the right.
fn moved(line: &Line, dx: f32) -> Line {
    Line { width: line.width, runs: line.runs.iter().map(|r| Run { x: r.x + dx, ..r.clone() }).collect() }
}
