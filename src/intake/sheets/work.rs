//! The Work sheet.

use super::Tables;
use crate::intake::cell::Reader;
use crate::intake::words::{Column, Kind};
use crate::visit::Work;

pub(super) fn read<'a>(tables: &'a Tables<'a>, reader: &mut Reader<'a>) -> Vec<Work> {
    let mut work = Vec::new();
    for row in tables.of(Kind::Work).flat_map(|table| table.body()) {
        let Some(done) = row.field(Column::WorkDone).and_then(|f| reader.text(f)) else {
            reader.row_without(&row, Column::WorkDone);
            continue;
        };
        work.push(Work {
            date: row.field(Column::Date).and_then(|f| reader.date(f)),
            location: row.field(Column::Location).and_then(|f| reader.name(f)),
            done,
            parts: row.field(Column::Parts).and_then(|f| reader.text(f)),
        });
    }
    work
}
