//! The network cut down to what the readings can see.
//!
//! Runs with a measured location at or below them are kept, the service runs always, and runs with a stated load beyond the last
//! measured location of a branch circuit: without it the drop on the way there would be another. What else hangs unmeasured on a kept run becomes
//! load at its far end (the drop along it is lost: a per cent or two of the load's current). Kept runs that only lead on, with
//! no reading, no load and no branch at their far end, are one span with the run they lead to: resistance added in either is the
//! same to every reading. So the cost of a fit grows with the readings, not with the circuit list.

use super::model::exponent;
use super::settings::{self, DiagnosisSettings};
use crate::network::{self, Assumption, Law, Load, Network, SLOTS, Span, slot};
use crate::quantity::math;
use crate::visit::{Conductor, Legs, LoadKind, Visit};
use std::collections::BTreeMap;

/// A load of the reduced network and what is known of it.
#[derive(Clone, Debug)]
pub(super) struct LumpedLoad {
    /// Median of its watts stands in the network; this is the spread of its logarithm where the list states nothing, and
    /// `None` where it states the watts.
    pub unlisted: Option<f64>,
    /// The list does not say what kind it is.
    pub kind_unknown: bool,
    /// Switched on in one state alone.
    pub state: Option<usize>,
    /// Nobody wrote it down and nothing points to it.
    pub is_extra: bool,
}

/// The reduced network.
#[derive(Clone, Debug)]
pub(super) struct Reduced {
    /// Spans and loads, at their most probable values before any reading.
    pub network: Network,
    /// One entry a load.
    pub loads: Vec<LumpedLoad>,
    /// Runs of each span, the one at its far end first.
    pub runs: Vec<Vec<usize>>,
    /// The span whose far end is the run's far end, where it is one.
    pub end: Vec<Option<usize>>,
    /// The span a kept run is part of.
    pub within: Vec<Option<usize>>,
    /// The kept run at whose far end a run's loads hang; itself for kept ones, `None` for runs that hang loose.
    pub attached: Vec<Option<usize>>,
    /// Set that a span belongs to: spans with the same measured locations at or below them, named by the lowest of them.
    pub class: Vec<usize>,
    /// Spans whose ohms rest on a length or a wire that the list does not state.
    pub guessed: Vec<bool>,
}

/// Cuts the network of a visit down to what readings at the measured runs can see; `None` where nothing is left.
pub(super) fn reduce(visit: &Visit, measured: &[bool], settings: &DiagnosisSettings) -> Option<Reduced> {
    let built = network::build(visit, &settings.network);
    let kept = Kept::of(visit, measured);
    let lumps = Lumps::gather(visit, &built.network, &built.assumptions, &kept);
    let mut reduced = Reduced {
        network: Network { source: built.network.source, spans: Vec::new(), loads: Vec::new() },
        loads: Vec::new(),
        runs: Vec::new(),
        end: vec![None; visit.runs.len()],
        within: vec![None; visit.runs.len()],
        attached: kept.attached.clone(),
        class: Vec::new(),
        guessed: Vec::new(),
    };
    reduced.add_spans(visit, &built.network.spans, &kept, measured, &lumps);
    reduced.add_loads(&lumps, &built.network);
    reduced.name_classes(measured);
    reduced.mark_guesses(&built.assumptions);
    (!reduced.network.spans.is_empty()).then_some(reduced)
}

/// Which runs are kept.
struct Kept {
    is_kept: Vec<bool>,
    children: Vec<usize>,
    attached: Vec<Option<usize>>,
}

impl Kept {
    fn of(visit: &Visit, measured: &[bool]) -> Self {
        let tree = &visit.tree;
        let n = visit.runs.len();
        let mut is_kept = vec![false; n];
        let mut children = vec![0; n];
        for &run in tree.order.iter().rev() {
            is_kept[run] |= measured[run] || tree.parent[run].is_none();
            if let Some(parent) = tree.parent[run].filter(|_| is_kept[run]) {
                is_kept[parent] = true;
                children[parent] += 1;
            }
        }
        let is_short = n <= settings::MOST_RUNS;
        for &run in &tree.order {
            let is_branch = |p: &usize| is_kept[*p] && tree.parent[*p].is_some() && !is_feeder(visit, *p);
            if let Some(parent) =
                tree.parent[run].filter(is_branch).filter(|_| is_short && !is_kept[run] && !visit.runs[run].loads.is_empty())
            {
                is_kept[run] = true;
                children[parent] += 1;
            }
        }
        let mut attached = vec![None; n];
        for &run in &tree.order {
            attached[run] = if is_kept[run] { Some(run) } else { tree.parent[run].and_then(|p| attached[p]) };
        }
        Self { is_kept, children, attached }
    }
}

/// It feeds circuits with breakers of their own.
fn is_feeder(visit: &Visit, run: usize) -> bool {
    visit.tree.children[run].iter().any(|c| visit.runs[*c].breaker.is_some())
}

/// Loads that share node, conductors and kind, as one: the watts add. For stated ones the sum alone matters; the sum of loads of
/// which only the order of magnitude is known is taken as log-normal with the mean and variance of the sum (Fenton 1960).
struct Lumps {
    by_place: BTreeMap<(usize, usize, usize, Option<LoadKindKey>), Lump>,
}

type LoadKindKey = u8;

#[derive(Clone, Copy, Debug, Default)]
struct Lump {
    law: Option<(Law, f64, f64)>,
    stated: f64,
    mean: f64,
    variance: f64,
}

impl Lump {
    fn add_unstated(&mut self, median: f64, spread: f64) {
        let mean = median * math::exp(spread * spread / 2.0);
        self.mean += mean;
        self.variance += mean * mean * (math::exp(spread * spread) - 1.0);
    }

    fn unstated(&self) -> Option<(f64, f64)> {
        (self.mean > 0.0).then(|| {
            let square = math::ln_1p(self.variance / (self.mean * self.mean));
            (self.mean * math::exp(-square / 2.0), square.sqrt())
        })
    }
}

fn key(kind: LoadKind) -> LoadKindKey {
    match kind {
        LoadKind::Resistive => 0,
        LoadKind::Filament => 1,
        LoadKind::Electronic => 2,
        LoadKind::Motor => 3,
    }
}

impl Lumps {
    fn gather(visit: &Visit, network: &Network, assumptions: &[Assumption], kept: &Kept) -> Self {
        let mut is_assumed = vec![false; network.loads.len()];
        for a in assumptions {
            if let Assumption::Watts(load) = a {
                is_assumed[*load] = true;
            }
        }
        let mut lumps = Self { by_place: BTreeMap::new() };
        for (load, _) in network.loads.iter().zip(&is_assumed).filter(|(_, assumed)| !**assumed) {
            let Some(at) = kept.attached[load.at] else { continue };
            let kind = visit.runs[load.at].load_kind.as_ref().map(|k| key(k.value));
            let lump = lumps.by_place.entry((at, load.between.0, load.between.1, kind)).or_default();
            lump.law = Some((load.law, load.rated_volts, load.power_factor));
            lump.stated += load.watts;
        }
        for &run in &visit.tree.order {
            lumps.add_silent(visit, network, run, kept);
        }
        lumps
    }

    /// A run without any entry may carry anything: see [`settings::UNLISTED`]. A home run that leads to the outlets of its circuit
    /// has its loads there.
    fn add_silent(&mut self, visit: &Visit, network: &Network, run: usize, kept: &Kept) {
        let r = &visit.runs[run];
        let children = &visit.tree.children[run];
        let is_home_run = !children.is_empty()
            && visit.tree.parent[run].is_some()
            && r.breaker.is_some()
            && children.iter().all(|c| visit.runs[*c].breaker.is_none());
        let (Some(at), Some(legs)) = (kept.attached[run], legs_of(&network.spans[run])) else { return };
        if !r.loads.is_empty() || is_home_run {
            return;
        }
        let kind = r.load_kind.as_ref().map(|k| key(k.value));
        let (median, spread) = if legs.neutral { settings::UNLISTED } else { settings::UNLISTED_LINE_LINE };
        let lines: Vec<usize> = legs.iter().map(|l| l.index()).collect();
        let pairs: Vec<(usize, usize)> =
            if legs.neutral { lines.iter().map(|&l| (l, SLOTS - 1)).collect() } else { lines.windows(2).map(|w| (w[0], w[1])).collect() };
        for (a, b) in pairs {
            self.by_place.entry((at, a, b, kind)).or_default().add_unstated(median, spread);
        }
    }
}

fn legs_of(span: &Span) -> Option<Legs> {
    let lines = [span.ohms[0].is_some(), span.ohms[1].is_some(), span.ohms[2].is_some()];
    let legs = Legs { lines, neutral: span.ohms[3].is_some() };
    (legs.count() > 0).then_some(legs)
}

/// Volts a load between two slots is rated for: what the source has between them.
fn rated_volts(network: &Network, between: (usize, usize)) -> f64 {
    let phasor = |s: usize| {
        let leg = |part: fn(&network::Phasor) -> f64| network.source.volts.get(s).map_or(0.0, |v| v * part(&network.source.direction[s]));
        (leg(|p| p.re), leg(|p| p.im))
    };
    let (a, b) = (phasor(between.0), phasor(between.1));
    math::hypot(a.0 - b.0, a.1 - b.1)
}

impl Reduced {
    fn add_spans(&mut self, visit: &Visit, spans: &[Span], kept: &Kept, measured: &[bool], lumps: &Lumps) {
        let has_load = |run: usize| lumps.by_place.range((run, 0, 0, None)..(run + 1, 0, 0, None)).next().is_some();
        for &run in visit.tree.order.iter().filter(|r| kept.is_kept[**r]) {
            if legs_of(&spans[run]).is_none() {
                continue;
            }
            let is_bare = !has_load(run) || visit.runs.len() > settings::MOST_RUNS;
            let leads_on = visit.tree.parent[run].is_some() && !measured[run] && kept.children[run] == 1 && is_bare;
            let kind_of = |r: usize| spans[r].ohms.map(|o| o.is_some());
            let only = visit.tree.children[run].iter().find(|c| kept.is_kept[**c]);
            if leads_on && spans[run].electrode.is_none() && only.is_some_and(|&c| kind_of(c) == kind_of(run)) {
                continue;
            }
            self.add_span(visit, spans, run);
        }
    }

    /// Adds the span that ends with a run and begins at the next one above it that ends a span.
    fn add_span(&mut self, visit: &Visit, spans: &[Span], run: usize) {
        let mut span = spans[run].clone();
        let at = self.network.spans.len();
        let mut runs = vec![run];
        let mut above = visit.tree.parent[run];
        while let Some(p) = above.filter(|p| self.end[*p].is_none()) {
            for s in 0..SLOTS {
                span.ohms[s] = span.ohms[s].zip(spans[p].ohms[s]).map(|(a, b)| a + b);
                span.reactance[s] += spans[p].reactance[s];
            }
            runs.push(p);
            self.within[p] = Some(at);
            above = visit.tree.parent[p];
        }
        span.fed_from = above.and_then(|p| self.end[p]);
        self.end[run] = Some(at);
        self.within[run] = Some(at);
        self.network.spans.push(span);
        self.runs.push(runs);
    }

    fn add_loads(&mut self, lumps: &Lumps, full: &Network) {
        for (&(run, a, b, kind), lump) in &lumps.by_place {
            let Some(at) = self.within[run] else { continue };
            let rated = rated_volts(full, (a, b));
            if rated <= 0.0 || [a, b].iter().any(|s| self.network.spans[at].ohms[*s].is_none()) {
                continue;
            }
            let (law, rated_volts, power_factor) = lump.law.unwrap_or((Law::Power { exponent: 1.0 }, rated, 1.0));
            let law = if kind.is_some() && lump.law.is_some() { law } else { Law::Power { exponent: exponent(settings::EXPONENT.0).0 } };
            let mut add = |watts: f64, unlisted: Option<f64>| {
                self.network.loads.push(Load { at, between: (a, b), rated_volts, watts, law, power_factor });
                self.loads.push(LumpedLoad { unlisted, kind_unknown: kind.is_none() || lump.law.is_none(), state: None, is_extra: false });
            };
            if lump.stated > 0.0 {
                add(lump.stated, None);
            }
            if let Some((median, spread)) = lump.unstated() {
                add(median, Some(spread));
            }
        }
    }

    /// Adds a resistive load that is not in the list; `is_extra`: nothing points to it.
    pub(super) fn add_unlisted(&mut self, (at, leg): (usize, usize), prior: (f64, f64), state: Option<usize>, is_extra: bool) {
        let ((median, spread), law) = (prior, Law::Power { exponent: 1.0 });
        let between = (leg, SLOTS - 1);
        let rated_volts = rated_volts(&self.network, between);
        if rated_volts > 0.0 && [leg, SLOTS - 1].iter().all(|s| self.network.spans[at].ohms[*s].is_some()) {
            self.network.loads.push(Load { at, between, rated_volts, watts: median, law, power_factor: 1.0 });
            self.loads.push(LumpedLoad { unlisted: Some(spread), kind_unknown: false, state, is_extra });
        }
    }

    /// The spans that have a conductor, in order.
    pub(super) fn with(&self, conductor: Conductor) -> Vec<usize> {
        let Some(s) = slot(conductor) else { return Vec::new() };
        (0..self.network.spans.len()).filter(|&k| self.network.spans[k].ohms[s].is_some()).collect()
    }

    /// Two legs or more share the neutral of a span.
    pub(super) fn is_shared(&self, span: usize) -> bool {
        self.network.spans[span].ohms[..SLOTS - 1].iter().filter(|o| o.is_some()).count() > 1
    }

    fn mark_guesses(&mut self, assumptions: &[Assumption]) {
        self.guessed = vec![false; self.network.spans.len()];
        for a in assumptions {
            let (Assumption::Wire(run) | Assumption::Length(run)) = a else { continue };
            if let Some(span) = self.within[*run] {
                self.guessed[span] = true;
            }
        }
    }

    fn name_classes(&mut self, measured: &[bool]) {
        let n = self.network.spans.len();
        let (mut fed, mut only) = (vec![0usize; n], vec![0usize; n]);
        for k in 0..n {
            if let Some(p) = self.network.spans[k].fed_from {
                fed[p] += 1;
                only[p] = k;
            }
        }
        self.class = (0..n).collect();
        // Every span stands after the one that feeds it.
        for k in (0..n).rev() {
            if !measured[self.runs[k][0]] && fed[k] == 1 {
                self.class[k] = self.class[only[k]];
            }
        }
    }
}
