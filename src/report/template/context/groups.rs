//! Findings as a reader wants them: what is alike is told once, with its places.

use crate::report::Source;
use crate::report::duties;
use crate::report::facts::visible;
use crate::report::repair::Repair;
use crate::report::tables::{limit, measured};
use crate::report::words;
use crate::results::{Finding, Signal, Verdict};
use crate::visit::Stage;
use crate::wording::Language;
use serde::Serialize;
use std::collections::{BTreeSet, HashMap};

/// Findings that say the same in other places are told one by one up to this many, else by the worst of them.
const ONE_BY_ONE: usize = 3;
/// Entries of one group.
const MOST_ITEMS: usize = 12;
/// Places named with an entry.
const MOST_PLACES: usize = 24;
/// Cells named with an entry.
const MOST_CELLS: usize = 4;
/// Groups told in a document; the workbook that comes with it has all.
const MOST_GROUPS: usize = 48;

/// Findings of one rule that ask for the same.
#[derive(Debug, Serialize)]
pub(super) struct Group {
    pub rule: String,
    pub title: String,
    pub signal: &'static str,
    pub undecided: bool,
    /// Settled by a repair on this visit, as the readings as left prove.
    pub mended: bool,
    /// How many findings.
    pub count: usize,
    pub items: Vec<Item>,
    /// Findings that no item stands for.
    pub more: usize,
    pub advice: String,
    pub who: String,
    pub when: String,
    pub basis: String,
    /// All places, the first of them by name.
    pub places: String,
}

/// One finding, or the worst of several that say the same elsewhere.
#[derive(Debug, Serialize)]
pub(super) struct Item {
    says: String,
    location: String,
    state: String,
    as_left: bool,
    measured: String,
    limit: String,
    cells: String,
    many_cells: bool,
    /// How many findings it stands for.
    count: usize,
    /// Where else, if it stands for several.
    places: String,
}

/// All groups, in the order of the findings given, what is mended behind the rest.
pub(super) fn groups(source: &Source, shown: &[&Finding], repair: Option<&Repair>, language: &Language) -> Vec<Group> {
    let titles: HashMap<&str, &str> = source.rules.iter().map(|r| (r.rule.as_str(), r.title.as_str())).collect();
    let mut order: Vec<(String, bool, Vec<&Finding>)> = Vec::new();
    let mut known: HashMap<(&str, Signal, Verdict, bool, String), usize> = HashMap::new();
    for f in shown {
        let advice = language.say(&f.advice);
        let mended = repair.is_some_and(|r| r.settles(f));
        let next = order.len();
        let at = *known.entry((f.rule, f.signal, f.verdict, mended, advice.clone())).or_insert(next);
        match order.get_mut(at) {
            Some((_, _, findings)) => findings.push(f),
            None => order.push((advice, mended, vec![f])),
        }
    }
    order.sort_by_key(|(_, mended, _)| *mended);
    order.into_iter().filter_map(|(advice, mended, findings)| group(&titles, advice, mended, &findings, language)).collect()
}

/// The groups that a document tells, and how many findings the others hold.
pub(super) fn told(mut groups: Vec<Group>) -> (Vec<Group>, usize) {
    let rest = groups.split_off(groups.len().min(MOST_GROUPS));
    (groups, rest.iter().map(|g| g.count).sum())
}

fn group(titles: &HashMap<&str, &str>, advice: String, mended: bool, findings: &[&Finding], language: &Language) -> Option<Group> {
    let first = *findings.first()?;
    let mut items = items(findings, language);
    let rest = items.split_off(items.len().min(MOST_ITEMS));
    let duty = duties::of(first);
    Some(Group {
        rule: first.rule.to_owned(),
        title: titles.get(first.rule).map_or_else(|| first.rule.to_owned(), |t| (*t).to_owned()),
        signal: first.signal.word(),
        undecided: first.verdict == Verdict::Undecided,
        mended,
        count: findings.len(),
        more: rest.iter().map(|i| i.count).sum(),
        who: duty.map_or_else(String::new, |d| language.text(d.key())),
        when: language.text(duties::when(first.signal)),
        basis: first.basis.clone(),
        places: words::listed(&places(findings, None), MOST_PLACES, language),
        items,
        advice,
    })
}

/// Findings with one wording become one entry where they are many.
fn items(findings: &[&Finding], language: &Language) -> Vec<Item> {
    let mut order: Vec<Vec<&Finding>> = Vec::new();
    let mut known: HashMap<&str, usize> = HashMap::new();
    for f in findings {
        let next = order.len();
        let at = *known.entry(f.says.key).or_insert(next);
        match order.get_mut(at) {
            Some(alike) => alike.push(f),
            None => order.push(vec![f]),
        }
    }
    order.iter().flat_map(|alike| entries(alike, language)).collect()
}

fn entries(alike: &[&Finding], language: &Language) -> Vec<Item> {
    if alike.len() <= ONE_BY_ONE {
        return alike.iter().map(|f| item(f, language)).collect();
    }
    let worst = alike.iter().copied().reduce(|a, b| if excess(b) > excess(a) { b } else { a });
    let several = |f: &Finding| Item {
        count: alike.len(),
        places: words::listed(&places(alike, f.location.as_deref()), MOST_PLACES, language),
        ..item(f, language)
    };
    worst.map(several).into_iter().collect()
}

/// How far a value is beyond its limit.
fn excess(f: &Finding) -> f64 {
    let (Some(m), Some(limit)) = (f.measured, f.limit) else { return f64::NEG_INFINITY };
    let over = limit.high.map_or(f64::NEG_INFINITY, |high| m.value - high);
    let under = limit.low.map_or(f64::NEG_INFINITY, |low| low - m.value);
    over.max(under)
}

/// The places of findings, each once, in their order, but for one.
fn places(findings: &[&Finding], except: Option<&str>) -> Vec<String> {
    let mut seen: BTreeSet<&str> = except.into_iter().collect();
    findings.iter().filter_map(|f| f.location.as_deref()).filter(|l| seen.insert(l)).map(visible).collect()
}

fn item(f: &Finding, language: &Language) -> Item {
    let cells: Vec<String> = f.cells.iter().map(ToString::to_string).collect();
    Item {
        says: language.say(&f.says),
        location: f.location.clone().unwrap_or_default(),
        state: f.state.clone().filter(|s| s != Stage::AsFound.name()).unwrap_or_default(),
        as_left: f.stage == Some(Stage::AsLeft),
        measured: measured(f, language),
        limit: limit(f, language),
        cells: words::listed(&cells, MOST_CELLS, language),
        many_cells: cells.len() > 1,
        count: 1,
        places: String::new(),
    }
}
