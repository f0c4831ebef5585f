//! What a template knows.

use crate::quantity::Unit;
use crate::report::tables::{limit, measured, shown};
use crate::report::{Source, words};
use crate::results::{Diagnosis, Finding, Signal, Verdict};
use crate::visit::Stage;
use crate::wording::{Language, Sentence};
use serde::Serialize;
use std::collections::BTreeMap;

/// Findings of one group that are told one by one.
const MOST_ITEMS: usize = 6;

/// The values of a template; texts are as they stand in the workbook and are escaped where they are printed.
#[derive(Debug, Serialize)]
pub struct Context {
    site: BTreeMap<&'static str, String>,
    system: System,
    document: Identity,
    worst: String,
    counts: BTreeMap<&'static str, usize>,
    findings: Vec<Group>,
    actions: Vec<Action>,
    diagnosis: Option<Causes>,
    balance: Option<Legs>,
    has: BTreeMap<String, bool>,
    left_out: LeftOut,
}

#[derive(Debug, Serialize)]
struct System {
    name: String,
    line_to_neutral: String,
    line_to_line: String,
    three_phase: bool,
}

#[derive(Debug, Serialize)]
struct Identity {
    file: String,
    sha256: String,
    program: String,
    date: String,
}

/// Findings of one rule that ask for the same.
#[derive(Debug, Serialize)]
struct Group {
    rule: String,
    title: String,
    signal: &'static str,
    undecided: bool,
    items: Vec<Item>,
    /// Findings of the group beyond the listed ones.
    more: usize,
    advice: String,
    basis: String,
}

#[derive(Debug, Serialize)]
struct Item {
    says: String,
    location: String,
    state: String,
    stage: String,
    measured: String,
    limit: String,
    cells: String,
}

/// Something to do.
#[derive(Debug, Serialize)]
struct Action {
    signal: &'static str,
    advice: String,
    title: String,
    places: String,
    when: String,
}

#[derive(Debug, Serialize)]
struct Causes {
    kind: &'static str,
    cause: String,
    probability: String,
    sure: bool,
    ohms: String,
    together: bool,
    runs: String,
    /// Runs in which an open neutral would not have shown.
    open_not_shown: String,
    repair: String,
}

#[derive(Debug, Serialize)]
struct Legs {
    neutral: String,
    imbalance: String,
    moves: usize,
    neutral_after: String,
    imbalance_after: String,
}

#[derive(Debug, Serialize)]
struct LeftOut {
    errors: usize,
    warnings: usize,
}

impl Context {
    /// Of a checked visit.
    pub fn new(source: &Source, language: &Language, date: Option<&str>, tables: &[&str], figures: &[&str]) -> Self {
        let groups = groups(source, language);
        let shown = shown(source);
        let count = |s: Signal| shown.iter().filter(|f| f.signal == s).count();
        let errors = source.problems.iter().filter(|p| p.severity == crate::diag::Severity::Error).count();
        let undecided = shown.iter().filter(|f| f.verdict == Verdict::Undecided).count();
        let mut has: BTreeMap<String, bool> = HAS.iter().map(|n| (n.replace('-', "_"), false)).collect();
        for name in tables.iter().chain(figures) {
            has.insert(name.replace('-', "_"), true);
        }
        has.insert("photos".into(), source.visit.photos.iter().any(|p| p.bytes.is_some()));
        has.insert("as_left".into(), source.visit.rows.iter().any(|r| r.stage == Stage::AsLeft));
        Self {
            site: site(source),
            system: system(source, language),
            document: Identity {
                file: source.file.to_owned(),
                sha256: source.sha256.to_owned(),
                program: source.program.to_owned(),
                date: date.unwrap_or_default().to_owned(),
            },
            worst: shown.iter().map(|f| f.signal).max().map_or_else(String::new, |s| s.word().to_owned()),
            counts: [
                ("danger", count(Signal::Danger)),
                ("warning", count(Signal::Warning)),
                ("caution", count(Signal::Caution)),
                ("notice", count(Signal::Notice)),
                ("failed", shown.len() - undecided),
                ("undecided", undecided),
                ("passed", source.findings.len() - shown.len()),
                ("readings", source.visit.rows.iter().map(|r| r.readings.len()).sum()),
                ("locations", locations(source)),
                ("circuits", source.visit.runs.len()),
            ]
            .into(),
            actions: actions(&groups, language),
            findings: groups,
            diagnosis: source.diagnosis.and_then(|d| causes(source, d, language)),
            balance: source.balance.map(|b| Legs {
                neutral: language.quantity(b.neutral.0, 1, Unit::Ampere),
                imbalance: language.quantity(b.imbalance_percent, 0, Unit::Percent),
                moves: b.moves.len(),
                neutral_after: language.quantity(b.neutral_after.0, 1, Unit::Ampere),
                imbalance_after: language.quantity(b.imbalance_after_percent, 0, Unit::Percent),
            }),
            has,
            left_out: LeftOut { errors, warnings: source.problems.len() - errors },
        }
    }

    /// All names a template can use, dotted.
    pub(super) fn names(&self) -> Vec<String> {
        let mut names = Vec::new();
        if let Ok(table) = toml::Table::try_from(self) {
            collect("", &toml::Value::Table(table), &mut names);
        }
        names
    }
}

/// Tables and figures a template may ask for with `has`, so that asking is no error where there is none.
const HAS: [&str; 24] = [
    "summary",
    "findings",
    "basis",
    "left-out",
    "causes",
    "not-shown",
    "next",
    "exposure",
    "load-steps",
    "readings",
    "before-after",
    "circuits",
    "legs",
    "leg-circuits",
    "moves",
    "instruments",
    "tests",
    "observations",
    "work",
    "revisions",
    "neutral-position",
    "run-tree",
    "leg-load",
    "photos",
];

fn collect(prefix: &str, value: &toml::Value, names: &mut Vec<String>) {
    match value {
        toml::Value::Table(table) => {
            for (key, inner) in table {
                let name = if prefix.is_empty() { key.clone() } else { format!("{prefix}.{key}") };
                names.push(name.clone());
                collect(&name, inner, names);
            }
        }
        toml::Value::Array(items) => items.iter().take(1).for_each(|inner| collect(prefix, inner, names)),
        _ => {}
    }
}

fn site(source: &Source) -> BTreeMap<&'static str, String> {
    let s = &source.visit.site;
    let text = |l: &Option<crate::diag::Located<String>>| l.as_ref().map_or_else(String::new, |l| l.value.clone());
    [
        ("job", text(&s.job)),
        ("client", text(&s.client)),
        ("address", text(&s.address)),
        ("date", s.date.as_ref().map_or_else(String::new, |d| d.value.to_string())),
        ("purpose", text(&s.purpose)),
        ("prepared_by", text(&s.prepared_by)),
        ("licence", text(&s.licence)),
        ("company", text(&s.company)),
        ("service_rating", text(&s.service_rating)),
        ("supplied_by", text(&s.supplied_by)),
        ("code", text(&s.code)),
        ("weather", text(&s.weather)),
        ("remarks", text(&s.remarks)),
    ]
    .into()
}

fn system(source: &Source, language: &Language) -> System {
    let s = &source.visit.system;
    System {
        name: s.name.clone(),
        line_to_neutral: language.quantity(s.line_to_neutral.0, 0, Unit::Volt),
        line_to_line: language.quantity(s.line_to_line.0, 0, Unit::Volt),
        three_phase: s.legs().len() > 2,
    }
}

fn locations(source: &Source) -> usize {
    let mut names: Vec<&str> = source.visit.rows.iter().map(|r| r.location.value.as_str()).collect();
    names.sort_unstable();
    names.dedup();
    names.len()
}

fn groups(source: &Source, language: &Language) -> Vec<Group> {
    let mut groups: Vec<Group> = Vec::new();
    for f in shown(source) {
        let advice = language.say(&f.advice);
        let undecided = f.verdict == Verdict::Undecided;
        let same = |g: &&mut Group| g.rule == f.rule && g.signal == f.signal.word() && g.undecided == undecided && g.advice == advice;
        if let Some(group) = groups.iter_mut().find(same) {
            if group.items.len() < MOST_ITEMS {
                group.items.push(item(f, language))
            } else {
                group.more += 1
            }
            continue;
        }
        let title = source.rules.iter().find(|r| r.rule == f.rule).map_or_else(|| f.rule.to_owned(), |r| r.title.clone());
        groups.push(Group {
            rule: f.rule.to_owned(),
            title,
            signal: f.signal.word(),
            undecided,
            items: vec![item(f, language)],
            more: 0,
            advice,
            basis: f.basis.clone(),
        });
    }
    groups
}

fn item(f: &Finding, language: &Language) -> Item {
    let cells: Vec<String> = f.cells.iter().take(4).map(ToString::to_string).collect();
    let more = f.cells.len() - cells.len();
    let cells = if more > 0 {
        format!("{} {}", cells.join(", "), language.say(&Sentence::new("report.and-more").with("n", more)))
    } else {
        cells.join(", ")
    };
    Item {
        says: language.say(&f.says),
        location: f.location.clone().unwrap_or_default(),
        state: f.state.clone().unwrap_or_default(),
        stage: f.stage.map_or_else(String::new, |s| s.name().to_owned()),
        measured: measured(f, language),
        limit: limit(f, language),
        cells,
    }
}

/// What to do, each advice once, worst first.
fn actions(groups: &[Group], language: &Language) -> Vec<Action> {
    let mut actions: Vec<Action> = Vec::new();
    for group in groups.iter().filter(|g| g.signal != Signal::Notice.word()) {
        if actions.iter().any(|a| a.advice == group.advice) {
            continue;
        }
        let mut places: Vec<&str> = group.items.iter().map(|i| i.location.as_str()).filter(|l| !l.is_empty()).collect();
        places.dedup();
        actions.push(Action {
            signal: group.signal,
            advice: group.advice.clone(),
            title: group.title.clone(),
            places: places.join(", "),
            when: language.text(&format!("report.when-{}", group.signal.to_lowercase())),
        });
    }
    actions
}

fn causes(source: &Source, d: &Diagnosis, language: &Language) -> Option<Causes> {
    use crate::results::{CauseKind, RepairOutcome};
    let lead = d.ranking.first()?;
    let name = |r: &usize| source.visit.runs.get(*r).map(|r| r.name.value.clone());
    let open: Vec<String> =
        d.neutral.iter().filter(|n| n.high.is_none() && !lead.runs.contains(&n.run)).filter_map(|n| name(&n.run)).collect();
    let repair = d.repair.as_ref().map(|r| match r.outcome {
        RepairOutcome::Proven => "report.repair-proven",
        RepairOutcome::NotRepaired => "report.repair-not",
        RepairOutcome::NotShown => "report.repair-not-shown",
    });
    Some(Causes {
        kind: match lead.kind {
            CauseKind::None => "none",
            CauseKind::Neutral => "neutral",
            CauseKind::Hot(_) => "hot",
            CauseKind::Supply(_) => "supply",
            CauseKind::Reading(_) => "reading",
        },
        cause: words::cause(source, lead, language),
        probability: language.quantity((100.0 * lead.probability).clamp(1.0, 99.0), 0, Unit::Percent),
        sure: lead.probability >= 0.8,
        ohms: lead.ohms.map_or_else(String::new, |o| words::between(o.low.0, o.high.map(|h| h.0), language)),
        together: lead.runs.len() > 1,
        runs: lead.runs.iter().filter_map(name).collect::<Vec<_>>().join(", "),
        open_not_shown: open.join(", "),
        repair: repair.map_or_else(String::new, |key| language.text(key)),
    })
}
