//! A tree of conductors laid out for elimination: blocks of numbers, each after the one that feeds it.
//!
//! `N` rows of real numbers to a node, `PARTS` of them to a conductor: 1 where everything is in phase, 2 (real and imaginary part)
//! elsewhere.

use super::block::{Block, unit};
use super::law::{Admittance, tangent};
use super::model::{Fault, Law, Load, Network, Phasor, SLOTS, Source};

/// Ohms of an open conductor: beyond any insulation. More, infinity too, counts as this.
const OPEN: f64 = 1e12;

/// No node: the source.
pub(super) const NONE: usize = usize::MAX;

/// A node: the far end of a run, or the transformer's terminals.
#[derive(Clone, Debug)]
pub(super) struct Node<const N: usize> {
    /// The node that feeds it.
    pub parent: usize,
    /// The run it ends; [`NONE`] for the transformer's terminals.
    pub run: usize,
    /// Service run it descends from, as a node.
    pub root: usize,
    /// Resistance and reactance of each row's conductor.
    pub z: [(f64, f64); N],
    /// Conductance of the electrode.
    pub electrode: f64,
    /// D.
    pub d: Block<N>,
    /// U.
    pub u: Block<N>,
    /// c.
    pub c: [f64; N],
    /// v.
    pub v: [f64; N],
    /// i, from the loads themselves.
    pub i: [f64; N],
    /// U of the adjoint network.
    pub ut: Block<N>,
    /// c of the adjoint network.
    pub ct: [f64; N],
    /// v of the adjoint network.
    pub vt: [f64; N],
    /// i of the adjoint network.
    pub it: [f64; N],
}

/// A load as the sweeps see it.
#[derive(Clone, Debug)]
pub(super) struct Attached<const PARTS: usize> {
    /// Its node.
    pub node: usize,
    /// First rows of its two conductors.
    pub rows: (usize, usize),
    /// Volts across it, about which it is linearised.
    pub v: [f64; PARTS],
    /// Amperes through it.
    pub i: [f64; PARTS],
    /// Its law there.
    pub y: Admittance,
    /// Tangent of its power factor's angle.
    pub turn: f64,
    /// The last step moved it far: take the chord, not the tangent.
    pub far: bool,
}

/// A tree with its numbers and its last solution.
#[derive(Clone, Debug)]
pub(super) struct Engine<const N: usize, const PARTS: usize> {
    /// Each after the one that feeds it.
    pub nodes: Vec<Node<N>>,
    /// Node of each run.
    pub place: Vec<usize>,
    /// Conductors of each run.
    pub has: Vec<[bool; SLOTS]>,
    /// Loads.
    pub loads: Vec<Attached<PARTS>>,
    /// Open-circuit volts.
    pub emf: [f64; N],
    /// Impedance of the transformer; its terminals are then node 0.
    pub supply: Option<Box<Block<N>>>,
    /// Volts inserted into one run, driving away from the source.
    pub inserted: Option<(usize, [f64; N])>,
    /// The adjoint blocks belong to the last linearisation.
    pub is_transposed: bool,
}

/// First row of a slot. Where there is no third leg, the neutral takes its place.
pub(super) fn row<const N: usize, const PARTS: usize>(slot: usize) -> usize {
    PARTS * if N == SLOTS * PARTS { slot } else { slot.min(2) }
}

/// How many legs there is room for.
fn legs<const N: usize, const PARTS: usize>() -> usize {
    N / PARTS - 1
}

impl<const N: usize, const PARTS: usize> Engine<N, PARTS> {
    /// Lays out the nodes.
    pub fn new(network: &Network) -> Result<Self, Fault> {
        let with_supply = network.source.own != Phasor::default() || network.source.shared != Phasor::default();
        let mut engine = Self {
            nodes: Vec::with_capacity(network.spans.len() + 1),
            place: vec![NONE; network.spans.len()],
            has: network.spans.iter().map(|s| s.ohms.map(|o| o.is_some())).collect(),
            loads: Vec::with_capacity(network.loads.len()),
            emf: [0.0; N],
            supply: with_supply.then(|| Box::new(unit())),
            inserted: None,
            is_transposed: false,
        };
        engine.place_runs(network)?;
        engine.attach_loads(network)?;
        engine.take_numbers(network)?;
        engine.restart();
        Ok(engine)
    }

    fn place_runs(&mut self, network: &Network) -> Result<(), Fault> {
        let mut fed: Vec<Vec<usize>> = vec![Vec::new(); network.spans.len()];
        let mut stack = Vec::new();
        for (run, span) in network.spans.iter().enumerate().rev() {
            match span.fed_from {
                None => stack.push(run),
                Some(parent) => fed.get_mut(parent).ok_or(Fault::Feed { run })?.push(run),
            }
        }
        let terminals = if self.supply.is_some() {
            self.nodes.push(Node::new(NONE, NONE, 0));
            0
        } else {
            NONE
        };
        while let Some(run) = stack.pop() {
            let at = self.nodes.len();
            let (parent, root) = match network.spans[run].fed_from {
                None => (terminals, at),
                Some(source) => {
                    if let Some(slot) = (0..SLOTS).find(|&s| self.has[run][s] && !self.has[source][s]) {
                        return Err(Fault::Conductor { run, slot });
                    }
                    (self.place[source], self.nodes[self.place[source]].root)
                }
            };
            self.place[run] = at;
            self.nodes.push(Node::new(parent, run, root));
            stack.extend(&fed[run]);
        }
        match self.place.iter().position(|&p| p == NONE) {
            Some(run) => Err(Fault::Feed { run }),
            None => Ok(()),
        }
    }

    fn attach_loads(&mut self, network: &Network) -> Result<(), Fault> {
        for (load, l) in network.loads.iter().enumerate() {
            let (a, b) = l.between;
            let has = self.has.get(l.at).is_some_and(|h| a != b && h.get(a) == Some(&true) && h.get(b) == Some(&true));
            if !has {
                return Err(Fault::Load { load });
            }
            self.loads.push(Attached {
                node: self.place[l.at],
                rows: (row::<N, PARTS>(a), row::<N, PARTS>(b)),
                v: [0.0; PARTS],
                i: [0.0; PARTS],
                y: Admittance::default(),
                turn: 0.0,
                far: false,
            });
        }
        Ok(())
    }

    /// Takes the numbers of a network of the same shape.
    pub fn take_numbers(&mut self, network: &Network) -> Result<(), Fault> {
        self.take_source(&network.source)?;
        for (run, span) in network.spans.iter().enumerate() {
            let fault = Fault::Run { run };
            let node = self.place.get(run).and_then(|&p| self.nodes.get_mut(p)).ok_or(fault)?;
            for slot in 0..SLOTS {
                let (ohms, reactance) = (span.ohms[slot], span.reactance[slot]);
                let is_sound = ohms.is_some() == self.has[run][slot] && ohms.is_none_or(|r| r >= 0.0) && reactance.is_finite();
                if !is_sound {
                    return Err(fault);
                }
                if let Some(ohms) = ohms {
                    node.z[row::<N, PARTS>(slot)..][..PARTS].fill((ohms.min(OPEN), reactance));
                }
            }
            node.electrode = match span.electrode {
                Some(ohms) if ohms > 0.0 && self.has[run][3] => 1.0 / ohms,
                Some(_) => return Err(fault),
                None => 0.0,
            };
        }
        for (load, l) in network.loads.iter().enumerate() {
            let attached = self.loads.get_mut(load).filter(|_| is_sound(l)).ok_or(Fault::Load { load })?;
            attached.turn = if PARTS == 2 { tangent(l.power_factor) } else { 0.0 };
        }
        Ok(())
    }

    fn take_source(&mut self, source: &Source) -> Result<(), Fault> {
        let numbers = source.direction.iter().flat_map(|p| [p.re, p.im]).chain(source.volts);
        let impedances = [source.own, source.shared];
        if !numbers.chain(impedances.iter().flat_map(|z| [z.re, z.im])).all(f64::is_finite) || impedances.iter().any(|z| z.re < 0.0) {
            return Err(Fault::Source);
        }
        for leg in 0..legs::<N, PARTS>() {
            let direction = source.direction[leg];
            let at = row::<N, PARTS>(leg);
            for (part, d) in [direction.re, direction.im].into_iter().take(PARTS).enumerate() {
                self.emf[at + part] = source.volts[leg] * d;
            }
        }
        if let Some(supply) = self.supply.as_mut() {
            **supply = transformer::<N, PARTS>(source);
        }
        Ok(())
    }

    /// Puts every load at its open-circuit volts.
    pub fn restart(&mut self) {
        for node in &mut self.nodes {
            node.v = self.emf;
        }
        for load in &mut self.loads {
            load.v = across(&self.emf, load.rows);
            load.far = false;
        }
    }
}

impl<const N: usize> Node<N> {
    fn new(parent: usize, run: usize, root: usize) -> Self {
        let (d, c) = ([[0.0; N]; N], [0.0; N]);
        Self { parent, run, root, z: [(0.0, 0.0); N], electrode: 0.0, d, u: d, c, v: c, i: c, ut: d, ct: c, vt: c, it: c }
    }
}

/// Its numbers are numbers, in range.
fn is_sound(load: &Load) -> bool {
    let law = match load.law {
        Law::Power { exponent } => exponent.is_finite(),
        Law::Electronic { knee } => knee.is_finite() && knee > 0.0,
    };
    let rated = load.rated_volts.is_finite() && load.rated_volts > 0.0;
    law && rated && load.watts.is_finite() && load.watts >= 0.0 && load.power_factor > 0.0 && load.power_factor <= 1.0
}

/// Impedance of the transformer as seen by its legs: each its own; legs of one tapped winding, in opposition, also what the
/// whole winding drops in the primary, which falls on every half alike and by the difference of their currents.
fn transformer<const N: usize, const PARTS: usize>(source: &Source) -> Block<N> {
    let mut z = [[0.0; N]; N];
    let mut add = |a: usize, b: usize, ohms: Phasor, sign: f64| {
        let (a, b) = (row::<N, PARTS>(a), row::<N, PARTS>(b));
        for p in 0..PARTS {
            z[a + p][b + p] += sign * ohms.re;
        }
        if PARTS == 2 {
            z[a][b + 1] -= sign * ohms.im;
            z[a + 1][b] += sign * ohms.im;
        }
    };
    let legs = legs::<N, PARTS>();
    let tapped: Vec<usize> = (0..legs).filter(|&l| source.volts[l] > 0.0 && source.direction[l].im == 0.0).collect();
    for leg in 0..legs {
        add(leg, leg, source.own, 1.0);
    }
    for &a in tapped.iter().filter(|_| tapped.len() == 2) {
        for &b in &tapped {
            add(a, b, source.shared, source.direction[a].re * source.direction[b].re);
        }
    }
    z
}

/// Volts between two conductors of a node.
pub(super) fn across<const N: usize, const PARTS: usize>(v: &[f64; N], rows: (usize, usize)) -> [f64; PARTS] {
    std::array::from_fn(|p| v[rows.0 + p] - v[rows.1 + p])
}
