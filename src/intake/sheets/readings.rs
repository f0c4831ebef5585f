//! The Readings sheet, wide (a column a quantity) or long (a row a reading).

use super::Tables;
use super::known::Known;
use crate::diag::{CellRef, Located, Severity};
use crate::intake::cell::{Expected, Reader, did_you_mean, plain_text, written_time};
use crate::intake::grid::Value;
use crate::intake::header::heads::{Head, Probe, head, line_line};
use crate::intake::header::{Field, Placed, Row, Table};
use crate::intake::words::{Column, Kind};
use crate::quantity::Measured;
use crate::quantity::parse::{Scale, not_measured, unit_word};
use crate::visit::{Date, Leg, Quantity, Reading, ReadingRow, Stage, name_key};
use crate::wording::Sentence;
use std::collections::{BTreeSet, HashMap, HashSet};

/// Reads the tables of readings.
pub(super) fn read<'a>(
    tables: &'a Tables<'a>,
    known: &Known<'_>,
    visit_date: Option<&Located<Date>>,
    reader: &mut Reader<'a>,
) -> Vec<ReadingRow> {
    let mut sheet = Readings { known, visit_date, rows: Vec::new(), said: Said::default(), groups: HashMap::new() };
    for (number, table) in tables.of(Kind::Readings).enumerate() {
        sheet.say_headers(table, reader);
        let long = table.placed.iter().all(|p| p.probe().is_none());
        for row in table.body() {
            if long {
                sheet.long(number, &row, reader);
            } else {
                sheet.wide(&row, reader);
            }
        }
    }
    sheet.rows
}

/// What is said once for each name.
#[derive(Default)]
struct Said {
    locations: HashSet<String>,
    instruments: HashSet<String>,
    dates: HashSet<Date>,
    legs: HashSet<(u32, Leg)>,
}

/// What readings of a long layout that were taken together share.
type Group = (usize, String, String, Stage, Option<String>, Option<String>);

struct Readings<'k> {
    known: &'k Known<'k>,
    visit_date: Option<&'k Located<Date>>,
    rows: Vec<ReadingRow>,
    said: Said,
    groups: HashMap<Group, usize>,
}

impl Readings<'_> {
    /// Headers that leave the neutral to be understood, or name a quantity a second time.
    fn say_headers(&self, table: &Table<'_>, reader: &mut Reader<'_>) {
        let mut seen = HashSet::new();
        for placed in &table.placed {
            let Some((probe, implied)) = placed.probe() else { continue };
            let cell = table.header_cell(placed.col);
            if implied && let Probe::Exactly(quantity) = probe {
                let message = Sentence::new("intake.neutral-implied").with("quantity", quantity.to_string());
                reader.at(Severity::Warning, &cell, placed.text.as_str(), message);
            }
            if !seen.insert((probe, placed.stage)) {
                reader.at(Severity::Warning, &cell, placed.text.as_str(), Sentence::new("intake.quantity-twice"));
            }
        }
    }

    /// A row of a column a quantity; readings before and after the work side by side are a set each.
    fn wide(&mut self, row: &Row<'_>, reader: &mut Reader<'_>) {
        let cells: Vec<(&Placed, Probe, Field<'_>)> = row.placed().filter_map(|(p, f)| p.probe().map(|(probe, _)| (p, probe, f))).collect();
        let telling = cells.iter().any(|(_, _, f)| !silent(*f));
        let Some(head) = self.head(row, telling, reader) else { return };
        let stages: BTreeSet<Option<Stage>> = cells.iter().map(|(placed, ..)| placed.stage).collect();
        for stage in stages {
            let mut set = ReadingRow { stage: stage.unwrap_or(head.stage), ..head.clone() };
            for (_, probe, field) in cells.iter().filter(|(placed, ..)| placed.stage == stage) {
                set.readings.extend(self.reading(*probe, *field, None, &set, reader));
            }
            if !set.readings.is_empty() {
                self.rows.push(set);
            }
        }
    }

    fn long(&mut self, table: usize, row: &Row<'_>, reader: &mut Reader<'_>) {
        let value = row.field(Column::Value).filter(|f| !silent(*f));
        let Some(mut set) = self.head(row, value.is_some(), reader) else { return };
        let Some(value) = value else { return };
        let Some(quantity) = row.field(Column::Quantity) else {
            let cell = row.cell(Column::Quantity);
            reader.at(Severity::Error, &cell, "", Sentence::new("intake.no-quantity"));
            return;
        };
        if reader.broken(quantity) {
            return;
        }
        let Some(unit) = stated_unit(row, reader) else { return };
        let text = plain_text(quantity.value);
        let Some(probe) = quantity_named(&text, unit.or(value.unit), reader) else {
            reader.error(quantity, Sentence::new("intake.unknown-quantity")).hint = Some(Sentence::new("intake.unknown-quantity-hint"));
            return;
        };
        let Some(reading) = self.reading(probe, value, unit, &set, reader) else { return };
        let text = |l: &Option<Located<String>>| l.as_ref().map(|l| name_key(&l.value));
        let group = (table, name_key(&set.location.value), set.state.clone(), set.stage, text(&set.time), text(&set.instrument));
        let open = self.groups.get(&group).copied().filter(|&at| self.rows[at].readings.iter().all(|r| r.quantity != reading.quantity));
        match open.and_then(|at| self.rows.get_mut(at)) {
            Some(together) => together.readings.push(reading),
            None => {
                self.groups.insert(group, self.rows.len());
                set.readings.push(reading);
                self.rows.push(set);
            }
        }
    }

    /// What a row says beside its readings; `None` where the row is not to be read, or can't be.
    fn head(&mut self, row: &Row<'_>, telling: bool, reader: &mut Reader<'_>) -> Option<ReadingRow> {
        if !telling {
            return None;
        }
        let Some(field) = row.field(Column::Location) else {
            if !self.is_total(row, reader) && !row.is_note() {
                reader.at(Severity::Error, &row.cell(Column::Location), "", Sentence::new("intake.no-location")).hint =
                    Some(Sentence::new("intake.no-location-hint"));
            }
            return None;
        };
        if self.known.run(&plain_text(field.value)).is_none() && self.is_total(row, reader) {
            return None;
        }
        let location = reader.name(field)?;
        let run = self.known.run(&location.value);
        if run.is_none() {
            self.unknown_location(&location, reader);
        }
        let state = row.field(Column::State).and_then(|f| reader.entry(f));
        let stage = match (row.field(Column::Stage), &state) {
            (Some(field), _) => reader.choice(field, "stage").map_or(Stage::AsFound, stage),
            (None, Some(state)) if row.table.column(Column::Stage).is_none() => {
                reader.words.choice("stage", &state.value).map_or(Stage::AsFound, stage)
            }
            (None, _) => Stage::AsFound,
        };
        self.date(row, reader);
        Some(ReadingRow {
            run,
            location,
            state: state.map_or_else(|| Stage::AsFound.name().to_owned(), |s| s.value),
            stage,
            time: row.field(Column::Time).and_then(written_time).filter(|t| !not_measured(&t.value)),
            instrument: self.instrument(row, reader),
            readings: Vec::new(),
            remarks: row.field(Column::Remarks).and_then(|f| reader.entry(f)),
            cell: row.first(),
        })
    }

    /// A row of totals or means: skipped, and said, since it holds numbers.
    fn is_total(&self, row: &Row<'_>, reader: &mut Reader<'_>) -> bool {
        let named = row.placed().find(|(p, f)| p.probe().is_none() && reader.words.choice("total", &plain_text(f.value)).is_some());
        if let Some((_, field)) = named {
            reader.warning(field, Sentence::new("intake.total-row"));
        }
        named.is_some()
    }

    fn unknown_location(&mut self, location: &Located<String>, reader: &mut Reader<'_>) {
        if self.known.has_circuits() && self.said.locations.insert(name_key(&location.value)) {
            let hint = self.known.nearest_run(&location.value).map(did_you_mean);
            let message = Sentence::new("intake.unknown-location");
            reader.at(Severity::Warning, &location.cell, location.value.as_str(), message).hint = hint;
        }
    }

    fn instrument(&mut self, row: &Row<'_>, reader: &mut Reader<'_>) -> Option<Located<String>> {
        let instrument = reader.entry(row.field(Column::Instrument)?)?;
        let unknown = self.known.has_instruments() && !self.known.has_instrument(&instrument.value);
        if unknown && self.said.instruments.insert(name_key(&instrument.value)) {
            let hint = self.known.nearest_instrument(&instrument.value).map(did_you_mean);
            let message = Sentence::new("intake.unknown-instrument");
            reader.at(Severity::Warning, &instrument.cell, instrument.value.as_str(), message).hint = hint;
        }
        Some(instrument)
    }

    /// A date beside readings must be the visit's; each other one is said once.
    fn date(&mut self, row: &Row<'_>, reader: &mut Reader<'_>) {
        let Some(field) = row.field(Column::Date) else { return };
        let Some(date) = reader.date(field) else { return };
        let first = self.said.dates.is_empty();
        if !self.said.dates.insert(date.value) {
            return;
        }
        match self.visit_date {
            Some(visit) if visit.value != date.value => {
                let message = Sentence::new("intake.other-date").with("visit", visit.value.to_string());
                reader.warning(field, message);
            }
            None if !first => {
                reader.warning(field, Sentence::new("intake.two-dates"));
            }
            _ => {}
        }
    }

    fn reading(
        &mut self,
        probe: Probe,
        field: Field<'_>,
        stated: Option<Scale>,
        set: &ReadingRow,
        reader: &mut Reader<'_>,
    ) -> Option<Reading> {
        if silent(field) {
            return None;
        }
        let Some(quantity) = self.resolved(probe, set.run) else {
            reader.error(field, Sentence::new("intake.which-hot").with("location", set.location.value.as_str())).hint =
                Some(Sentence::new("intake.which-hot-hint"));
            return None;
        };
        let mut expected = Expected::new(quantity.unit(), 0.0, self.known.most(quantity));
        expected.stated = stated;
        let value = reader.measured(field, &expected)?;
        if value == Measured::NotMeasured {
            return None;
        }
        let bound = matches!(value, Measured::AtMost(_)) && quantity != Quantity::NeutralGround;
        if bound {
            reader.warning(field, Sentence::new("intake.bound-not-used"));
        }
        self.leg_of_system(quantity, field.cell(), reader);
        Some(Reading { quantity, value, cell: field.cell() })
    }

    /// The quantity, where the header says which hot or the location's circuit has but one.
    fn resolved(&self, probe: Probe, run: Option<usize>) -> Option<Quantity> {
        if let Probe::Exactly(quantity) = probe {
            return Some(quantity);
        }
        let legs = self.known.legs(run);
        match (probe, &legs[..]) {
            (Probe::HotNeutral, [leg]) => Some(Quantity::line_neutral(*leg)),
            (Probe::HotGround, [leg]) => Some(Quantity::LineGround(*leg)),
            (Probe::HotCurrent, [leg]) => Some(Quantity::LineCurrent(*leg)),
            (Probe::HotHot, [a, b]) => line_line(*a, *b).map(Quantity::Voltage),
            (Probe::HotHot, []) => match self.known.system.legs() {
                [a, b] => line_line(*a, *b).map(Quantity::Voltage),
                _ => None,
            },
            _ => None,
        }
    }

    /// A reading of a leg the system does not have is kept, and said once a column.
    fn leg_of_system(&mut self, quantity: Quantity, cell: CellRef, reader: &mut Reader<'_>) {
        let own = self.known.system.legs();
        let foreign = legs_of(quantity).into_iter().find(|leg| !own.contains(leg));
        if let Some(leg) = foreign
            && self.said.legs.insert((cell.col, leg))
        {
            let message = Sentence::new("intake.leg-of-system").with("leg", leg.name()).with("system", self.known.system.name.as_str());
            reader.at(Severity::Warning, &cell, quantity.to_string(), message).hint = Some(Sentence::new("intake.leg-of-system-hint"));
        }
    }
}

/// Nothing was measured. An error value is named, `#N/A` among them.
fn silent(field: Field<'_>) -> bool {
    !matches!(field.value, Value::Error(_) | Value::NoResult(_)) && not_measured(&plain_text(field.value))
}

fn legs_of(quantity: Quantity) -> Vec<Leg> {
    use crate::visit::Between;
    match quantity {
        Quantity::Voltage(Between::LineNeutral(leg)) | Quantity::LineGround(leg) | Quantity::LineCurrent(leg) => vec![leg],
        Quantity::Voltage(Between::LineLine(a, b)) => vec![a, b],
        Quantity::NeutralGround | Quantity::NeutralCurrent | Quantity::GroundCurrent => Vec::new(),
    }
}

fn stage(key: &str) -> Stage {
    if key == "as-left" { Stage::AsLeft } else { Stage::AsFound }
}

/// The unit beside a reading of a long layout: none stated is `Some(None)`, one that is not known is named and costs the reading.
fn stated_unit(row: &Row<'_>, reader: &mut Reader<'_>) -> Option<Option<Scale>> {
    let Some(field) = row.field(Column::Unit) else { return Some(None) };
    if reader.broken(field) {
        return None;
    }
    let text = plain_text(field.value);
    if not_measured(&text) {
        return Some(None);
    }
    let unit = unit_word(&text);
    if unit.is_none() {
        reader.error(field, Sentence::new("intake.unknown-unit"));
    }
    unit.map(Some)
}

/// The quantity a long layout names; its unit tells `L1` in volts from `L1` in amperes.
fn quantity_named(text: &str, unit: Option<Scale>, reader: &Reader<'_>) -> Option<Probe> {
    let found = head(reader.words, text, None).or_else(|| head(reader.words, text, unit));
    match found {
        Some(Head::Reading { probe, .. }) => Some(probe),
        _ => None,
    }
}
