//! The Photos sheet, and the files it names beside the workbook.

use super::Tables;
use crate::diag::Located;
use crate::intake::cell::Reader;
use crate::intake::header::Field;
use crate::intake::words::{Column, Kind};
use crate::intake::{Beside, BesideError};
use crate::visit::Photo;
use crate::wording::Sentence;
use std::collections::{HashMap, HashSet};
use std::sync::Arc;

/// Photos of one visit, and their bytes together; a report of more helps nobody and must not take all memory.
const MOST: usize = 300;
const MOST_BYTES: usize = 200 << 20;

/// The photos, each file read once.
pub(super) struct Photos<'o> {
    beside: &'o dyn Beside,
    files: HashMap<String, Result<Arc<[u8]>, Trouble>>,
    bytes: usize,
    list: Vec<Photo>,
    listed: HashSet<String>,
}

/// Why a photo can't be used.
#[derive(Clone)]
enum Trouble {
    Beside(BesideError),
    NotAnImage,
    TooMany,
}

impl<'o> Photos<'o> {
    pub fn new(beside: &'o dyn Beside) -> Self {
        Self { beside, files: HashMap::new(), bytes: 0, list: Vec::new(), listed: HashSet::new() }
    }

    pub fn read<'a>(&mut self, tables: &'a Tables<'a>, reader: &mut Reader<'a>) {
        for row in tables.of(Kind::Photos).flat_map(|table| table.body()) {
            let Some(field) = row.field(Column::File) else {
                reader.row_without(&row, Column::File);
                continue;
            };
            let Some(file) = reader.entry(field) else { continue };
            self.listed.insert(file.value.clone());
            let bytes = self.bytes_of(field, &file.value, reader);
            let location = row.field(Column::Location).and_then(|f| reader.name(f));
            self.list.push(Photo { file, location, caption: row.field(Column::Caption).and_then(|f| reader.text(f)), bytes });
        }
    }

    pub fn of_observation(
        &mut self,
        field: Field<'_>,
        name: &Located<String>,
        location: Option<&Located<String>>,
        reader: &mut Reader<'_>,
    ) {
        if !self.listed.insert(name.value.clone()) {
            return;
        }
        let bytes = self.bytes_of(field, &name.value, reader);
        self.list.push(Photo { file: name.clone(), location: location.cloned(), caption: None, bytes });
    }

    pub fn into_list(self) -> Vec<Photo> {
        self.list
    }

    fn bytes_of(&mut self, field: Field<'_>, name: &str, reader: &mut Reader<'_>) -> Option<Arc<[u8]>> {
        if !self.files.contains_key(name) {
            let read = self.load(name);
            self.bytes += read.as_ref().map_or(0, |b| b.len());
            self.files.insert(name.to_owned(), read);
        }
        match self.files.get(name)? {
            Ok(bytes) => Some(Arc::clone(bytes)),
            Err(trouble) => {
                reader.warning(field, trouble.sentence());
                None
            }
        }
    }

    fn load(&self, name: &str) -> Result<Arc<[u8]>, Trouble> {
        if self.files.len() >= MOST || self.bytes >= MOST_BYTES {
            return Err(Trouble::TooMany);
        }
        let bytes = self.beside.read(name).map_err(Trouble::Beside)?;
        let image = bytes.starts_with(b"\x89PNG\r\n\x1a\n") || bytes.starts_with(&[0xff, 0xd8, 0xff]);
        if image { Ok(bytes.into()) } else { Err(Trouble::NotAnImage) }
    }
}

impl Trouble {
    fn sentence(&self) -> Sentence {
        match self {
            Self::Beside(BesideError::Outside) => Sentence::new("intake.photo-outside"),
            Self::Beside(BesideError::Missing) => Sentence::new("intake.photo-missing"),
            Self::Beside(BesideError::Unreadable(why)) => Sentence::new("intake.photo-unreadable").with("why", why.as_str()),
            Self::NotAnImage => Sentence::new("intake.photo-kind"),
            Self::TooMany => Sentence::new("intake.photo-too-many").with("most", MOST),
        }
    }
}
