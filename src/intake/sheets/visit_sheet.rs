//! The Visit sheet: items and entries, under a header or as a form without one.

mod lines;

use super::{Tables, system};
use crate::diag::Located;
use crate::intake::cell::{Reader, plain_text};
use crate::intake::grid::{Value, Workbook};
use crate::intake::header::heads::Probe;
use crate::intake::header::{Field, Placed};
use crate::intake::words::{Item, Kind, Words};
use crate::quantity::Unit;
use crate::quantity::parse::{Dimension, written};
use crate::visit::{Between, Leg, Quantity, Site, System};
use crate::wording::Sentence;
use lines::{FORM_ITEMS, Line, distinct, ends_as_label, headed, labels};
use std::collections::BTreeMap;

/// The entries by item.
pub(super) type Entries<'a> = BTreeMap<Item, Field<'a>>;

/// What the Visit sheet yields.
pub(super) struct VisitSheet {
    pub site: Site,
    pub system: System,
}

pub(super) fn read<'a>(workbook: &'a Workbook, tables: &'a Tables<'a>, reader: &mut Reader<'a>) -> VisitSheet {
    let mut sets: Vec<Vec<Line<'a>>> = tables.of(Kind::Visit).map(|t| headed(t, reader.words)).collect();
    let under_headers = sets.len();
    let (forms, strays): (Vec<_>, Vec<_>) =
        workbook.sheets.iter().map(|sheet| labels(sheet, tables, reader.words)).partition(|lines| distinct(lines) >= FORM_ITEMS);
    sets.extend(forms);
    let strays = strays.into_iter().flatten().filter(|line| ends_as_label(line.label)).collect::<Vec<_>>();
    if sets.is_empty() {
        sets.push(strays);
    } else {
        sets.extend(strays.into_iter().filter(|line| line.item == Some(Item::Date)).map(|line| vec![line]));
    }
    let mut sets = sets.into_iter().enumerate();
    let mut entries = sets.next().map(|(_, lines)| entries(lines, reader)).unwrap_or_default();
    for (number, second) in sets {
        if number < under_headers || !agrees(&second, &entries, reader.words) {
            say_second(&second, reader);
        }
    }
    for (item, fixed) in reader.words.fixed.items() {
        entries.entry(item).or_insert(fixed);
    }
    let three_legs = tables.of(Kind::Readings).any(|table| table.placed.iter().any(names_third_leg));
    let system = system::read(&entries, three_legs, reader);
    VisitSheet { site: site(&entries, reader), system }
}

/// Items that have an entry, but are none that is known.
pub(super) fn unknown_items<'a>(tables: &'a Tables<'a>, words: &'a Words) -> Vec<String> {
    let lines = tables.of(Kind::Visit).flat_map(|table| headed(table, words));
    lines.filter(|line| line.item.is_none() && line.entry.is_some()).map(|line| plain_text(line.label.value)).collect()
}

/// A form that repeats what the first set says, as on the head of every sheet.
fn agrees(lines: &[Line<'_>], entries: &Entries<'_>, words: &Words) -> bool {
    let same = |a: Field<'_>, b: Field<'_>| {
        // A date is the same however it is written; what is wrong with it was said where it was read.
        let mut quiet = Reader::new(words);
        let (a_date, b_date) = (quiet.date(a).map(|d| d.value), quiet.date(b).map(|d| d.value));
        plain_text(a.value) == plain_text(b.value) || (a_date.is_some() && a_date == b_date)
    };
    let told = lines.iter().filter_map(|line| Some((line.item?, line.entry?)));
    told.into_iter().all(|(item, entry)| entries.get(&item).is_some_and(|first| same(*first, entry)))
}

/// The entry of each item; what stands twice with different entries is said, and the first one holds.
fn entries<'a>(lines: Vec<Line<'a>>, reader: &mut Reader<'a>) -> Entries<'a> {
    let mut entries = Entries::new();
    for Line { mut item, label, entry } in lines {
        if item == Some(Item::System) && entry.is_some_and(|e| is_current(e.value)) {
            item = Some(Item::ServiceRating);
        }
        let (Some(item), Some(entry)) = (item, entry) else {
            if item.is_none() && entry.is_some() {
                let text = plain_text(label.value);
                let hint = reader.suggestion(|words| words.items.nearest(&text));
                reader.warning(label, Sentence::new("intake.unknown-item")).hint = hint;
            }
            continue;
        };
        match entries.get(&item) {
            Some(first) if plain_text(first.value) == plain_text(entry.value) => {}
            Some(first) => {
                let message =
                    Sentence::new("intake.item-twice").with("item", reader.words.items.label(item)).with("first", first.cell().to_string());
                reader.error(entry, message);
            }
            None => {
                entries.insert(item, entry);
            }
        }
    }
    entries
}

/// `Service: 200 A` speaks of the rating.
fn is_current(value: &Value) -> bool {
    matches!(value, Value::Text(text) if written(text).is_ok_and(|w| w.unit.is_some_and(|u| u.dimension == Dimension::Current)))
}

fn say_second<'a>(lines: &[Line<'a>], reader: &mut Reader<'a>) {
    let date = lines.iter().find(|l| l.item == Some(Item::Date)).and_then(|l| l.entry);
    let Some(first) = lines.first() else { return };
    match date {
        Some(date) => reader.error(date, Sentence::new("intake.second-visit-dated")),
        None => reader.error(first.label, Sentence::new("intake.second-visit")),
    };
}

fn site<'a>(entries: &Entries<'a>, reader: &mut Reader<'a>) -> Site {
    let mut text = |item: Item| entries.get(&item).and_then(|f| reader.entry(*f));
    let mut site = Site {
        job: text(Item::Job),
        client: text(Item::Client),
        address: text(Item::Address),
        prepared_by: text(Item::PreparedBy),
        licence: text(Item::Licence),
        company: text(Item::Company),
        service_rating: text(Item::ServiceRating),
        supplied_by: text(Item::SuppliedBy),
        code: text(Item::Code),
        weather: text(Item::Weather),
        remarks: text(Item::Remarks),
        ..Site::default()
    };
    site.date = entries.get(&Item::Date).and_then(|f| reader.date(*f));
    site.purpose = entries.get(&Item::Purpose).and_then(|f| purpose(*f, reader));
    site.service_amperes = site.service_rating.as_ref().and_then(amperes);
    site
}

/// The purpose by the name it goes by; another is kept as written, and said.
fn purpose(field: Field<'_>, reader: &mut Reader<'_>) -> Option<Located<String>> {
    let text = reader.entry(field)?;
    if let Some(key) = reader.words.choice("purpose", &text.value) {
        return Some(Located::new(key.replace('-', " "), text.cell));
    }
    reader.warning(field, Sentence::new("intake.unknown-purpose"));
    Some(text)
}

/// The current of a rating: `200 A`, `200`, `200 A main`.
fn amperes(text: &Located<String>) -> Option<Located<f64>> {
    let first = text.value.split_whitespace().next()?;
    let read = written(&text.value).or_else(|_| written(first)).ok()?;
    let value = read.number.value()?;
    let amperes = match read.unit {
        None => value,
        Some(unit) => unit.convert(value, Unit::Ampere, false)?,
    };
    (amperes > 0.0).then(|| Located::new(amperes, text.cell.clone()))
}

/// A column of readings of L3.
fn names_third_leg(placed: &Placed) -> bool {
    let quantity = match placed.probe() {
        Some((Probe::Exactly(quantity), _)) => quantity,
        _ => return false,
    };
    matches!(
        quantity,
        Quantity::Voltage(Between::LineNeutral(Leg::L3) | Between::LineLine(Leg::L3, _) | Between::LineLine(_, Leg::L3))
            | Quantity::LineCurrent(Leg::L3)
            | Quantity::LineGround(Leg::L3)
    )
}
