//! The Visit sheet: items and entries, under a header or as a form without one.

use super::{Tables, system};
use crate::diag::{Located, Severity};
use crate::intake::cell::{Expected, Reader, did_you_mean, plain_text};
use crate::intake::grid::{Sheet, Value, Workbook};
use crate::intake::header::Field;
use crate::intake::words::{Column, Item, Kind, Words};
use crate::quantity::parse::{not_measured, written};
use crate::quantity::{Unit, Volts};
use crate::visit::{Leg, Site, System};
use crate::wording::Sentence;
use std::collections::BTreeMap;

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
    let mut forms: Vec<Vec<Line<'a>>> = tables.of(Kind::Visit).map(|t| lines_of(t, reader.words)).collect();
    forms.extend(workbook.sheets.iter().filter_map(|sheet| form(sheet, tables, reader.words)));
    let mut forms = forms.into_iter();
    let mut entries = forms.next().map(|lines| entries(lines, reader)).unwrap_or_default();
    for (item, fixed) in reader.words.fixed.items() {
        entries.entry(item).or_insert(fixed);
    }
    for second in forms {
        say_second(&second, reader);
    }
    let three_legs = tables.of(Kind::Readings).any(|t| t.placed.iter().any(|p| names_third_leg(p.probe().map(|(probe, _)| probe))));
    let system = system_of(&entries, three_legs, reader);
    VisitSheet { site: site(&entries, reader), system }
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

/// A form: labels with their entries to the right, anywhere outside the sheet's tables.
fn form<'a>(sheet: &'a Sheet, tables: &Tables<'a>, words: &Words) -> Option<Vec<Line<'a>>> {
    let own: Vec<_> = tables.0.iter().filter(|t| std::ptr::eq(t.sheet, sheet)).collect();
    let in_table =
        |row: u32, col: u32| own.iter().any(|t| (t.header.0..t.rows.1).contains(&row) && (t.columns.0..=t.columns.1).contains(&col));
    let item = |value: &Value| match value {
        Value::Text(text) => words.items.get(text.trim().trim_end_matches(':')),
        _ => None,
    };
    let mut lines = Vec::new();
    for (row, cells) in sheet.rows().take_while(|(row, _)| *row < FORM_ROWS) {
        let mut cells = cells.iter().filter(|c| !in_table(row, c.col)).peekable();
        while let Some(label) = cells.next() {
            let Some(found) = item(&label.value) else { continue };
            // The text to the right is the entry, though it may read like an item ("Service").
            let entry = cells.next_if(|c| c.col <= label.col + 4 && (item(&c.value).is_none() || c.col == label.col + 1));
            let field = |c: &'a crate::intake::grid::Cell| Field::new(sheet, row, c.col, &c.value);
            lines.push(Line { item: Some(found), label: field(label), entry: entry.map(field) });
        }
    }
    let mut items: Vec<Item> = lines.iter().filter_map(|l| l.item).collect();
    items.sort_unstable();
    items.dedup();
    (items.len() >= FORM_ITEMS).then_some(lines)
}

/// The entry of each item; what stands twice with different entries is said, and the first one holds.
fn entries<'a>(lines: Vec<Line<'a>>, reader: &mut Reader<'a>) -> BTreeMap<Item, Field<'a>> {
    let mut entries: BTreeMap<Item, Field<'a>> = BTreeMap::new();
    for Line { item, label, entry } in lines {
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
    let (ln, ll) = (nominal(Item::NominalLineNeutral), nominal(Item::NominalLineLine));
    let written = entries.get(&Item::System).filter(|f| !not_measured(&plain_text(f.value)));
    let Some(field) = written else {
        if let (Some(ln), Some(ll)) = (&ln, &ll) {
            if let Some(system) = System::by_voltages(Volts(ln.value), Volts(ll.value)) {
                return system;
            }
            reader.at(
                Severity::Error,
                &ll.cell,
                ll.value.to_string(),
                Sentence::new("intake.nominal-pair").with("other", ln.value.to_string()),
            );
        }
        return assumed(ln.or(ll), three_legs, reader);
    };
    let Some(system) = system::named(&plain_text(field.value)) else {
        if !reader.broken(*field) {
            let known: Vec<_> = System::NAMED.iter().map(|s| crate::wording::Arg::from(s.0)).collect();
            reader.error(*field, Sentence::new("intake.unknown-system").with("known", known));
        }
        return match (ln, ll) {
            (Some(ln), Some(ll)) => System::by_voltages(Volts(ln.value), Volts(ll.value)).unwrap_or_else(System::split_phase_120_240),
            _ => System::split_phase_120_240(),
        };
    };
    if ln.is_none() && ll.is_none() {
        return system;
    }
    let volts = |l: &Option<Located<f64>>, usual: Volts| l.as_ref().map_or(usual, |l| Volts(l.value));
    let ratio = system.line_to_line / system.line_to_neutral;
    let (a, b) = match (&ln, &ll) {
        (Some(_), None) => (volts(&ln, system.line_to_neutral), system_line(volts(&ln, system.line_to_neutral), &system, ratio)),
        (None, Some(_)) => (system_neutral(volts(&ll, system.line_to_line), &system, ratio), volts(&ll, system.line_to_line)),
        _ => (volts(&ln, system.line_to_neutral), volts(&ll, system.line_to_line)),
    };
    let fitting = system::with_nominal(&system, a, b);
    if fitting.is_none()
        && let Some(wrong) = ll.or(ln)
    {
        let message = Sentence::new("intake.nominal-against-system").with("system", system.name.as_str());
        reader.at(Severity::Error, &wrong.cell, wrong.value.to_string(), message);
    }
    fitting.unwrap_or(system)
}

/// The line-to-line voltage that goes with another line-to-neutral one, to the volt.
fn system_line(line_to_neutral: Volts, system: &System, ratio: f64) -> Volts {
    if line_to_neutral == system.line_to_neutral { system.line_to_line } else { Volts((line_to_neutral.0 * ratio).round()) }
}

fn system_neutral(line_to_line: Volts, system: &System, ratio: f64) -> Volts {
    if line_to_line == system.line_to_line { system.line_to_neutral } else { Volts((line_to_line.0 / ratio).round()) }
}

fn assumed(stated: Option<Located<f64>>, three_legs: bool, reader: &mut Reader<'_>) -> System {
    let message = Sentence::new("intake.system-assumed");
    let hint = three_legs.then(|| Sentence::new("intake.system-assumed-three-legs"));
    match stated {
        Some(volts) => reader.at(Severity::Warning, &volts.cell, volts.value.to_string(), message).hint = hint,
        None => {
            let mut problem = crate::diag::Problem::in_workbook(Severity::Warning, "", message);
            problem.hint = hint;
            reader.problems.push(problem);
        }
    }
    System::split_phase_120_240()
}
