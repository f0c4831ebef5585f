//! The sheets of the XLSX.

use super::document::{Chart, Meta, Sheet, Table};
use super::template::{Front, Places, SheetPlan};
use crate::wording::Language;
use std::sync::Arc;

/// Sheets where the template names none: name's key and tables.
const DEFAULT: [(&str, &[&str]); 9] = [
    ("summary", &["summary", "causes", "next"]),
    ("findings", &["findings"]),
    ("readings", &["readings"]),
    ("circuits", &["circuits"]),
    ("diagnosis", &["not-shown", "exposure", "load-steps", "before-after"]),
    ("balance", &["legs", "leg-circuits", "moves"]),
    ("record", &["work", "tests", "observations", "instruments", "revisions"]),
    ("basis", &["basis"]),
    ("left-out", &["left-out"]),
];

/// The sheets a template asks for, without those that would be empty.
pub(super) fn plan(front: &Front, places: &Places, language: &Language, meta: &Meta) -> Vec<Sheet> {
    let own: Vec<SheetPlan> = DEFAULT
        .iter()
        .map(|(key, tables)| SheetPlan {
            name: language.text(&format!("sheets.{key}")),
            tables: tables.iter().map(|t| (*t).to_owned()).collect(),
        })
        .collect();
    let plans = if front.sheets.is_empty() { &own } else { &front.sheets };
    plans.iter().filter_map(|plan| sheet(plan, places, language, meta)).collect()
}

fn sheet(plan: &SheetPlan, places: &Places, language: &Language, meta: &Meta) -> Option<Sheet> {
    let tables: Vec<Arc<Table>> =
        plan.tables.iter().filter_map(|name| places.tables.iter().find(|t| t.name == *name)).map(Arc::clone).collect();
    if tables.is_empty() {
        return None;
    }
    let chart = tables.iter().find(|t| t.name == "legs").map(|t| chart(t, language));
    let facts = if tables.iter().any(|t| t.name == "summary") { facts(places, meta) } else { Vec::new() };
    Some(Sheet { name: plan.name.clone(), facts, tables, chart })
}

fn facts(places: &Places, meta: &Meta) -> Vec<(String, String)> {
    let mut facts = vec![(meta.title.clone(), String::new())];
    facts.extend(places.facts.iter().flat_map(|(_, pairs)| pairs.clone()));
    facts
}

fn chart(legs: &Table, language: &Language) -> Chart {
    let title = language.text("table-legs.caption");
    let values = legs.columns.iter().filter(|c| c.key != "leg").map(|c| c.key.clone()).collect();
    Chart { table: "legs".into(), category: "leg".into(), values, alt: language.text("table-legs.alt"), title }
}
