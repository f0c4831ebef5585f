//! Circuit lists as people write them.

use super::book::{Book, VISIT, circuits, problems};
use crate::visit::TreeFault;

fn check(what: &str, list: &str, readings: &str, expected: &str, said: &str) {
    let out = Book::new().sheet("Visit", VISIT).sheet("C", list).sheet("R", readings).visit();
    assert_eq!(circuits(&out.value), expected, "{what}");
    assert_eq!(problems(&out.problems), said, "{what}");
}

const NONE: &str = "Location|L1-L2";

#[test]
fn a_panel_schedule_is_a_circuit_list() {
    check(
        "panel schedule",
        "PANEL SCHEDULE\n\nCkt #|Description|Phase|OCPD (A)|AWG|Feeds from|Dist. (ft)|VA A|VA B\n1|lights|A|15|14/2 NM Cu|MDP|40|300|\nMDP|main|A B N|200|4/0 Al|POCO|60||",
        NONE,
        "1 < MDP [L1] 15 A 14 Cu 12.19 m L1-N 300 W\nMDP [L1 L2] 200 A 4/0 Al 18.29 m",
        "warning C!H3 volt-amperes-as-watts",
    );
    check(
        "loads under one head",
        "Circuit|Fed from|Legs|Load (W)\n|||L1|L2|L1-L2\nSVC||L1 L2|||\n9|SVC|L1|500||\n12|SVC|L1-L2|||4500",
        NONE,
        "SVC [L1 L2]\n9 < SVC [L1] L1-N 500 W\n12 < SVC [L1-L2] L1-L2 4500 W",
        "",
    );
}

#[test]
fn both_sides_of_a_panel_are_read() {
    let expected = "1 15 A\n3 20 A\n2 20 A\n4 15 A";
    let said = "warning C no-fed-from";
    check("side by side", "Ckt|Load served|Bkr|Ckt|Load served|Bkr\n1|lights|15|2|counter|20\n3|heat|20|4|hall|15", NONE, expected, said);
    check("mirrored", "Ckt|Load served|Bkr|Bkr|Load served|Ckt\n1|lights|15|20|counter|2\n3|heat|20|15|hall|4", NONE, expected, said);
}

#[test]
fn sources_are_found_or_named() {
    check("utility in words", "Circuit|Fed from\nSVC|Utility\n9|svc", NONE, "SVC\n9 < svc", "");
    check("a circuit by the name of the utility", "Circuit|Fed from\nMains|\n9|mains", NONE, "Mains\n9 < mains", "");
    check(
        "unknown",
        "Circuit|Fed from|Breaker A\nSVC||200\nSP1|SVC|60\n9|SP9|15",
        NONE,
        "SVC 200 A\nSP1 < SVC 60 A\n9 < SP9 15 A",
        "error C!B4 unknown-source",
    );
    check("itself", "Circuit|Fed from\nSVC|\n9|9", NONE, "SVC\n9 < 9", "error C!B3 loop");
    check("twice", "Circuit|Fed from\nSVC|\nSVC|\n9|SVC", NONE, "SVC\nSVC\n9 < SVC", "warning C!A3 circuit-twice");
    check("no column", "Circuit|Breaker A\nSVC|200", NONE, "SVC 200 A", "warning C no-fed-from");
    let out = Book::new().sheet("Visit", VISIT).sheet("C", "Circuit|Fed from\nSVC|\na|c\nb|a\nc|b\nd|c").sheet("R", NONE).visit();
    assert_eq!(problems(&out.problems), "error C!B3 loop\nerror C!B4 loop\nerror C!B5 loop");
    assert_eq!(out.value.tree.faults.iter().filter(|f| matches!(f, TreeFault::Loop { .. })).count(), 3);
    assert_eq!(out.value.tree.order, [0]);
}

#[test]
fn a_suggestion_goes_with_a_source_that_is_nearly_one() {
    let out = Book::new()
        .sheet("Visit", VISIT)
        .sheet("C", "Circuit|Fed from\nPanel A|\n9|Panle A")
        .sheet("R", "Location|L1-N\nPanelA|120")
        .visit();
    let hints: Vec<String> =
        out.problems.iter().filter_map(|p| p.hint.as_ref()).map(|h| crate::wording::Language::english().say(h)).collect();
    assert_eq!(hints, ["Did you mean `Panel A`?", "Did you mean `Panel A`?"]);
}

#[test]
fn a_neutral_is_shared_where_a_load_a_reading_or_a_circuit_below_shows_it() {
    let list = |legs: &str, rest: &str| format!("Circuit|Fed from|Legs|Load W L1\nSVC||L1 L2|\n5/7|SVC|{legs}|{rest}");
    check("load", &list("2P", "300"), NONE, "SVC [L1 L2]\n5/7 < SVC [L1 L2] L1-N 300 W", "");
    check("load of nothing", &list("2P", "0"), NONE, "SVC [L1 L2]\n5/7 < SVC L1-N 0 W", "error C!C3 legs-neutral");
    check("reading", &list("A/B", ""), "Location|L1-N\n5/7|120", "SVC [L1 L2]\n5/7 < SVC [L1 L2]", "");
    check("line to line alone", &list("A/B", ""), "Location|L1-L2\n5/7|240", "SVC [L1 L2]\n5/7 < SVC", "error C!C3 legs-neutral");
    check("circuit below", &list("L1&L2", "\n5|5/7|L1|"), NONE, "SVC [L1 L2]\n5/7 < SVC [L1 L2]\n5 < 5/7 [L1]", "");
    check("reading below", &list("2P", "\n5|5/7|2P|\n"), "Location|L1-N\n5|120", "SVC [L1 L2]\n5/7 < SVC [L1 L2]\n5 < 5/7 [L1 L2]", "");
    check("nothing", &list("2P", ""), NONE, "SVC [L1 L2]\n5/7 < SVC", "error C!C3 legs-neutral");
}

#[test]
fn rows_that_are_no_circuits() {
    check("total", "Circuit|Fed from|Load W L1\nSVC||\n9|SVC|500\nTotal||500", NONE, "SVC\n9 < SVC L1-N 500 W", "warning C!A4 total-row");
    check("note", "Circuit|Fed from\nSVC|\n9|SVC\nBreakers checked by Ines Marlow", NONE, "SVC\n9 < SVC", "");
    check("a bare name that is a source", "Circuit|Fed from|Breaker A\nSVC||\n9|SVC|15", NONE, "SVC\n9 < SVC 15 A", "");
    check(
        "a bare name where readings were taken",
        "Circuit|Fed from|Breaker A\nSVC||\n9|SVC|15\nYard||",
        "Location|L1-N\nYard|120",
        "SVC\n9 < SVC 15 A\nYard",
        "",
    );
    check("no name", "Circuit|Fed from|Breaker A\nSVC||200\n|SVC|15", NONE, "SVC 200 A", "error C!A3 row-without");
    check("numbers for names", "Circuit|Fed from\nSVC|\n8|SVC\n8.5|8", NONE, "SVC\n8 < SVC\n8.5 < 8", "");
}

#[test]
fn two_lengths_must_agree() {
    check("agree", "Circuit|Fed from|Length ft|Length m\nSVC||70|21.3", NONE, "SVC 21.34 m", "");
    check("disagree", "Circuit|Fed from|Length ft|Length m\nSVC||70|70", NONE, "SVC 21.34 m", "error C!D2 length-twice");
    check("either", "Circuit|Fed from|Length ft|Length m\nSVC|||70", NONE, "SVC 70.00 m", "");
}

#[test]
fn a_wrong_cell_costs_that_cell_alone() {
    check(
        "all wrong but the name",
        "Circuit|Fed from|Legs|Breaker A|Tie|Wire|Length ft|Load W L1|Load kind\nSVC|#REF!|blue|x2|maybe|red|far|much|odd",
        NONE,
        "SVC",
        "error C!B2 error-value\nerror C!C2 not-legs\nerror C!D2 not-a-number\nerror C!E2 choice\nerror C!F2 not-a-wire\nerror C!G2 not-a-number\nerror C!H2 not-a-number\nerror C!I2 choice",
    );
}
