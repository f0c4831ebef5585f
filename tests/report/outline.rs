//! A document as text: what a reader reads, with the structure in the margin.

use midwire::report::document::{Block, Cell, Document, Inline, Number, Table};
use std::fmt::Write as _;

/// Rows of a table that are written out.
const MOST_ROWS: usize = 12;

pub fn document(document: &Document) -> String {
    let meta = &document.meta;
    let mut out = String::new();
    let _ = writeln!(out, "title   {}\nauthor  {}\nsubject {}", meta.title, meta.author, meta.subject);
    let _ = writeln!(out, "date    {}\nhead    {} | {}", meta.date.as_deref().unwrap_or("none"), meta.header_left, meta.header_right);
    let _ = writeln!(out, "foot    {} | {}\n", meta.footer_left, meta.page_words);
    blocks(&document.blocks, "", &mut out);
    out.push('\n');
    for sheet in &document.sheets {
        let tables: Vec<&str> = sheet.tables.iter().map(|t| t.name.as_str()).collect();
        let chart = sheet.chart.as_ref().map_or_else(String::new, |c| format!(", chart of {}", c.table));
        let _ = writeln!(out, "sheet   {}: {}{chart}", sheet.name, tables.join(", "));
    }
    out
}

fn blocks(blocks: &[Block], margin: &str, out: &mut String) {
    for block in blocks {
        self::block(block, margin, out);
    }
}

fn block(block: &Block, margin: &str, out: &mut String) {
    let deeper = format!("{margin}  ");
    let _ = match block {
        Block::Heading { level, text, anchor } => {
            writeln!(out, "\n{margin}{} {} <{anchor}>", "#".repeat(usize::from(*level)), inlines(text))
        }
        Block::Paragraph(text) => writeln!(out, "{margin}{}", inlines(text)),
        Block::List { start, items } => {
            for (n, item) in items.iter().enumerate() {
                let mark = start.map_or_else(|| "-".to_owned(), |s| format!("{}.", s + n as u64));
                let mut inner = String::new();
                self::blocks(item, &deeper, &mut inner);
                let _ = writeln!(out, "{margin}{mark} {}", inner.trim_start().trim_end());
            }
            Ok(())
        }
        Block::Callout { signal, title, blocks } => {
            let word = signal.map_or("note", midwire::results::Signal::word);
            let _ = writeln!(out, "{margin}[{word}] {}", inlines(title));
            self::blocks(blocks, &format!("{margin}| "), out);
            Ok(())
        }
        Block::Table(table) => {
            self::table(table, margin, out);
            Ok(())
        }
        Block::Figure { caption, drawing } => {
            writeln!(out, "{margin}figure {:.0} wide: {}\n{deeper}alt: {}", drawing.width, inlines(caption), drawing.alt)
        }
        Block::Photos(photos) => {
            let captions: Vec<&str> = photos.iter().map(|p| p.caption.as_str()).collect();
            writeln!(out, "{margin}photos: {}", captions.join(" | "))
        }
        Block::Facts(pairs) => {
            for (label, value) in pairs {
                let _ = writeln!(out, "{margin}{label}: {}", inlines(value));
            }
            Ok(())
        }
        Block::SignOff(lines) => {
            for (label, known) in lines {
                let _ = writeln!(out, "{margin}{label}: {}", known.as_deref().unwrap_or("________"));
            }
            Ok(())
        }
        Block::PageBreak => writeln!(out, "{margin}--- page ---"),
    };
}

fn table(table: &Table, margin: &str, out: &mut String) {
    let _ = writeln!(out, "{margin}table {}: {}", table.name, table.caption);
    let headings: Vec<String> =
        table.columns.iter().map(|c| c.unit.map_or_else(|| c.heading.clone(), |u| format!("{} [{u}]", c.heading))).collect();
    let _ = writeln!(out, "{margin}  {}", headings.join(" | "));
    for row in table.rows.iter().take(MOST_ROWS) {
        let cells: Vec<String> = row.cells.iter().map(cell).collect();
        let _ = writeln!(out, "{margin}  {}", cells.join(" | "));
    }
    if table.rows.len() > MOST_ROWS {
        let _ = writeln!(out, "{margin}  and {} more rows", table.rows.len() - MOST_ROWS);
    }
}

fn cell(cell: &Cell) -> String {
    match cell {
        Cell::Empty => String::new(),
        Cell::Text(text) => text.clone(),
        Cell::Rich(text) => inlines(text),
        Cell::Number(number) => self::number(number),
        Cell::Signal(signal) => signal.word().to_owned(),
        Cell::Verdict(verdict) => verdict.name().to_owned(),
    }
}

fn number(n: &Number) -> String {
    let mut out = format!("{:.*}", usize::from(n.decimals), n.value);
    if let Some(u) = n.uncertainty {
        let _ = write!(out, "±{u:.*}", usize::from(n.decimals));
    }
    if let Some(verdict) = n.verdict {
        let _ = write!(out, " {}", verdict.name());
    }
    if n.formula.is_some() {
        out.push_str(" =");
    }
    out
}

pub fn inlines(text: &[Inline]) -> String {
    text.iter()
        .map(|inline| match inline {
            Inline::Text(text) => text.clone(),
            Inline::Strong(inner) => format!("<b>{}</b>", inlines(inner)),
            Inline::Emphasis(inner) => format!("<i>{}</i>", inlines(inner)),
            Inline::Link { href, text } => format!("<a {href}>{}</a>", inlines(text)),
            Inline::Signal(signal) => format!("({signal})"),
            Inline::Break => "\n".to_owned(),
        })
        .collect()
}
