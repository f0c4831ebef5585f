//! The Observations sheet.

use super::Tables;
use super::photos::Photos;
use crate::diag::Located;
use crate::intake::cell::Reader;
use crate::intake::words::{Column, Kind};
use crate::results::Signal;
use crate::visit::Observation;

/// Reads the observations; a photo one of them names joins the photos unless it stands there already.
pub(super) fn read<'a>(tables: &'a Tables<'a>, photos: &mut Photos<'_>, reader: &mut Reader<'a>) -> Vec<Observation> {
    let mut observations = Vec::new();
    for row in tables.of(Kind::Observations).flat_map(|table| table.body()) {
        let Some(text) = row.field(Column::Observation).and_then(|f| reader.text(f)) else {
            reader.row_without(&row, Column::Observation);
            continue;
        };
        let location = row.field(Column::Location).and_then(|f| reader.name(f));
        let signal = row.field(Column::SignalWord).and_then(|field| {
            let key = reader.choice(field, "signal")?;
            Signal::ALL.into_iter().find(|s| s.word() == key).map(|signal| Located::new(signal, field.cell()))
        });
        let photo = row.field(Column::Photo).and_then(|field| {
            let name = reader.entry(field)?;
            photos.of_observation(field, &name, location.as_ref(), reader);
            Some(name)
        });
        observations.push(Observation { signal, advice: row.field(Column::Advice).and_then(|f| reader.entry(f)), text, location, photo });
    }
    observations
}
