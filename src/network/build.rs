//! A network from a visit's circuit list.

use super::model::{Law, Load, Network, Phasor, SLOTS, Source, Span};
use crate::electrics::{conductor, lamp};
use crate::quantity::{Celsius, Metres, Ohms, Watts};
use crate::visit::{Between, Leg, LoadKind, Metal, Quantity, Run, System, TestKind, Visit, Wire, WireSize};

/// What is taken where the circuit list is silent, and how loads behave.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct NetworkSettings {
    /// Temperature of the conductors. The table's own 75 °C: warmer than most are, so that drops are not understated.
    pub conductor_temperature: Celsius,
    /// Length of a service run that states none.
    pub service_length: Metres,
    /// Length of another run that states none.
    pub run_length: Metres,
    /// Wire of a service run that states none.
    pub service_wire: Wire,
    /// Wire of another run that states none.
    pub run_wire: Wire,
    /// Least ohms of a conductor: its two joints.
    pub least: Ohms,
    /// Load between a line and the neutral at the end of a branch that states no load at all.
    pub line_neutral: Watts,
    /// Load between two lines likewise.
    pub line_line: Watts,
    /// Law of loads that state no kind: half-way between heaters and lamps.
    pub unstated: Law,
    /// Exponent of filaments.
    pub filament: f64,
    /// Knee of electronic loads in volts, below which they cut off.
    pub knee: f64,
    /// Power factor of motors.
    pub motor_power_factor: f64,
    /// Ohms through the electrode and the earth to the centre tap where no test gives them: what NEC 250.53(A)(2) asks of a
    /// single rod.
    pub electrode: Ohms,
    /// Transformer impedance each leg has to itself. Nought: the service run outweighs it, and unknown it would only pretend.
    pub source_own: Phasor,
    /// Transformer impedance the two halves of a tapped winding share.
    pub source_shared: Phasor,
}

impl Default for NetworkSettings {
    fn default() -> Self {
        let wire = |size, metal| Wire { size, metal, metal_assumed: true };
        Self {
            conductor_temperature: conductor::TABLE_TEMPERATURE,
            service_length: Metres(20.0),
            run_length: Metres(15.0),
            service_wire: wire(WireSize::Awg(-3), Metal::Aluminium),
            run_wire: wire(WireSize::Awg(12), Metal::Copper),
            least: Ohms(1e-4),
            line_neutral: Watts(150.0),
            line_line: Watts(3000.0),
            unstated: Law::Power { exponent: 0.75 },
            filament: lamp::CURRENT,
            knee: 30.0,
            motor_power_factor: 0.8,
            electrode: Ohms(25.0),
            source_own: Phasor::default(),
            source_shared: Phasor::default(),
        }
    }
}

impl NetworkSettings {
    /// The law of a kind of load. A running motor is an impedance at its power factor: power near V², as tests of refrigerators
    /// and fans show (Bokhari et al., IEEE Transactions on Power Delivery 29, 2014, 1372; exponents 2.1 and 1.7).
    #[must_use]
    pub fn law(&self, kind: LoadKind) -> Law {
        match kind {
            LoadKind::Resistive | LoadKind::Motor => Law::Power { exponent: 1.0 },
            LoadKind::Filament => Law::Power { exponent: self.filament },
            LoadKind::Electronic => Law::Electronic { knee: self.knee },
        }
    }
}

/// A value the circuit list left open. Runs are positions in the circuit list, loads in [`Network::loads`].
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Assumption {
    /// Conductors of a run: stated none, or lacking what its loads or the runs it feeds need.
    Legs(usize),
    /// Wire of a run.
    Wire(usize),
    /// Length of a run.
    Length(usize),
    /// Watts of a load.
    Watts(usize),
    /// Kind of a load.
    Kind(usize),
    /// The run hangs on no source and was left out.
    LeftOut(usize),
    /// A load of this run lies on a leg the system does not have, and was left out.
    LoadLeftOut(usize),
}

/// A network and what was assumed for it. Its spans are the visit's runs one to one; one that is left out has no conductors.
#[derive(Clone, Debug, PartialEq)]
pub struct Built {
    /// The network.
    pub network: Network,
    /// What the circuit list left open.
    pub assumptions: Vec<Assumption>,
}

/// Builds the network of a visit's circuit list. Loads stated at 0 W are kept out; those of a run stand in its own order.
#[must_use]
pub fn build(visit: &Visit, settings: &NetworkSettings) -> Built {
    let mut builder = Builder { visit, settings, electrode: electrode(visit, settings), assumptions: Vec::new(), loads: Vec::new() };
    let carried = builder.conductors();
    for &run in &visit.tree.order {
        builder.add_loads(run, carried[run]);
    }
    let spans = carried.into_iter().enumerate().map(|(run, has)| builder.span(run, has)).collect();
    let network = Network { source: builder.source(), spans, loads: builder.loads };
    Built { network, assumptions: builder.assumptions }
}

/// Ohms of the earth path: as tested, where a test of the electrode gives a number, as found before as left.
fn electrode(visit: &Visit, settings: &NetworkSettings) -> f64 {
    let tests = visit.tests.iter().filter(|t| t.kind == TestKind::GroundElectrode);
    let ohms = tests.filter_map(|t| Some((t.stage, t.value.value.value()?))).filter(|t| t.1 > 0.0 && t.1.is_finite());
    ohms.min_by_key(|t| t.0).map_or(settings.electrode.0, |t| t.1)
}

struct Builder<'a> {
    visit: &'a Visit,
    settings: &'a NetworkSettings,
    electrode: f64,
    assumptions: Vec<Assumption>,
    loads: Vec<Load>,
}

impl Builder<'_> {
    /// Conductors of every run: those it states, and those without which its loads and the runs it feeds would have no supply.
    /// A run that hangs on no source has none.
    fn conductors(&mut self) -> Vec<[bool; SLOTS]> {
        let Visit { runs, tree, system, .. } = self.visit;
        let mut carried = vec![[false; SLOTS]; runs.len()];
        for &run in tree.order.iter().rev() {
            let stated = stated(&runs[run], system);
            let mut has: [bool; SLOTS] = std::array::from_fn(|s| stated[s] || carried[run][s]);
            for (a, b) in runs[run].loads.iter().filter_map(|l| slots(system, l.between)) {
                has[a] = true;
                has[b] = true;
            }
            if !has.contains(&true) {
                has = std::array::from_fn(|s| s == 3 || system.legs().iter().any(|l| l.index() == s));
            }
            if has != stated {
                self.assumptions.push(Assumption::Legs(run));
            }
            carried[run] = has;
            if let Some(parent) = tree.parent[run] {
                carried[parent] = std::array::from_fn(|s| carried[parent][s] || has[s]);
            }
        }
        let is_loose = |run: &usize| !carried[*run].contains(&true);
        self.assumptions.extend((0..runs.len()).filter(is_loose).map(Assumption::LeftOut));
        carried
    }

    fn add_loads(&mut self, run: usize, has: [bool; SLOTS]) {
        let Visit { runs, tree, system, .. } = self.visit;
        let r = &runs[run];
        let stated: Vec<(Between, f64)> = r.loads.iter().map(|l| (l.between, l.watts.value.0)).collect();
        let is_silent = stated.is_empty() && tree.children[run].is_empty();
        let loads = if is_silent { self.typical(has) } else { stated };
        for (between, watts) in loads.into_iter().filter(|l| l.1 > 0.0 && l.1.is_finite()) {
            let Some(nominal) = system.nominal(Quantity::Voltage(between)) else {
                self.assumptions.push(Assumption::LoadLeftOut(run));
                continue;
            };
            let Some(slots) = slots(system, between) else { continue };
            let position = self.loads.len();
            self.assumptions.extend(is_silent.then_some(Assumption::Watts(position)));
            self.assumptions.extend(r.load_kind.is_none().then_some(Assumption::Kind(position)));
            let kind = r.load_kind.as_ref().map(|k| k.value);
            let power_factor = if kind == Some(LoadKind::Motor) { self.settings.motor_power_factor } else { 1.0 };
            let law = kind.map_or(self.settings.unstated, |k| self.settings.law(k));
            self.loads.push(Load { at: run, between: slots, rated_volts: nominal.0, watts, law, power_factor });
        }
    }

    /// What the end of a branch may carry that states nothing: a load on each leg, or between its lines.
    fn typical(&self, has: [bool; SLOTS]) -> Vec<(Between, f64)> {
        let legs: Vec<Leg> = Leg::ALL.into_iter().filter(|l| has[l.index()]).collect();
        if has[3] {
            legs.into_iter().map(|l| (Between::LineNeutral(l), self.settings.line_neutral.0)).collect()
        } else {
            legs.windows(2).map(|w| (Between::LineLine(w[0], w[1]), self.settings.line_line.0)).collect()
        }
    }

    fn span(&mut self, run: usize, has: [bool; SLOTS]) -> Span {
        let Visit { runs, tree, .. } = self.visit;
        let mut span = Span { fed_from: tree.parent[run], ohms: [None; SLOTS], reactance: [0.0; SLOTS], electrode: None };
        if !has.contains(&true) {
            span.fed_from = None;
            return span;
        }
        let is_service = span.fed_from.is_none();
        let r = &runs[run];
        let s = self.settings;
        let (wire, length) = if is_service { (s.service_wire, s.service_length) } else { (s.run_wire, s.run_length) };
        self.assumptions.extend(r.wire.is_none().then_some(Assumption::Wire(run)));
        self.assumptions.extend(r.length.is_none().then_some(Assumption::Length(run)));
        let length = r.length.as_ref().map_or(length, |l| l.value);
        let line = r.wire.as_ref().map_or(wire, |w| w.value);
        let neutral = r.neutral().map_or(wire, |w| w.value);
        let ohms = |wire: Wire| {
            let known = conductor::resistance(wire, length, s.conductor_temperature).filter(|r| r.0.is_finite());
            known.map_or(s.least.0, |r| r.0.max(s.least.0))
        };
        span.ohms = std::array::from_fn(|slot| has[slot].then(|| ohms(if slot == 3 { neutral } else { line })));
        span.electrode = (is_service && has[3]).then_some(self.electrode);
        span
    }

    fn source(&self) -> Source {
        let system = &self.visit.system;
        let (own, shared) = (self.settings.source_own, self.settings.source_shared);
        let mut source = Source { volts: [0.0; 3], direction: [Phasor::default(); 3], own, shared };
        for leg in system.legs() {
            let (re, im) = system.phasor(*leg);
            let volts = Phasor { re, im }.magnitude();
            source.volts[leg.index()] = volts;
            source.direction[leg.index()] = Phasor { re: re / volts, im: im / volts };
        }
        source
    }
}

/// The conductors a run states, as far as its system has them.
fn stated(run: &Run, system: &System) -> [bool; SLOTS] {
    let Some(legs) = run.legs.as_ref().map(|l| l.value) else { return [false; SLOTS] };
    std::array::from_fn(|s| if s == 3 { legs.neutral } else { legs.lines[s] && system.legs().iter().any(|l| l.index() == s) })
}

/// Slots of the conductors a load lies between; `None` on a leg the system does not have.
fn slots(system: &System, between: Between) -> Option<(usize, usize)> {
    let has = |leg: Leg| system.legs().contains(&leg).then_some(leg.index());
    match between {
        Between::LineNeutral(leg) => Some((has(leg)?, 3)),
        Between::LineLine(a, b) => Some((has(a)?, has(b)?)),
    }
}
