//! Widths of columns.

use super::cell::Entry;
use crate::report::document::{ColumnKind, Table};

/// Size in which cells are shaped.
pub(super) const BASE: f32 = 8.3;
/// Smallest size by the base one.
const SMALLEST: f32 = 0.72;
/// Room at the right of each cell.
const PADDING: f32 = 8.0;
/// A column of text is given at least this much, where there is room.
const TEXT: f32 = 60.0;

/// How wide each column is.
pub(super) struct Columns {
    /// Width of each with its padding, in points.
    pub widths: Vec<f32>,
    /// Of each column of numbers, the widest part behind the decimal mark, at the base size.
    pub behind: Vec<f32>,
    /// Size of type by the base size.
    pub scale: f32,
    /// Room at the right of each cell.
    pub padding: f32,
}

impl Columns {
    /// Widths that fill the room: what each column needs, then shares of the rest by what it would like.
    pub fn fit(table: &Table, heads: &[Entry], rows: &[Vec<Entry>], room: f32) -> Self {
        let count = table.columns.len();
        let mut least = vec![0.0f32; count];
        let mut most = vec![0.0f32; count];
        let mut behind = vec![0.0f32; count];
        let mut whole = vec![0.0f32; count];
        for (c, head) in heads.iter().enumerate() {
            least[c] = head.widths.0;
            most[c] = head.widths.1;
        }
        for row in rows.iter().zip(&table.rows).filter(|(_, r)| !r.group).map(|(e, _)| e) {
            for (c, entry) in row.iter().enumerate().take(count) {
                let name = table.columns[c].kind != ColumnKind::Text && entry.widths.1 < TEXT * 1.6;
                least[c] = least[c].max(if name { entry.widths.1 } else { entry.widths.0 });
                most[c] = most[c].max(entry.widths.1);
                behind[c] = behind[c].max(entry.behind());
                whole[c] = whole[c].max(entry.widths.1 - entry.behind());
            }
        }
        for c in 0..count {
            if table.columns[c].kind == ColumnKind::Number {
                let aligned = whole[c] + behind[c];
                least[c] = least[c].max(aligned);
                most[c] = most[c].max(aligned);
            }
        }
        Self::share(table, &least, &most, behind, room)
    }

    fn share(table: &Table, least: &[f32], most: &[f32], behind: Vec<f32>, room: f32) -> Self {
        // Very many columns share the room with less between them.
        let padding = PADDING.min(room * 0.3 / least.len().max(1) as f32);
        let inner = (room - padding * least.len() as f32).max(1.0);
        let wish: Vec<f32> = table
            .columns
            .iter()
            .zip(least.iter().zip(most))
            .map(|(c, (l, m))| if c.kind == ColumnKind::Text { l.max(m.min(TEXT)) } else { *l })
            .collect();
        let needed: f32 = wish.iter().sum();
        let bare: f32 = least.iter().sum();
        let scale = if needed <= inner { 1.0 } else { (inner / bare.max(1.0)).clamp(SMALLEST, 1.0).min((inner / needed).max(0.85)) };
        let start: &[f32] = if needed * scale <= inner { &wish } else { least };
        let used: f32 = start.iter().sum::<f32>() * scale;
        let widths: Vec<f32> = if used > inner {
            // Not even the words fit: each column gives the same share, and long words are divided.
            start.iter().map(|w| w * scale * inner / used + padding).collect()
        } else {
            let wants: Vec<f32> = start.iter().zip(most).map(|(s, m)| ((m - s) * scale).max(0.0)).collect();
            let wanted: f32 = wants.iter().sum();
            let share = if wanted > 0.0 { ((inner - used) / wanted).min(1.0) } else { 0.0 };
            start.iter().zip(&wants).map(|(s, w)| s * scale + w * share + padding).collect()
        };
        Self { widths, behind, scale, padding }
    }

    /// Width of the table without the padding of its last column.
    pub fn total(&self) -> f32 {
        self.widths.iter().sum::<f32>() - self.padding
    }
}
