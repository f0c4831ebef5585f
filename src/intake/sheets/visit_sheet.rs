//! The Visit sheet: items and entries, under a header or as a form without one.

use super::{Tables, system};
use crate::diag::{Located, Problem, Severity};
use crate::intake::cell::{Expected, Reader, did_you_mean, plain_text};
use crate::intake::grid::{Sheet, Value, Workbook};
use crate::intake::header::Field;
use crate::intake::words::{Column, Item, Kind, Words};
use crate::quantity::parse::{Dimension, not_measured, written};
use crate::quantity::{Unit, Volts};
use crate::visit::{Leg, Site, System};
use crate::wording::Sentence;
use std::collections::{BTreeMap, BTreeSet};
use std::sync::Arc;

/// What the Visit sheet yields.
pub(super) struct VisitSheet {
    pub site: Site,
    pub system: System,
}

/// Rows in which a form without a header is looked for.
const FORM_ROWS: u32 = 60;
/// Items that make a form.
const FORM_ITEMS: usize = 3;

/// An item with its entry.
struct Line<'a> {
    item: Option<Item>,
    label: Field<'a>,
    entry: Option<Field<'a>>,
}

pub(super) fn read<'a>(workbook: &'a Workbook, tables: &'a Tables<'a>, reader: &mut Reader<'a>) -> VisitSheet {
    let mut sets: Vec<Vec<Line<'a>>> = tables.of(Kind::Visit).map(|t| lines_of(t, reader.words)).collect();
    let headed = sets.len();
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
        if number < headed || !agrees(&second, &entries, reader.words) {
            say_second(&second, reader);
        }
    }
    for (item, fixed) in reader.words.fixed.items() {
        entries.entry(item).or_insert(fixed);
    }
    let three_legs = tables.of(Kind::Readings).any(|t| t.placed.iter().any(|p| names_third_leg(p.probe().map(|(probe, _)| probe))));
    let system = system_of(&entries, three_legs, reader);
    VisitSheet { site: site(&entries, reader), system }
}

fn distinct(lines: &[Line<'_>]) -> usize {
    lines.iter().filter_map(|l| l.item).collect::<BTreeSet<_>>().len()
}

/// The label of a form alone: `Date:`.
fn ends_as_label(label: Field<'_>) -> bool {
    matches!(label.value, Value::Text(text) if text.trim_end().ends_with(':'))
}

/// A form that repeats what the first set says, as on the head of every sheet.
fn agrees(lines: &[Line<'_>], entries: &BTreeMap<Item, Field<'_>>, words: &Words) -> bool {
    let same = |a: Field<'_>, b: Field<'_>| {
        // A date is the same however it is written; what is wrong with it was said where it was read.
        let mut quiet = Reader::new(words);
        let (a_date, b_date) = (quiet.date(a).map(|d| d.value), quiet.date(b).map(|d| d.value));
        plain_text(a.value) == plain_text(b.value) || (a_date.is_some() && a_date == b_date)
    };
    let told = lines.iter().filter_map(|line| Some((line.item?, line.entry?)));
    told.into_iter().all(|(item, entry)| entries.get(&item).is_some_and(|first| same(*first, entry)))
}

fn names_third_leg(probe: Option<crate::intake::header::heads::Probe>) -> bool {
    use crate::intake::header::heads::Probe;
    use crate::visit::{Between, Quantity};
    matches!(
        probe,
        Some(Probe::Exactly(
            Quantity::Voltage(Between::LineNeutral(Leg::L3) | Between::LineLine(Leg::L3, _) | Between::LineLine(_, Leg::L3))
                | Quantity::LineCurrent(Leg::L3)
                | Quantity::LineGround(Leg::L3)
        ))
    )
}

fn lines_of<'a>(table: &'a crate::intake::header::Table<'a>, words: &Words) -> Vec<Line<'a>> {
    let line = |row: crate::intake::header::Row<'a>| {
        let label = row.field(Column::Item)?;
        Some(Line { item: words.items.get(&plain_text(label.value)), label, entry: row.field(Column::Entry) })
    };
    table.body().filter_map(line).collect()
}

/// Labels with their entries to the right, anywhere outside a sheet's tables; enough of them make a form.
fn labels<'a>(sheet: &'a Sheet, tables: &Tables<'a>, words: &Words) -> Vec<Line<'a>> {
    let own: Vec<_> = tables.0.iter().filter(|t| std::ptr::eq(t.sheet, sheet)).collect();
    let in_table =
        |row: u32, col: u32| own.iter().any(|t| (t.header.0..t.rows.1).contains(&row) && (t.columns.0..=t.columns.1).contains(&col));
    let item = |value: &Value| match value {
        Value::Text(text) => words.items.get(text.trim().trim_end_matches(':')),
        _ => None,
    };
    let mut lines = Vec::new();
    for (row, cells) in sheet.rows().take_while(|(row, _)| *row < FORM_ROWS) {
        // Items side by side have their entries below them.
        if cells.len() >= FORM_ITEMS && cells.iter().all(|c| item(&c.value).is_some() && !in_table(row, c.col)) {
            lines.extend(cells.iter().map(|c| Line {
                item: item(&c.value),
                label: Field::new(sheet, row, c.col, &c.value),
                entry: sheet.get(row + 1, c.col).map(|value| Field::new(sheet, row + 1, c.col, value)),
            }));
            continue;
        }
        let mut cells = cells.iter().filter(|c| !in_table(row, c.col)).peekable();
        while let Some(label) = cells.next() {
            let Some(found) = item(&label.value) else { continue };
            // The text to the right is the entry, though it may read like an item ("Service").
            let entry = cells.next_if(|c| c.col <= label.col + 4 && (item(&c.value).is_none() || c.col == label.col + 1));
            let field = |c: &'a crate::intake::grid::Cell| Field::new(sheet, row, c.col, &c.value);
            lines.push(Line { item: Some(found), label: field(label), entry: entry.map(field) });
        }
    }
    lines
}

/// The entry of each item; what stands twice with different entries is said, and the first one holds.
fn entries<'a>(lines: Vec<Line<'a>>, reader: &mut Reader<'a>) -> BTreeMap<Item, Field<'a>> {
    let mut entries: BTreeMap<Item, Field<'a>> = BTreeMap::new();
    for Line { mut item, label, entry } in lines {
        if item == Some(Item::System) && entry.is_some_and(|e| is_current(e.value)) {
            item = Some(Item::ServiceRating);
        }
        let (Some(item), Some(entry)) = (item, entry) else {
            if item.is_none() && entry.is_some() {
                let text = plain_text(label.value);
                let hint = reader.words.items.nearest(&text).map(did_you_mean);
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

fn site<'a>(entries: &BTreeMap<Item, Field<'a>>, reader: &mut Reader<'a>) -> Site {
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

/// The system: as named, with nominal voltages of its own where they fit; by the nominal voltages alone; else assumed, and said.
fn system_of<'a>(entries: &BTreeMap<Item, Field<'a>>, three_legs: bool, reader: &mut Reader<'a>) -> System {
    let mut nominal = |item: Item| {
        let field = *entries.get(&item)?;
        reader.number(field, &Expected::new(Unit::Volt, 50.0, 1000.0)).filter(|v| v.value > 0.0)
    };
    let nominal = (nominal(Item::NominalLineNeutral), nominal(Item::NominalLineLine));
    let entry = entries.get(&Item::System).filter(|f| !not_measured(&plain_text(f.value)));
    match entry.map(|field| (*field, system::named(&plain_text(field.value)))) {
        Some((_, Some(named))) => with_nominal(named, nominal, reader),
        Some((field, None)) => {
            let taken = by_nominal(&nominal).unwrap_or_else(System::split_phase_120_240);
            if !reader.broken(field) {
                let known: Vec<_> = System::NAMED.iter().map(|s| crate::wording::Arg::from(s.0)).collect();
                reader.error(field, Sentence::new("intake.unknown-system").with("known", known).with("taken", taken.name.as_str()));
            }
            taken
        }
        None => by_nominal(&nominal).unwrap_or_else(|| {
            if let (Some(ln), Some(ll)) = &nominal {
                let message = Sentence::new("intake.nominal-pair").with("other", ln.value.to_string());
                reader.at(Severity::Error, &ll.cell, ll.value.to_string(), message);
            }
            let sheet = entries.values().next().map(|field| field.cell().sheet);
            assumed(nominal.0.or(nominal.1), sheet, three_legs, reader)
        }),
    }
}

type Nominal = (Option<Located<f64>>, Option<Located<f64>>);

fn by_nominal(nominal: &Nominal) -> Option<System> {
    let (Some(ln), Some(ll)) = nominal else { return None };
    System::by_voltages(Volts(ln.value), Volts(ll.value))
}

/// A named system with the nominal voltages stated beside it; the voltage that is not stated follows the other one.
fn with_nominal(system: System, nominal: Nominal, reader: &mut Reader<'_>) -> System {
    let (usual_ln, usual_ll) = (system.line_to_neutral.0, system.line_to_line.0);
    let follow = |stated: f64, usual: f64, other: f64| if stated == usual { other } else { (stated * other / usual).round() };
    let (ln, ll) = match (&nominal.0, &nominal.1) {
        (None, None) => return system,
        (Some(ln), None) => (ln.value, follow(ln.value, usual_ln, usual_ll)),
        (None, Some(ll)) => (follow(ll.value, usual_ll, usual_ln), ll.value),
        (Some(ln), Some(ll)) => (ln.value, ll.value),
    };
    let fitting = system::with_nominal(&system, Volts(ln), Volts(ll));
    if fitting.is_none()
        && let Some(wrong) = nominal.1.or(nominal.0)
    {
        let message = Sentence::new("intake.nominal-against-system").with("system", system.name.as_str());
        reader.at(Severity::Error, &wrong.cell, wrong.value.to_string(), message);
    }
    fitting.unwrap_or(system)
}

/// The system that is assumed where the workbook is silent, said at the one voltage it states or at its Visit sheet.
fn assumed(stated: Option<Located<f64>>, sheet: Option<Arc<str>>, three_legs: bool, reader: &mut Reader<'_>) -> System {
    let message = Sentence::new("intake.system-assumed");
    let mut problem = match (stated, sheet) {
        (Some(volts), _) => Problem::at(Severity::Warning, &volts.cell, volts.value.to_string(), message),
        (None, Some(sheet)) => Problem::in_sheet(Severity::Warning, &sheet, "", message),
        (None, None) => Problem::in_workbook(Severity::Warning, "", message),
    };
    problem.hint = three_legs.then(|| Sentence::new("intake.system-assumed-three-legs"));
    reader.problems.push(problem);
    System::split_phase_120_240()
}
