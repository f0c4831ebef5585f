//! The block tree.
//!
//! Numbers stay numbers: a [`Cell::Number`] keeps value, unit, uncertainty, verdict and the workbook cell it came from, so that
//! the PDF can align it on its decimal mark, the XLSX can hold it as a number, and a reader can trace it.

use super::drawing::Drawing;
use crate::diag::CellRef;
use crate::quantity::Unit;
use crate::results::{Signal, Verdict};
use std::sync::Arc;

/// A report, ready to be rendered.
#[derive(Clone, Debug, Default)]
pub struct Document {
    /// Metadata and running lines.
    pub meta: Meta,
    /// The body.
    pub blocks: Vec<Block>,
    /// The sheets of the XLSX, in order; each table is also known to the body by its name.
    pub sheets: Vec<Sheet>,
}

/// Metadata, and what stands on every page.
#[derive(Clone, Debug, Default)]
pub struct Meta {
    /// Document title.
    pub title: String,
    /// Author: who prepared it.
    pub author: String,
    /// Subject line: site and date.
    pub subject: String,
    /// BCP 47 language tag.
    pub language: String,
    /// Date of issue, ISO 8601, from the workbook or the command line; never the clock.
    pub date: Option<String>,
    /// SHA-256 of the input in hexadecimal.
    pub input_sha256: String,
    /// Program name and version.
    pub producer: String,
    /// Left of the running header: title or company.
    pub header_left: String,
    /// Right of the running header: job number, client.
    pub header_right: String,
    /// Left of the footer: the hash's first characters and the version; the renderer adds `page X of Y` at the right.
    pub footer_left: String,
    /// Words for `page X of Y`, with `{page}` and `{pages}`.
    pub page_words: String,
    /// Letter or A4.
    pub page: PageSize,
    /// Accent colour as sRGB.
    pub accent: [u8; 3],
    /// Company logo for the first page.
    pub logo: Option<Image>,
    /// Decimal mark of printed numbers.
    pub decimal_mark: char,
}

/// Paper.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum PageSize {
    /// 8.5 × 11 in.
    #[default]
    Letter,
    /// 210 × 297 mm.
    A4,
}

impl PageSize {
    /// Width and height in points.
    #[must_use]
    pub fn points(self) -> (f64, f64) {
        match self {
            Self::Letter => (612.0, 792.0),
            Self::A4 => (595.276, 841.89),
        }
    }

    /// Width of the text between margins of 54 pt, in points.
    #[must_use]
    pub fn text_width(self) -> f64 {
        self.points().0 - 108.0
    }
}

/// A block of the body.
#[derive(Clone, Debug)]
pub enum Block {
    /// Heading; level 1 is the document's title.
    Heading {
        /// 1 to 4.
        level: u8,
        /// Text.
        text: Vec<Inline>,
        /// Link target within the document, unique.
        anchor: String,
    },
    /// Paragraph.
    Paragraph(Vec<Inline>),
    /// List; each item is a run of blocks.
    List {
        /// First number of an ordered list; `None` for bullets.
        start: Option<u64>,
        /// Items.
        items: Vec<Vec<Block>>,
    },
    /// Boxed caution, note or finding.
    Callout {
        /// Its signal word; `None` for a plain note.
        signal: Option<Signal>,
        /// Its heading, next to the signal word.
        title: Vec<Inline>,
        /// Content.
        blocks: Vec<Block>,
    },
    /// A typed table.
    Table(Arc<Table>),
    /// A drawing.
    Figure {
        /// Caption.
        caption: Vec<Inline>,
        /// The drawing, with its alternative text.
        drawing: Arc<Drawing>,
    },
    /// Photos, set two abreast where there are several.
    Photos(Vec<CaptionedImage>),
    /// Label and value pairs, set in two columns where they fit (job, client, address …).
    Facts(Vec<(String, Vec<Inline>)>),
    /// Lines to sign on: label (name, licence, date …) and what is already known.
    SignOff(Vec<(String, Option<String>)>),
    /// Begins a new page.
    PageBreak,
}

/// A run of text.
#[derive(Clone, Debug, PartialEq)]
pub enum Inline {
    /// Text as it stands.
    Text(String),
    /// Strong.
    Strong(Vec<Inline>),
    /// Emphasis.
    Emphasis(Vec<Inline>),
    /// Link: `https:…`, `mailto:…` or `#anchor`.
    Link {
        /// Target.
        href: String,
        /// Its text.
        text: Vec<Inline>,
    },
    /// A signal word with its drawn mark.
    Signal(Signal),
    /// A forced line break.
    Break,
}

/// A typed table.
#[derive(Clone, Debug, PartialEq)]
pub struct Table {
    /// Its name in templates and in the front matter: `findings`.
    pub name: String,
    /// Caption.
    pub caption: String,
    /// Columns.
    pub columns: Vec<Column>,
    /// Rows, each as long as `columns`.
    pub rows: Vec<Row>,
    /// Said where there are no rows.
    pub when_empty: String,
}

/// A column.
#[derive(Clone, Debug, PartialEq)]
pub struct Column {
    /// Stable key, for formulas and the front matter: `l1_n`.
    pub key: String,
    /// Heading.
    pub heading: String,
    /// Unit of its numbers, shown in the heading.
    pub unit: Option<Unit>,
    /// What it holds.
    pub kind: ColumnKind,
}

/// What a column holds; decides alignment, width and number format.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum ColumnKind {
    /// Short names that should not break: a location, a cell.
    Name,
    /// Running text that wraps.
    Text,
    /// Numbers, aligned on the decimal mark.
    Number,
    /// Signal words.
    Signal,
    /// Verdicts.
    Verdict,
}

/// A row.
#[derive(Clone, Debug, PartialEq)]
pub struct Row {
    /// Its cells.
    pub cells: Vec<Cell>,
    /// A heading that spans the row (a group), rather than data.
    pub group: bool,
}

/// A cell.
#[derive(Clone, Debug, PartialEq)]
pub enum Cell {
    /// Nothing: not measured.
    Empty,
    /// Text; never a formula, whatever it begins with.
    Text(String),
    /// Text with marks and links.
    Rich(Vec<Inline>),
    /// A number.
    Number(Number),
    /// A signal word.
    Signal(Signal),
    /// A verdict.
    Verdict(Verdict),
}

/// A number in a cell.
#[derive(Clone, Debug, PartialEq)]
pub struct Number {
    /// In the column's unit.
    pub value: f64,
    /// Digits after the decimal mark.
    pub decimals: u8,
    /// Expanded uncertainty.
    pub uncertainty: Option<f64>,
    /// How it was judged.
    pub verdict: Option<Verdict>,
    /// The workbook cell it came from.
    pub cell: Option<CellRef>,
    /// The formula that yields it from the same row, for the XLSX.
    pub formula: Option<Formula>,
}

impl Number {
    /// A plain number.
    #[must_use]
    pub fn new(value: f64, decimals: u8) -> Self {
        Self { value, decimals, uncertainty: None, verdict: None, cell: None, formula: None }
    }
}

/// A formula over the same row, by column keys; the XLSX renderer turns it into cell references.
#[derive(Clone, Debug, PartialEq)]
pub enum Formula {
    /// A column of this row.
    Column(String),
    /// A constant.
    Constant(f64),
    /// Sum.
    Add(Box<Formula>, Box<Formula>),
    /// Difference.
    Subtract(Box<Formula>, Box<Formula>),
    /// Product.
    Multiply(Box<Formula>, Box<Formula>),
    /// Quotient.
    Divide(Box<Formula>, Box<Formula>),
    /// Square root.
    Sqrt(Box<Formula>),
}

/// A sheet of the XLSX.
#[derive(Clone, Debug, PartialEq)]
pub struct Sheet {
    /// Its name.
    pub name: String,
    /// Lines above the first table: label and value.
    pub facts: Vec<(String, String)>,
    /// Its tables, one below the other.
    pub tables: Vec<Arc<Table>>,
    /// A native column chart over one of its tables.
    pub chart: Option<Chart>,
}

/// A native clustered column chart.
#[derive(Clone, Debug, PartialEq)]
pub struct Chart {
    /// Table it draws, by name.
    pub table: String,
    /// Key of the category column.
    pub category: String,
    /// Keys of the value columns.
    pub values: Vec<String>,
    /// Title.
    pub title: String,
    /// Alternative text.
    pub alt: String,
}

/// An image file as it is.
#[derive(Clone, Debug)]
pub struct Image {
    /// PNG or JPEG bytes.
    pub bytes: Arc<[u8]>,
    /// Alternative text.
    pub alt: String,
}

/// A photo and its caption.
#[derive(Clone, Debug)]
pub struct CaptionedImage {
    /// The photo.
    pub image: Image,
    /// Caption.
    pub caption: String,
}
