//! The diagnosis against sites whose fault is known from outside, against worked examples, and against laws it must keep.

#[path = "diagnosis/site.rs"]
mod site;

use midwire::diagnosis::{DiagnosisSettings, diagnose};
use midwire::results::{CauseKind, Diagnosis, NeutralInterval, RepairOutcome, SupplyDirection};
use midwire::visit::{Leg, Visit};
use serde_json::{Value, json};

fn sites() -> Vec<Value> {
    let file: Value = serde_json::from_str(include_str!("diagnosis/solved_by_ngspice.json")).unwrap();
    file["sites"].as_array().unwrap().clone()
}

fn of(site: &Value) -> (Visit, Diagnosis) {
    let visit = site::visit(site);
    let found = diagnose(&visit, &DiagnosisSettings::default()).unwrap();
    (visit, found)
}

fn named<'v>(visit: &'v Visit, runs: &[usize]) -> Vec<&'v str> {
    runs.iter().map(|r| visit.runs[*r].name.value.as_str()).collect()
}

fn interval(visit: &Visit, found: &Diagnosis, name: &str) -> NeutralInterval {
    let run = visit.run_named(name).unwrap();
    *found.neutral.iter().find(|n| n.run == run).unwrap()
}

fn kind_of(fault: &Value) -> CauseKind {
    let leg = || if fault["leg"] == "L2" { Leg::L2 } else { Leg::L1 };
    match fault["kind"].as_str().unwrap() {
        "neutral" => CauseKind::Neutral,
        "hot" => CauseKind::Hot(leg()),
        "supply" if fault["leg"] == "low" => CauseKind::Supply(SupplyDirection::Low),
        "supply" => CauseKind::Supply(SupplyDirection::High),
        _ => CauseKind::None,
    }
}

#[test]
fn the_fault_that_was_put_into_the_network_is_found() {
    for site in sites() {
        let (visit, found) = of(&site);
        let (top, fault) = (&found.ranking[0], &site["fault"]);
        let at = &site["case"];
        if site["visibility"] == "hidden" {
            assert_eq!(top.kind, CauseKind::None, "{at}: no reading shows it");
        } else if fault["kind"] == "reading" {
            assert!(matches!(&top.kind, CauseKind::Reading(cell) if fault["cell"] == cell.to_string()), "{at}: {top:?}");
        } else {
            assert_eq!(top.kind, kind_of(fault), "{at}");
            let runs = named(&visit, &top.runs);
            let together: Vec<&str> = site["together"].as_array().unwrap().iter().filter_map(Value::as_str).collect();
            assert!(fault["run"].as_str().is_none_or(|r| runs.contains(&r)), "{at}: {runs:?}");
            assert!(runs.iter().all(|r| together.contains(r)), "{at}: {runs:?}");
        }
    }
}

#[test]
fn a_fault_no_reading_shows_is_not_ruled_out() {
    for site in sites().iter().filter(|s| s["fault"]["kind"] == "neutral" && s["visibility"] == "hidden") {
        let (visit, found) = of(site);
        let held = interval(&visit, &found, site["fault"]["run"].as_str().unwrap());
        let ohms = site["fault"]["ohms"].as_f64().unwrap();
        assert!(held.low.0 <= ohms && held.high.is_none_or(|h| h.0 >= ohms), "{held:?}");
        assert!(found.next.iter().any(|n| !n.tells_apart.is_empty()), "what to read next is said");
    }
}

#[test]
fn the_probabilities_add_to_one() {
    for site in sites() {
        let (_, found) = of(&site);
        let total: f64 = found.ranking.iter().map(|c| c.probability).sum();
        assert!((total - 1.0).abs() < 1e-9, "{}: {total}", site["case"]);
    }
}

/// The same site with its legs named the other way round.
fn swapped(site: &Value) -> Value {
    let text = site.to_string();
    let text = text.replace("L1-L2", "#").replace("L1 L2", "&").replace("L1", "*").replace("L2", "L1").replace('*', "L2");
    serde_json::from_str(&text.replace('#', "L1-L2").replace('&', "L1 L2")).unwrap()
}

#[test]
fn swapping_the_legs_swaps_the_answer() {
    for site in sites().iter().filter(|s| s["fault"]["kind"] == "hot" || s["case"] == "027") {
        let ((_, one), (_, other)) = (of(site), of(&swapped(site)));
        let mirrored = match one.ranking[0].kind {
            CauseKind::Hot(Leg::L1) => CauseKind::Hot(Leg::L2),
            CauseKind::Hot(Leg::L2) => CauseKind::Hot(Leg::L1),
            ref kind => kind.clone(),
        };
        assert_eq!(other.ranking[0].kind, mirrored, "{}", site["case"]);
        assert_eq!(other.ranking[0].runs, one.ranking[0].runs, "{}", site["case"]);
        assert!((other.ranking[0].probability - one.ranking[0].probability).abs() < 0.02, "{}", site["case"]);
    }
}

#[test]
fn a_name_changes_nothing() {
    let site = sites().remove(0);
    let (visit, one) = of(&site);
    let mut renamed = site.to_string();
    for (k, run) in visit.runs.iter().enumerate().rev() {
        renamed = renamed.replace(&format!("\"{}\"", run.name.value), &format!("\"branch {k}\""));
    }
    let (_, other) = of(&serde_json::from_str(&renamed).unwrap());
    assert_eq!(one.ranking, other.ranking);
    assert_eq!(one.neutral, other.neutral);
}

/// 100 ft of 14 Cu (0.307 Ω a conductor, NEC chapter 9 table 8) with 1440 W of resistance (10 Ω) on L1, behind a stiff 120/240 V.
/// By hand: 120/(10 + 2·0.307) = 11.31 A; L1-N 113.1 V, L2-N 120 + 11.31·0.307 = 123.5 V, N-G 3.5 V.
fn long_loaded_run(rows: &Value) -> Value {
    json!({
        "volts": [0.5, 2, 0.1], "amperes": [2, 5, 0.01],
        "runs": [
            { "name": "SVC", "legs": "L1 L2", "breaker": 200, "wire": "4/0 Al", "feet": 30 },
            { "name": "1/3", "from": "SVC", "legs": "L1 L2", "breaker": 20, "wire": "14 Cu", "feet": 100, "L1-N": 1440, "L2-N": 0, "kind": "resistive" }
        ],
        "rows": rows
    })
}

#[test]
fn the_normal_drop_of_a_long_loaded_run_is_no_fault() {
    let rows = json!([
        { "at": "SVC", "L1-N": 120.0, "L2-N": 120.0, "L1-L2": 240.0 },
        { "at": "1/3", "L1-N": 113.1, "L2-N": 123.5, "L1-L2": 236.6, "N-G": 3.5, "I L1": 11.31 }
    ]);
    let (visit, found) = of(&long_loaded_run(&rows));
    assert_eq!(found.ranking[0].kind, CauseKind::None, "{:?}", found.ranking[0]);
    let held = interval(&visit, &found, "1/3");
    assert!(held.low.0 == 0.0 && held.high.is_some_and(|h| h.0 < 1.0), "{held:?}");
}

/// Two legs loaded alike: the neutral carries nothing, and whether it is there can't be read.
#[test]
fn a_balanced_load_hides_an_open_neutral_and_that_is_said() {
    let site = json!({
        "volts": [0.5, 2, 0.1], "amperes": [2, 5, 0.01],
        "runs": [
            { "name": "SVC", "legs": "L1 L2", "breaker": 200, "wire": "4/0 Al", "feet": 30 },
            { "name": "1/3", "from": "SVC", "legs": "L1 L2", "breaker": 20, "wire": "12 Cu", "feet": 40, "L1-N": 600, "L2-N": 600, "kind": "resistive" }
        ],
        "rows": [
            { "at": "SVC", "L1-N": 120.0, "L2-N": 120.0, "L1-L2": 240.0 },
            { "at": "1/3", "L1-N": 119.2, "L2-N": 119.2, "L1-L2": 238.4, "I L1": 4.97, "I L2": 4.97 }
        ]
    });
    let (visit, found) = of(&site);
    let held = interval(&visit, &found, "1/3");
    assert_eq!(held.low.0, 0.0);
    assert_eq!(held.high, None, "an open neutral would not have shown");
    let run = visit.run_named("1/3").unwrap();
    assert!(found.next.iter().any(|n| n.load.is_some() && n.tells_apart.contains(&run)), "{:?}", found.next);
}

/// Shifted legs as found, none as left: L1 10 Ω and L2 30 Ω (1440 and 480 W) with the neutral open divide 240 V as 1:3. With it,
/// 0.307 Ω a conductor: 11.24 A and 3.95 A, L1-N 120 − 11.24·0.307 − 7.29·0.307 = 114.3, L2-N 120 − 3.95·0.307 + 7.29·0.307 = 121.0.
fn repaired(left: &Value) -> Value {
    let mut rows = vec![
        json!({ "at": "SVC", "L1-N": 120.0, "L2-N": 120.0, "L1-L2": 240.0 }),
        json!({ "at": "1/3", "L1-N": 59.2, "L2-N": 177.7, "L1-L2": 236.9 }),
        json!({ "at": "SVC", "stage": "as left", "L1-N": 120.0, "L2-N": 120.0, "L1-L2": 240.0 }),
    ];
    rows.push(left.clone());
    let mut site = long_loaded_run(&Value::Array(rows));
    site["runs"][1]["L2-N"] = json!(480);
    site
}

#[test]
fn a_repair_is_proven_by_readings_that_exclude_the_fault() {
    let (visit, found) = of(&repaired(&json!({ "at": "1/3", "stage": "as left", "L1-N": 114.3, "L2-N": 121.0, "L1-L2": 235.3 })));
    assert_eq!((&found.ranking[0].kind, named(&visit, &found.ranking[0].runs)), (&CauseKind::Neutral, vec!["1/3"]));
    assert_eq!(found.repair.unwrap().outcome, RepairOutcome::Proven);
}

#[test]
fn a_repair_that_changed_nothing_is_not_one() {
    let (_, found) = of(&repaired(&json!({ "at": "1/3", "stage": "as left", "L1-N": 59.3, "L2-N": 177.5, "L1-L2": 236.8 })));
    assert_eq!(found.repair.unwrap().outcome, RepairOutcome::NotRepaired);
}

#[test]
fn a_repair_that_was_not_read_is_not_shown() {
    let (_, found) = of(&repaired(&json!({ "at": "SVC", "stage": "as left", "L1-N": 120.1, "L2-N": 120.0, "L1-L2": 240.1 })));
    assert_eq!(found.repair.unwrap().outcome, RepairOutcome::NotShown);
}

#[test]
fn an_instrument_without_a_gain_error_is_taken_too() {
    let mut site = sites().remove(0);
    site["volts"][0] = json!(0);
    let (visit, found) = of(&site);
    assert_eq!(named(&visit, &found.ranking[0].runs), ["SVC"]);
}

#[test]
fn without_a_circuit_list_or_readings_there_is_no_diagnosis() {
    let settings = DiagnosisSettings::default();
    let mut visit = site::visit(&sites()[0]);
    visit.rows.truncate(1);
    visit.rows[0].readings.truncate(1);
    assert_eq!(diagnose(&visit, &settings), None);
    let mut visit = site::visit(&sites()[0]);
    (visit.runs, visit.tree) = (Vec::new(), midwire::visit::Tree::default());
    visit.rows.iter_mut().for_each(|r| r.run = None);
    assert_eq!(diagnose(&visit, &settings), None);
}

/// A wye site, 208Y/120: three 1200 W loads are balanced and need no neutral; with L3's load alone at 300 W the open neutral's
/// point moves. By Millman's theorem with G of 1/12, 1/12 and 1/48 S: the point lies at 120·(1 + a² + a/4)/(2.25) = −40·a, 40 V
/// from the middle along L3 (a = 1∠120°), away from it: L3-N 160 V, L1-N and L2-N √(120² + 40² − 120·40) = 105.8 V.
#[test]
fn an_open_neutral_of_a_wye_circuit_is_found() {
    let site = json!({
        "system": "208Y/120", "volts": [0.5, 2, 0.1], "amperes": [2, 5, 0.01],
        "runs": [
            { "name": "MDP", "legs": "L1 L2 L3", "breaker": 100, "wire": "4/0 Al", "feet": 30 },
            { "name": "1/3/5", "from": "MDP", "legs": "L1 L2 L3", "breaker": 20, "wire": "10 Cu", "feet": 3, "L1-N": 1200, "L2-N": 1200, "L3-N": 300, "kind": "resistive" }
        ],
        "rows": [
            { "at": "MDP", "L1-N": 120.0, "L2-N": 120.1, "L3-N": 119.9, "L1-L2": 207.8 },
            { "at": "1/3/5", "L1-N": 105.8, "L2-N": 105.8, "L3-N": 159.9, "L1-L2": 207.7, "L2-L3": 207.8, "L3-L1": 207.8 }
        ]
    });
    let (visit, found) = of(&site);
    assert_eq!((&found.ranking[0].kind, named(&visit, &found.ranking[0].runs)), (&CauseKind::Neutral, vec!["1/3/5"]));
}
