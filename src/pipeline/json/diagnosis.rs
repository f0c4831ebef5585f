//! The ranking of causes and the exposure in the JSON document.

use super::rounded;
use crate::quantity::{Ohms, Unit};
use crate::results::{
    AddedOhms, Cause, CauseKind, Diagnosis, Exposure, LoadStep, NextReading, RepairEvidence, RepairOutcome, SupplyDirection,
};
use crate::visit::Visit;
use crate::wording::{Language, Sentence};
use serde_json::{Map, Value, json};

/// The leading cause, the ranking, and what the readings leave open.
pub fn diagnosis(d: &Diagnosis, visit: &Visit, language: &Language) -> Value {
    let mut object = d.ranking.first().map(|c| cause(c, visit)).unwrap_or_default();
    object.insert("ranking".into(), d.ranking.iter().map(|c| Value::Object(cause(c, visit))).collect());
    let neutral = d.neutral.iter().map(|n| {
        json!({ "run": name(visit, n.run), "low": rounded(n.low.0), "high": n.high.map(|h| rounded(h.0)), "neutral_A": rounded(n.amperes) })
    });
    object.insert("neutral_ohms".into(), neutral.collect());
    object.insert("next_readings".into(), d.next.iter().map(|n| next(n, visit, language)).collect());
    object.insert("load_steps".into(), d.load_steps.iter().map(|s| load_step(s, visit)).collect());
    object.insert("repair".into(), d.repair.as_ref().map(|r| repair(r, visit)).into());
    object.insert("left_out".into(), d.left_out.iter().map(ToString::to_string).collect());
    Value::Object(object)
}

/// The volts under one open neutral.
pub fn exposure(e: &Exposure, visit: &Visit) -> Value {
    let legs = e.legs.iter().map(|l| {
        json!({
            "leg": l.leg.name(),
            "volts": rounded(l.volts.0),
            "low": l.low.map(|v| rounded(v.0)),
            "at": name(visit, l.at),
            "loads_W": rounded(l.loads.0),
        })
    });
    json!({ "run": name(visit, e.run), "legs": legs.collect::<Vec<_>>() })
}

fn cause(c: &Cause, visit: &Visit) -> Map<String, Value> {
    let (kind, leg, cell) = match &c.kind {
        CauseKind::None => ("none", None, None),
        CauseKind::Neutral => ("neutral", None, None),
        CauseKind::Hot(leg) => ("hot", Some(leg.name()), None),
        CauseKind::Supply(SupplyDirection::Low) => ("supply", Some("low"), None),
        CauseKind::Supply(SupplyDirection::High) => ("supply", Some("high"), None),
        CauseKind::Reading(cell) => ("reading", None, Some(cell.to_string())),
    };
    let mut object = Map::new();
    object.insert("kind".into(), kind.into());
    object.insert("runs".into(), c.runs.iter().map(|&r| name(visit, r)).collect());
    object.insert("leg".into(), leg.into());
    object.insert("cell".into(), cell.into());
    object.insert("probability".into(), rounded(c.probability).into());
    object.insert("ohms".into(), c.ohms.map(|o| ohms(&o)).into());
    object
}

fn ohms(o: &AddedOhms) -> Value {
    json!({ "best": o.best.map(|b| rounded(b.0)), "low": rounded(o.low.0), "high": o.high.map(|h| rounded(h.0)) })
}

fn next(n: &NextReading, visit: &Visit, language: &Language) -> Value {
    let state = match n.load {
        None => Sentence::new("next.as-found"),
        Some((leg, watts)) => Sentence::new("next.load-on").number("watts", watts.0, 0, Unit::Watt).with("leg", leg.name()),
    };
    json!({
        "location": name(visit, n.run),
        "quantity": n.quantity.to_string(),
        "state": language.say(&state),
        "tells_apart": n.tells_apart.iter().map(|&r| name(visit, r)).collect::<Vec<_>>(),
        "worth": rounded(n.worth),
    })
}

fn load_step(s: &LoadStep, visit: &Visit) -> Value {
    let with_uncertainty = |z: Option<(Ohms, Ohms)>| z.map(|(z, u)| json!({ "ohms": rounded(z.0), "uncertainty": rounded(u.0) }));
    json!({
        "location": name(visit, s.run),
        "states": [s.states.0, s.states.1],
        "leg": s.leg.name(),
        "step_A": rounded(s.amperes),
        "neutral": with_uncertainty(s.neutral),
        "line": with_uncertainty(s.line),
        "resolves_ohms": rounded(s.resolves.0),
        "cells": s.cells.iter().map(ToString::to_string).collect::<Vec<_>>(),
    })
}

fn repair(r: &RepairEvidence, visit: &Visit) -> Value {
    json!({
        "found": cause(&r.found, visit),
        "left": cause(&r.left, visit),
        "outcome": match r.outcome {
            RepairOutcome::Proven => "proven",
            RepairOutcome::NotRepaired => "not repaired",
            RepairOutcome::NotShown => "not shown",
        },
        "cells": r.cells.iter().map(ToString::to_string).collect::<Vec<_>>(),
    })
}

fn name(visit: &Visit, run: usize) -> Value {
    visit.runs.get(run).map(|r| r.name.value.clone()).into()
}
