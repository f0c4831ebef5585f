//! The JSON document of `check --json`; its schema is docs/output.schema.json.

mod diagnosis;

use super::Checked;
use crate::diag::Problem;
use crate::results::{Balance, Finding, LegLoad, Verdict};
use crate::visit::{ReadingRow, Visit};
use crate::wording::Language;
use serde_json::{Map, Value, json};

/// One workbook's document. With `all`, findings that passed are listed too.
#[must_use]
pub fn document(checked: &Checked, language: &Language, all: bool) -> Value {
    let visit = &checked.visit;
    let findings: Vec<Value> =
        checked.findings.iter().filter(|f| all || f.verdict != Verdict::Pass).map(|f| finding(f, language)).collect();
    json!({
        "schema": 1,
        "input": { "file": checked.file, "sha256": checked.sha256 },
        "system": {
            "name": visit.system.name,
            "line_to_neutral": visit.system.line_to_neutral.0,
            "line_to_line": visit.system.line_to_line.0,
        },
        "cells": checked.problems.iter().map(|p| problem(p, language)).collect::<Vec<_>>(),
        "readings": visit.rows.iter().flat_map(|row| readings(visit, row)).collect::<Vec<_>>(),
        "circuits": visit.runs.iter().map(circuit).collect::<Vec<_>>(),
        "findings": findings,
        // Comparisons that passed and are not listed even with `--all`: there are more than anyone could read.
        "passed_unlisted": checked.passed_unlisted,
        "diagnosis": checked.diagnosis.as_ref().map(|d| diagnosis::diagnosis(d, visit, language)),
        "exposure": checked.exposure.iter().map(|e| diagnosis::exposure(e, visit)).collect::<Vec<_>>(),
        "balance": checked.balance.as_ref().map(|b| balance(b, visit)),
    })
}

/// What stands in the place of a document for an input that could not be used.
#[must_use]
pub fn refusal(file: &str, sha256: &str, error: &str) -> Value {
    json!({ "schema": 1, "input": { "file": file, "sha256": sha256 }, "error": error })
}

fn problem(p: &Problem, language: &Language) -> Value {
    let mut message = language.say(&p.message);
    if let Some(hint) = &p.hint {
        message.push(' ');
        message.push_str(&language.say(hint));
    }
    json!({
        "severity": p.severity.name(),
        "sheet": p.sheet.as_deref(),
        "cell": p.cell.as_ref().map(crate::diag::CellRef::address),
        "found": p.found,
        "message": message,
    })
}

fn readings<'a>(visit: &'a Visit, row: &'a ReadingRow) -> impl Iterator<Item = Value> + 'a {
    row.readings.iter().filter_map(move |reading| {
        let value = reading.value.value()?;
        Some(json!({
            "location": row.location.value,
            "state": row.state,
            "stage": row.stage.name(),
            "quantity": reading.quantity.to_string(),
            "value": value,
            "unit": reading.quantity.unit().symbol(),
            "uncertainty": rounded(visit.accuracy_of(row, reading.quantity).expanded(value)),
            "cell": reading.cell.to_string(),
        }))
    })
}

/// To nine significant decimals: enough for any use, and free of the last bits' noise.
fn rounded(value: f64) -> f64 {
    if value.is_finite() { (value * 1e9).round() / 1e9 } else { value }
}

fn circuit(run: &crate::visit::Run) -> Value {
    json!({
        "circuit": run.name.value,
        "fed_from": run.fed_from.as_ref().map(|f| f.value.clone()),
        "legs": run.legs.as_ref().map(|l| l.value.to_string()),
        "breaker_A": run.breaker.as_ref().map(|b| b.value.0),
        "wire": run.wire.as_ref().map(|w| w.value.to_string()),
        "length_m": run.length.as_ref().map(|l| (l.value.0 * 100.0).round() / 100.0),
    })
}

fn finding(f: &Finding, language: &Language) -> Value {
    let measured =
        f.measured.map(|m| json!({ "value": rounded(m.value), "uncertainty": m.uncertainty.map(rounded), "unit": m.unit.symbol() }));
    json!({
        "rule": f.rule,
        "signal": f.signal.word(),
        "verdict": f.verdict.name(),
        "location": f.location,
        "state": f.state,
        "stage": f.stage.map(crate::visit::Stage::name),
        "measured": measured,
        "limit": f.limit.map(|l| json!({ "low": l.low.map(rounded), "high": l.high.map(rounded) })),
        "cells": f.cells.iter().map(ToString::to_string).collect::<Vec<_>>(),
        "says": language.say(&f.says),
        "advice": language.say(&f.advice),
        "basis": f.basis,
    })
}

fn balance(b: &Balance, visit: &Visit) -> Value {
    let legs = |legs: &[LegLoad]| legs.iter().map(|l| json!({ "leg": l.leg.name(), "va": rounded(l.va.0) })).collect::<Vec<_>>();
    let moves = b.moves.iter().map(|m| {
        let mut object = Map::new();
        object.insert("circuit".into(), visit.runs.get(m.run).map(|r| r.name.value.clone()).into());
        object.insert("from".into(), m.from.clone().into());
        object.insert("to".into(), m.to.clone().into());
        Value::Object(object)
    });
    json!({
        "legs": legs(&b.legs),
        "neutral_amps": rounded(b.neutral.0),
        "imbalance_percent": rounded(b.imbalance_percent),
        "moves": moves.collect::<Vec<_>>(),
        "legs_after": legs(&b.after),
        "neutral_amps_after": rounded(b.neutral_after.0),
        "imbalance_percent_after": rounded(b.imbalance_after_percent),
    })
}
