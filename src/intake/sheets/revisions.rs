//! The Revisions sheet.

use super::Tables;
use crate::intake::cell::Reader;
use crate::intake::words::{Column, Kind};
use crate::visit::Revision;

pub(super) fn read<'a>(tables: &'a Tables<'a>, reader: &mut Reader<'a>) -> Vec<Revision> {
    let mut revisions = Vec::new();
    for row in tables.of(Kind::Revisions).flat_map(|table| table.body()) {
        let Some(issue) = row.field(Column::Issue).and_then(|f| reader.text(f)) else {
            reader.row_without(&row, Column::Issue);
            continue;
        };
        revisions.push(Revision {
            issue,
            date: row.field(Column::Date).and_then(|f| reader.date(f)),
            reason: row.field(Column::Reason).and_then(|f| reader.text(f)),
        });
    }
    revisions
}
