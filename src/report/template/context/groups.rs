//! Findings as a reader wants them: what is alike is told once, with its places.

use super::causes;
use crate::report::Source;
use crate::report::duties;
use crate::report::repair::{Repair, may_follow};
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
    /// May go away by itself once the cause that was found is settled.
    pub follows: bool,
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
    /// What is there.
    serves: String,
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
    let said = Said {
        language,
        titles: source.rules.iter().map(|r| (r.rule.as_str(), r.title.as_str())).collect(),
        serves: source.visit.runs.iter().filter_map(|r| Some((r.name.value.as_str(), r.serves.as_ref()?.value.as_str()))).collect(),
    };
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
    let cause = causes::found(source);
    let follows = |findings: &[&Finding]| cause.is_some_and(|c| findings.iter().all(|f| may_follow(f, c)));
    order
        .into_iter()
        .filter_map(|(advice, mended, findings)| Some(Group { mended, follows: follows(&findings), ..said.group(advice, &findings)? }))
        .collect()
}

/// The groups that a document tells, and how many findings the others hold.
pub(super) fn told(mut groups: Vec<Group>) -> (Vec<Group>, usize) {
    let rest = groups.split_off(groups.len().min(MOST_GROUPS));
    (groups, rest.iter().map(|g| g.count).sum())
}

/// What findings are told with: the words, the titles of the rules, and what each run serves.
struct Said<'a> {
    language: &'a Language,
    titles: HashMap<&'a str, &'a str>,
    serves: HashMap<&'a str, &'a str>,
}

impl Said<'_> {
    fn group(&self, advice: String, findings: &[&Finding]) -> Option<Group> {
        let first = *findings.first()?;
        let mut items = self.items(findings);
        let rest = items.split_off(items.len().min(MOST_ITEMS));
        Some(Group {
            rule: first.rule.to_owned(),
            title: self.titles.get(first.rule).map_or_else(|| first.rule.to_owned(), |t| (*t).to_owned()),
            signal: first.signal.word(),
            undecided: first.verdict == Verdict::Undecided,
            mended: false,
            follows: false,
            count: findings.len(),
            more: rest.iter().map(|i| i.count).sum(),
            who: duties::of(first).map_or_else(String::new, |d| self.language.text(d.key())),
            when: self.language.text(duties::when(first.signal)),
            basis: first.basis.clone(),
            places: self.places(findings, None),
            items,
            advice: words::ended(advice),
        })
    }

    /// Findings with one wording become one entry where they are many.
    fn items(&self, findings: &[&Finding]) -> Vec<Item> {
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
        order.iter().flat_map(|alike| self.entries(alike)).collect()
    }

    fn entries(&self, alike: &[&Finding]) -> Vec<Item> {
        if alike.len() <= ONE_BY_ONE {
            return alike.iter().map(|f| self.item(f)).collect();
        }
        let worst = alike.iter().copied().reduce(|a, b| if excess(b) > excess(a) { b } else { a });
        let several = |f: &Finding| Item { count: alike.len(), places: self.places(alike, f.location.as_deref()), ..self.item(f) };
        worst.map(several).into_iter().collect()
    }

    fn item(&self, f: &Finding) -> Item {
        let cells: Vec<String> = f.cells.iter().map(ToString::to_string).collect();
        let location = f.location.clone().unwrap_or_default();
        Item {
            says: words::ended(self.language.say(&f.says)),
            serves: self.serves.get(location.as_str()).map_or_else(String::new, |s| (*s).to_owned()),
            location,
            state: f.state.clone().filter(|s| s != Stage::AsFound.name()).unwrap_or_default(),
            as_left: f.stage == Some(Stage::AsLeft),
            measured: measured(f, self.language),
            limit: limit(f, self.language),
            cells: words::listed(&cells, MOST_CELLS, self.language),
            many_cells: cells.len() > 1,
            count: 1,
            places: String::new(),
        }
    }

    /// The places of findings, each once, in their order, but for one; what is there where they are few.
    fn places(&self, findings: &[&Finding], except: Option<&str>) -> String {
        let mut seen: BTreeSet<&str> = except.into_iter().collect();
        let places: Vec<&str> = findings.iter().filter_map(|f| f.location.as_deref()).filter(|l| seen.insert(l)).collect();
        let is_few = places.len() <= words::FEW;
        let told: Vec<String> = places.iter().map(|p| words::place(p, self.serves.get(p).copied().filter(|_| is_few))).collect();
        words::listed(&told, MOST_PLACES, self.language)
    }
}

/// How far a value is beyond its limit.
fn excess(f: &Finding) -> f64 {
    let (Some(m), Some(limit)) = (f.measured, f.limit) else { return f64::NEG_INFINITY };
    let over = limit.high.map_or(f64::NEG_INFINITY, |high| m.value - high);
    let under = limit.low.map_or(f64::NEG_INFINITY, |low| low - m.value);
    over.max(under)
}
