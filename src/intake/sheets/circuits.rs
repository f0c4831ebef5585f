//! The circuit list.

use super::Tables;
use super::known::nearest_run;
use super::legs::{Pending, PendingLoad};
use crate::diag::{Located, Problem, Severity};
use crate::intake::cell::{Expected, LegsText, Reader, did_you_mean, larger_first, legs, plain_text, poles_as_date};
use crate::intake::grid::Value;
use crate::intake::header::heads::Head;
use crate::intake::header::{Field, Row, Table, What};
use crate::intake::words::{Column, Kind};
use crate::quantity::parse::written;
use crate::quantity::{Amperes, Measured, Metres, Unit, Watts};
use crate::visit::{Load, LoadKind, Run, System, Tree, TreeFault, name_key};
use crate::wording::Sentence;
use std::cell::Cell;
use std::collections::HashSet;

/// Bounds beyond which an entry can hardly be true: amperes, metres, watts.
const BREAKER: (f64, f64) = (1.0, 4_000.0);
const LENGTH: (f64, f64) = (0.05, 3_000.0);
const LOAD: (f64, f64) = (0.0, 200_000.0);

/// Two lengths of one run agree within this, as they were rounded to feet and metres.
const SAME_LENGTH: f64 = 0.35;

/// Comparisons spent on suggestions for sources.
const COMPARISONS: usize = 300_000;

/// The circuit list as read, with what only the rest of the workbook can settle.
pub(super) struct Circuits {
    pub runs: Vec<Run>,
    pub pending: Pending,
}

pub(super) fn read<'a>(
    tables: &'a Tables<'a>,
    system: &System,
    supplied_by: Option<&Located<String>>,
    mentioned: &HashSet<String>,
    reader: &mut Reader<'a>,
) -> Circuits {
    let mut circuits = Circuits { runs: Vec::new(), pending: Pending::default() };
    let mut said = HashSet::new();
    for table in tables.of(Kind::Circuits) {
        let sources = table.column(Column::FedFrom).is_some() || reader.words.fixed.column(Kind::Circuits, Column::FedFrom).is_some();
        if !sources && said.insert(&table.sheet.name) {
            let message = Sentence::new("intake.no-fed-from");
            reader.push(Problem::in_sheet(Severity::Warning, &table.sheet.name, "", message));
        }
        say_headers(table, reader);
        for row in table.body() {
            if !skipped(&row, mentioned, reader) {
                run(&row, system, reader, &mut circuits);
            }
        }
    }
    blank_utility(&mut circuits.runs, supplied_by, reader);
    circuits
}

/// Watts understood of volt-amperes, and lengths without a unit, are said once at the header.
fn say_headers(table: &Table<'_>, reader: &mut Reader<'_>) {
    use crate::quantity::parse::Dimension;
    let apparent = table.placed.iter().find(|p| p.unit.is_some_and(|u| u.dimension == Dimension::ApparentPower));
    if let Some(placed) = apparent {
        let cell = table.header_cell(placed.col);
        reader.at(Severity::Warning, &cell, placed.text.as_str(), Sentence::new("intake.volt-amperes-as-watts"));
    }
}

/// Notes, titles and totals are no circuits; a total that holds numbers is said.
fn skipped(row: &Row<'_>, mentioned: &HashSet<String>, reader: &mut Reader<'_>) -> bool {
    let name = row.field(Column::Circuit).map(|f| plain_text(f.value)).unwrap_or_default();
    if mentioned.contains(&name_key(&name)) && !name.is_empty() {
        return false;
    }
    let first = row.placed().find_map(|(_, f)| reader.words.choice("total", &plain_text(f.value)).map(|_| f));
    if let Some(total) = first {
        reader.warning(total, Sentence::new("intake.total-row"));
        return true;
    }
    row.filled() == 1 && !(row.is_note() && is_name(&name, reader))
}

/// A text alone in its row that can be a circuit's name rather than a note or the title of what follows.
fn is_name(text: &str, reader: &Reader<'_>) -> bool {
    (1..=2).contains(&text.split_whitespace().count()) && reader.words.sheet(text).is_none()
}

fn run<'a>(row: &Row<'a>, system: &System, reader: &mut Reader<'a>, circuits: &mut Circuits) {
    let Some(name) = row.field(Column::Circuit).and_then(|f| reader.name(f)) else {
        reader.row_without(row, Column::Circuit);
        return;
    };
    let index = circuits.runs.len();
    let legs = row.field(Column::Legs).and_then(|f| run_legs(f, system, index, reader, &mut circuits.pending));
    let (breaker, tied) = row.field(Column::Breaker).map_or((None, None), |f| breaker(f, reader));
    let run = Run {
        fed_from: row.field(Column::FedFrom).and_then(|f| reader.name(f)).filter(|f| !crate::quantity::parse::not_measured(&f.value)),
        serves: row.field(Column::Serves).and_then(|f| reader.entry(f)),
        legs,
        tie: row.field(Column::Tie).and_then(|f| reader.yes_no(f)).or(tied),
        breaker,
        wire: row.field(Column::Wire).and_then(|f| reader.wire(f)),
        neutral_wire: row.field(Column::NeutralWire).and_then(|f| reader.wire(f)),
        length: length(row, reader),
        loads: loads(row, index, reader, &mut circuits.pending),
        load_kind: row.field(Column::LoadKind).and_then(|f| load_kind(f, reader)),
        remarks: row.field(Column::Remarks).and_then(|f| reader.entry(f)),
        name,
        cell: row.first(),
    };
    circuits.runs.push(run);
}

/// The rating, and the common disconnect that a breaker of two or three poles is.
fn breaker(field: Field<'_>, reader: &mut Reader<'_>) -> (Option<Located<Amperes>>, Option<Located<bool>>) {
    let text = larger_first(field.value).unwrap_or_else(|| plain_text(field.value));
    let words = text.split_whitespace().filter(|word| reader.words.choice("breaker", word).is_none());
    let bare = words.collect::<Vec<_>>().join(" ");
    if let Some((amperes, poles)) = with_poles(&bare) {
        if matches!(field.value, Value::DateTime(_)) {
            reader.read_from_date(field, &text);
        }
        return (Some(Located::new(Amperes(amperes), field.cell())), (poles > 1).then(|| Located::new(true, field.cell())));
    }
    let kind_aside = Value::Text(bare);
    let plain = matches!(&kind_aside, Value::Text(bare) if *bare != text && written(bare).is_ok());
    let field = if plain { field.with_value(&kind_aside) } else { field };
    let amperes = reader.number(field, &Expected::new(Unit::Ampere, BREAKER.0, BREAKER.1));
    (amperes.map(|a| a.map(Amperes)), None)
}

/// A rating with its poles: `20/1`, `30A/2P`, `2P-30A`.
fn with_poles(text: &str) -> Option<(f64, u32)> {
    let compact: String = text.to_lowercase().chars().filter(|c| !c.is_whitespace()).collect();
    let words = compact.split(|c: char| !c.is_alphabetic()).filter(|w| !w.is_empty());
    let mut known = words.map(|w| ["a", "amp", "amps", "p", "pole", "poles"].contains(&w));
    let numbers: Vec<u32> = compact.split(|c: char| !c.is_ascii_digit()).filter_map(|d| d.parse().ok()).collect();
    let marked = compact.contains(['/', 'p']) && compact.chars().all(|c| c.is_ascii_alphanumeric() || c == '/' || c == '-');
    match numbers[..] {
        [a, b] if marked && known.all(|k| k) => {
            let (amperes, poles) = (a.max(b), a.min(b));
            ((1..=3).contains(&poles) && (10..=4000).contains(&amperes)).then(|| (f64::from(amperes), poles))
        }
        _ => None,
    }
}

fn run_legs<'a>(
    field: Field<'a>,
    system: &System,
    run: usize,
    reader: &mut Reader<'a>,
    pending: &mut Pending,
) -> Option<Located<crate::visit::Legs>> {
    if reader.broken(field) {
        return None;
    }
    let text = poles_as_date(field.value).unwrap_or_else(|| plain_text(field.value));
    if crate::quantity::parse::not_measured(&text) {
        return None;
    }
    match legs(reader.words, &text, system.legs()) {
        LegsText::Certain(legs) => return Some(Located::new(legs, field.cell())),
        LegsText::NeutralUnsaid(lines) => pending.legs.push((run, lines, Located::new(text, field.cell()))),
        LegsText::WhichUnsaid => {
            reader.error(field, Sentence::new("intake.legs-which").with("system", system.name.as_str())).hint =
                Some(Sentence::new("intake.legs-hint"));
        }
        LegsText::NotLegs => {
            reader.error(field, Sentence::new("intake.not-legs")).hint = Some(Sentence::new("intake.legs-hint"));
        }
    }
    None
}

/// The length in metres, from a column of feet, of metres, or with the unit in the cell; a bare number without a unit anywhere
/// is named.
fn length(row: &Row<'_>, reader: &mut Reader<'_>) -> Option<Located<Metres>> {
    let mut found: Option<Located<Metres>> = None;
    for field in row.fields(Column::Length) {
        if field.unit.is_none() && bare_number(field) {
            reader.error(field, Sentence::new("intake.length-unit")).hint = Some(Sentence::new("intake.length-unit-hint"));
            continue;
        }
        let Some(read) = reader.number(field, &Expected::new(Unit::Metre, LENGTH.0, LENGTH.1)) else { continue };
        match &found {
            Some(first) if (first.value.0 - read.value).abs() > SAME_LENGTH => {
                reader.error(field, Sentence::new("intake.length-twice").number("first", first.value.0, 2, Unit::Metre));
            }
            Some(_) => {}
            None => found = Some(read.map(Metres)),
        }
    }
    found
}

fn bare_number(field: Field<'_>) -> bool {
    let text = plain_text(field.value);
    crate::quantity::parse::feet_and_inches(&text).is_none()
        && crate::quantity::parse::written(&text).is_ok_and(|w| w.unit.is_none() && !matches!(w.number, Measured::NotMeasured))
}

/// The loads of a row. One below nothing is no load: it was named as hardly true, and is left out.
fn loads(row: &Row<'_>, run: usize, reader: &mut Reader<'_>, pending: &mut Pending) -> Vec<Load> {
    let expected = Expected::new(Unit::Watt, LOAD.0, LOAD.1);
    let mut loads = Vec::new();
    for (placed, field) in row.placed() {
        match placed.what {
            What::Head(Head::Load(between)) => {
                let watts = reader.number(field, &expected).filter(|w| w.value >= 0.0);
                loads.extend(watts.map(|watts| Load { between, watts: watts.map(Watts) }));
            }
            What::Named(Column::Load) => {
                let watts = reader.number(field, &expected).filter(|w| w.value >= 0.0);
                pending.loads.extend(watts.map(|watts| PendingLoad { run, watts: watts.map(Watts) }));
            }
            _ => {}
        }
    }
    loads
}

fn load_kind<'a>(field: Field<'a>, reader: &mut Reader<'a>) -> Option<Located<LoadKind>> {
    let kind = match reader.choice(field, "load-kind")? {
        "filament" => LoadKind::Filament,
        "electronic" => LoadKind::Electronic,
        "motor" => LoadKind::Motor,
        _ => LoadKind::Resistive,
    };
    Some(Located::new(kind, field.cell()))
}

/// `Utility` and its like, and the supplier's own name, are the utility, unless a circuit bears the name.
fn blank_utility(runs: &mut [Run], supplied_by: Option<&Located<String>>, reader: &Reader<'_>) {
    let names: HashSet<String> = runs.iter().map(|r| name_key(&r.name.value)).collect();
    let supplier = supplied_by.map(|s| name_key(&s.value));
    for run in runs {
        let utility = |source: &Located<String>| {
            let key = name_key(&source.value);
            let named = reader.words.choice("source", &source.value).is_some() || supplier.as_ref() == Some(&key);
            named && !names.contains(&key)
        };
        if run.fed_from.as_ref().is_some_and(utility) {
            run.fed_from = None;
        }
    }
}

/// Loops and unknown sources, each at the cell that names the source; names that stand twice at the second.
pub(super) fn say_faults(runs: &[Run], tree: &Tree, reader: &mut Reader<'_>) {
    let budget = Cell::new(COMPARISONS);
    for fault in &tree.faults {
        let (TreeFault::UnknownSource { run } | TreeFault::Loop { run } | TreeFault::Duplicate { run, .. }) = fault;
        let Some(run) = runs.get(*run) else { continue };
        let source = run.fed_from.as_ref().unwrap_or(&run.name);
        match fault {
            TreeFault::UnknownSource { .. } => {
                let hint = nearest_run(runs, &source.value, &budget).map(did_you_mean);
                reader.at(Severity::Error, &source.cell, source.value.as_str(), Sentence::new("intake.unknown-source")).hint = hint;
            }
            TreeFault::Loop { .. } => {
                let message = Sentence::new("intake.loop").with("run", run.name.value.as_str());
                reader.at(Severity::Error, &source.cell, source.value.as_str(), message);
            }
            TreeFault::Duplicate { first, .. } => {
                let first = runs.get(*first).map(|r| r.name.cell.to_string()).unwrap_or_default();
                let message = Sentence::new("intake.circuit-twice").with("first", first);
                reader.at(Severity::Warning, &run.name.cell, run.name.value.as_str(), message);
            }
        }
    }
}
