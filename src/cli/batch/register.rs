//! The register of a batch: a workbook and a csv of all visits in the journal.

use super::journal::{Entry, Journal, Status, VisitLine};
use crate::cli::files;
use crate::quantity::Unit;
use crate::render;
use crate::report::document::{Cell, Chart, Column, ColumnKind, Document, Inline, Meta, Number, Row, Sheet, Table};
use crate::results::Signal;
use crate::wording::Language;
use std::path::Path;
use std::sync::Arc;

/// File name of the workbook in the output folder.
pub const NAME: &str = "register.xlsx";

/// Writes the workbook and the csv, replacing those of an earlier run.
pub fn write(folder: &Path, journal: &Journal, language: &Language) -> anyhow::Result<()> {
    let entries: Vec<&Entry> = journal.entries().collect();
    let visits = visits(&entries, language);
    let csv = csv(&visits)?;
    let document = Document {
        meta: Meta { title: language.text("register.title"), language: language.tag.clone(), ..Meta::default() },
        blocks: Vec::new(),
        sheets: vec![
            sheet("register.visits", visits, None, language),
            sheet("register.failures", failures(&entries, language), None, language),
            sheet("register.overview", overview(&entries, language), Some(chart(language)), language),
        ],
    };
    files::write(&folder.join(NAME), &render::xlsx::write(&document)?, true)?;
    files::write(&folder.join("register.csv"), &csv, true)
}

fn sheet(name: &str, table: Table, chart: Option<Chart>, language: &Language) -> Sheet {
    Sheet { name: language.text(name), facts: Vec::new(), tables: vec![Arc::new(table)], chart }
}

fn column(key: &str, heading: String, unit: Option<Unit>, kind: ColumnKind) -> Column {
    Column { key: key.to_owned(), heading, unit, kind }
}

fn text(value: Option<&str>) -> Cell {
    value.filter(|v| !v.is_empty()).map_or(Cell::Empty, |v| Cell::Text(v.to_owned()))
}

fn count(n: usize) -> Cell {
    Cell::Number(Number::new(n as f64, 0))
}

fn visits(entries: &[&Entry], language: &Language) -> Table {
    let word = |key: &str| language.text(&format!("register.{key}"));
    let plain = |key: &str, kind| column(key, word(key), None, kind);
    let mut columns = vec![plain("file", ColumnKind::Name), plain("job", ColumnKind::Name)];
    columns.extend(
        [("client", ColumnKind::Text), ("address", ColumnKind::Text), ("date", ColumnKind::Name), ("worst", ColumnKind::Signal)]
            .map(|(k, t)| plain(k, t)),
    );
    columns.extend(Signal::ALL.iter().rev().map(|s| column(s.word(), s.word().to_owned(), None, ColumnKind::Number)));
    columns.extend([
        plain("cause", ColumnKind::Text),
        column("probability", word("probability"), Some(Unit::Percent), ColumnKind::Number),
        plain("not-ruled-out", ColumnKind::Text),
        plain("left-out", ColumnKind::Number),
        plain("reports", ColumnKind::Text),
        plain("status", ColumnKind::Name),
        column("seconds", word("seconds"), Some(Unit::Second), ColumnKind::Number),
    ]);
    let rows = entries.iter().map(|e| Row { cells: visit(e, &word), group: false }).collect();
    Table { name: "visits".into(), caption: word("visits"), columns, rows, when_empty: word("no-visits") }
}

fn visit(entry: &Entry, word: &impl Fn(&str) -> String) -> Vec<Cell> {
    let none = VisitLine::default();
    let v = entry.visit.as_ref().unwrap_or(&none);
    let mut cells = vec![
        text(Some(&entry.file)),
        text(v.job.as_deref()),
        text(v.client.as_deref()),
        text(v.address.as_deref()),
        text(v.date.as_deref()),
    ];
    cells.push(v.worst.map_or(Cell::Empty, Cell::Signal));
    cells.extend(v.counts.map(count));
    cells.push(text(v.cause.as_deref()));
    cells.push(v.probability.map_or(Cell::Empty, |p| Cell::Number(Number::new(100.0 * p, 0))));
    cells.push(text(Some(&v.not_ruled_out.join(", "))));
    cells.push(count(v.left_out));
    cells.push(links(entry));
    cells.push(Cell::Text(word(if entry.status == Status::Written { "written" } else { "failed" })));
    cells.push(Cell::Number(Number::new(entry.seconds, 3)));
    cells
}

/// Links to the reports, which lie beside the register. Names hold nothing but letters, digits, `-` and `_`.
fn links(entry: &Entry) -> Cell {
    let mut inlines = Vec::new();
    for output in &entry.outputs {
        if !inlines.is_empty() {
            inlines.push(Inline::Text(", ".into()));
        }
        inlines.push(Inline::Link { href: output.name.clone(), text: vec![Inline::Text(output.name.clone())] });
    }
    if inlines.is_empty() { Cell::Empty } else { Cell::Rich(inlines) }
}

fn failures(entries: &[&Entry], language: &Language) -> Table {
    let word = |key: &str| language.text(&format!("register.{key}"));
    let rows = entries.iter().filter(|e| e.status == Status::Failed);
    Table {
        name: "failures".into(),
        caption: word("failures"),
        columns: vec![column("file", word("file"), None, ColumnKind::Name), column("reason", word("reason"), None, ColumnKind::Text)],
        rows: rows.map(|e| Row { cells: vec![text(Some(&e.file)), text(e.reason.as_deref())], group: false }).collect(),
        when_empty: word("no-failures"),
    }
}

fn overview(entries: &[&Entry], language: &Language) -> Table {
    let word = |key: &str| language.text(&format!("register.{key}"));
    let of = |worst: Option<Signal>| {
        entries.iter().filter(|e| e.status == Status::Written && e.visit.as_ref().is_some_and(|v| v.worst == worst)).count()
    };
    let mut rows: Vec<Vec<Cell>> = Signal::ALL.iter().rev().map(|&s| vec![Cell::Text(s.word().into()), count(of(Some(s)))]).collect();
    rows.push(vec![Cell::Text(word("nothing")), count(of(None))]);
    rows.push(vec![Cell::Text(word("failed")), count(entries.iter().filter(|e| e.status == Status::Failed).count())]);
    Table {
        name: "overview".into(),
        caption: word("by-worst"),
        columns: vec![column("worst", word("worst"), None, ColumnKind::Text), column("count", word("count"), None, ColumnKind::Number)],
        rows: rows.into_iter().map(|cells| Row { cells, group: false }).collect(),
        when_empty: word("no-visits"),
    }
}

fn chart(language: &Language) -> Chart {
    let title = language.text("register.by-worst");
    Chart { table: "overview".into(), category: "worst".into(), values: vec!["count".into()], alt: title.clone(), title }
}

/// The table as csv. A text that a spreadsheet would take for a formula gets an apostrophe in front.
fn csv(table: &Table) -> anyhow::Result<Vec<u8>> {
    let mut writer = csv::Writer::from_writer(Vec::new());
    writer.write_record(table.columns.iter().map(|c| c.heading.as_str()))?;
    for row in &table.rows {
        writer.write_record(row.cells.iter().map(|cell| match cell {
            Cell::Empty => String::new(),
            Cell::Text(t) if t.starts_with(['=', '+', '-', '@', '\t', '\r']) => format!("'{t}"),
            Cell::Text(t) => t.clone(),
            Cell::Rich(inlines) => inlines.iter().map(plain).collect(),
            Cell::Number(n) => format!("{:.*}", usize::from(n.decimals), n.value),
            Cell::Signal(s) => s.word().to_owned(),
            Cell::Verdict(v) => v.name().to_owned(),
        }))?;
    }
    Ok(writer.into_inner()?)
}

fn plain(inline: &Inline) -> String {
    match inline {
        Inline::Text(t) => t.clone(),
        Inline::Strong(inner) | Inline::Emphasis(inner) | Inline::Link { text: inner, .. } => inner.iter().map(plain).collect(),
        Inline::Signal(s) => s.word().to_owned(),
        Inline::Break => " ".to_owned(),
    }
}
