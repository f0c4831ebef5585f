//! What a template can place: tables, figures, facts, photos, a sign-off.

use crate::report::document::{Block, CaptionedImage, Cell, Inline, Row, Table};
use crate::report::drawing::Drawing;
use crate::report::tables;
use crate::results::Signal;
use crate::wording::{Language, Sentence};
use std::sync::Arc;

/// Rows of a table in the text; the XLSX has all of them.
const MOST_ROWS: usize = 400;

/// Kinds of place, each with the names it knows; a kind without names stands alone.
pub(in crate::report) fn known(scheme: &str) -> Option<Vec<&'static str>> {
    match scheme {
        "table" => Some(tables::known().collect()),
        "figure" => Some(FIGURES.to_vec()),
        "facts" => Some(FACTS.to_vec()),
        "signal" => Some(Signal::ALL.map(Signal::word).to_vec()),
        "photos" | "signoff" => Some(vec![""]),
        _ => None,
    }
}

/// All kinds of place.
pub(in crate::report) const SCHEMES: [&str; 6] = ["table", "figure", "facts", "signal", "photos", "signoff"];
/// All figures.
pub(in crate::report) const FIGURES: [&str; 4] = ["neutral-position", "run-tree", "exposure", "leg-load"];
/// All groups of facts.
const FACTS: [&str; 3] = ["site", "service", "document"];

/// Computed things by name.
pub(in crate::report) struct Places<'a> {
    /// The words.
    pub language: &'a Language,
    /// Tables that have rows.
    pub tables: Vec<Arc<Table>>,
    /// Figures with their captions; a name may stand for several.
    pub figures: Vec<(&'static str, String, Arc<Drawing>)>,
    /// Label and value pairs, by name.
    pub facts: Vec<(&'static str, Vec<(String, String)>)>,
    /// Photos that could be read.
    pub photos: Vec<CaptionedImage>,
    /// Lines to sign on.
    pub sign_off: Vec<(String, Option<String>)>,
}

impl Places<'_> {
    /// The table as it stands in the text: the same that the XLSX has where the caption stays and it is not too long. A longer one
    /// is cut, and its last row says so.
    fn shown(&self, table: &Arc<Table>, caption: &str) -> Arc<Table> {
        let more = table.rows.len().saturating_sub(MOST_ROWS);
        if caption.is_empty() && more == 0 {
            return Arc::clone(table);
        }
        let mut rows = table.rows[..table.rows.len() - more].to_vec();
        if more > 0 {
            let mut cells = vec![Cell::Empty; table.columns.len()];
            if let Some(first) = cells.first_mut() {
                *first = Cell::Text(self.language.say(&Sentence::new("report.more-rows").with("n", more)));
            }
            rows.push(Row { cells, group: true });
        }
        let caption = if caption.is_empty() { table.caption.clone() } else { caption.to_owned() };
        Arc::new(Table { name: table.name.clone(), caption, columns: table.columns.clone(), rows, when_empty: table.when_empty.clone() })
    }

    /// The blocks of a place; none where there is nothing of that name.
    pub(super) fn at(&self, scheme: &str, name: &str, caption: &str) -> Vec<Block> {
        match scheme {
            "table" => self.tables.iter().filter(|t| t.name == name).map(|t| Block::Table(self.shown(t, caption))).collect(),
            "figure" => self.figures.iter().filter(|f| f.0 == name).map(|f| figure(f, caption)).collect(),
            "facts" => self.facts.iter().filter(|f| f.0 == name && !f.1.is_empty()).map(|f| facts(&f.1)).collect(),
            "photos" if !self.photos.is_empty() => vec![Block::Photos(self.photos.clone())],
            "signoff" => vec![Block::SignOff(self.sign_off.clone())],
            _ => Vec::new(),
        }
    }
}

fn figure(figure: &(&'static str, String, Arc<Drawing>), caption: &str) -> Block {
    let caption = if caption.is_empty() { figure.1.clone() } else { caption.to_owned() };
    Block::Figure { caption: vec![Inline::Text(caption)], drawing: Arc::clone(&figure.2) }
}

fn facts(facts: &[(String, String)]) -> Block {
    Block::Facts(facts.iter().map(|(label, value)| (label.clone(), vec![Inline::Text(value.clone())])).collect())
}
