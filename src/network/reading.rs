//! What is read off a solved tree.

use super::adjoint::Excitation;
use super::engine::{Engine, NONE, Node, row};
use super::model::{Network, Observed, Phasor, SLOTS, Terminal, slot};
use super::solution::Solution;
use crate::visit::Conductor;

fn phasor<const PARTS: usize>(v: &[f64]) -> Phasor {
    Phasor { re: v[0], im: if PARTS == 2 { v[1] } else { 0.0 } }
}

impl<const N: usize, const PARTS: usize> Engine<N, PARTS> {
    /// Drives volts into a row of a run's conductor.
    pub fn insert(&mut self, run: usize, slot: usize, volts: f64) {
        let mut inserted = [0.0; N];
        inserted[row::<N, PARTS>(slot)] = volts;
        self.inserted = self.place.get(run).map(|node| (*node, inserted));
    }

    /// Node and first row of a terminal; the centre tap has none.
    fn find(&self, terminal: Terminal) -> Option<Option<(usize, usize)>> {
        let Terminal::At(run, conductor) = terminal else { return Some(None) };
        let place = *self.place.get(run)?;
        let (node, slot) = match slot(conductor) {
            Some(slot) => (place, slot),
            None => (self.nodes[place].root, 3),
        };
        self.has[self.nodes[node].run][slot].then(|| Some((node, row::<N, PARTS>(slot))))
    }

    /// The parts of a quantity in the last solution.
    pub fn observe(&self, observed: Observed) -> Option<[f64; PARTS]> {
        match observed {
            Observed::Voltage { plus, minus } => {
                let (plus, minus) = (self.find(plus)?, self.find(minus)?);
                let volts = |at: Option<(usize, usize)>, p: usize| at.map_or(0.0, |(node, row)| self.nodes[node].v[row + p]);
                Some(std::array::from_fn(|p| volts(plus, p) - volts(minus, p)))
            }
            Observed::Current { run, conductor, towards_source } => {
                let (node, row) = self.find(Terminal::At(run, conductor)).filter(|_| conductor != Conductor::Ground)??;
                let sign = if towards_source { -1.0 } else { 1.0 };
                Some(std::array::from_fn(|p| sign * self.nodes[node].i[row + p]))
            }
        }
    }

    /// Excitation of the adjoint network for a quantity: along its own direction, so that the gradient is that of its magnitude;
    /// in phase, of its signed value.
    pub fn excitation(&self, observed: Observed) -> Option<Excitation<PARTS>> {
        let value = self.observe(observed)?;
        let length = value.iter().map(|x| x * x).sum::<f64>().sqrt();
        let direction = value.map(|x| match (PARTS, length > 0.0) {
            (1, _) => 1.0,
            (_, true) => x / length,
            (_, false) => 0.0,
        });
        Some(match observed {
            Observed::Voltage { plus, minus } => Excitation::Between(self.find(plus)?, self.find(minus)?, direction),
            Observed::Current { run, conductor, towards_source } => {
                let sign = if towards_source { -1.0 } else { 1.0 };
                Excitation::Along(self.find(Terminal::At(run, conductor))??, direction.map(|d| sign * d))
            }
        })
    }

    pub fn solution(&self, network: &Network, iterations: usize) -> Solution {
        let by_slot = |run: usize, of: fn(&Node<N>) -> &[f64; N]| {
            let node = &self.nodes[self.place[run]];
            std::array::from_fn(|slot| self.has[run][slot].then(|| phasor::<PARTS>(&of(node)[row::<N, PARTS>(slot)..])))
        };
        let runs = 0..network.spans.len().min(self.place.len());
        let neutral = row::<N, PARTS>(3);
        Solution {
            volts: runs.clone().map(|run| by_slot(run, |n| &n.v)).collect::<Vec<[Option<Phasor>; SLOTS]>>(),
            amperes: runs.clone().map(|run| by_slot(run, |n| &n.i)).collect(),
            loads: self.loads.iter().map(|l| phasor::<PARTS>(&l.i)).collect(),
            load_volts: self.loads.iter().map(|l| phasor::<PARTS>(&l.v)).collect(),
            earth: runs
                .clone()
                .map(|run| {
                    let node = &self.nodes[self.place[run]];
                    phasor::<PARTS>(&node.v.map(|v| v * node.electrode)[neutral..])
                })
                .collect(),
            service: runs.map(|run| self.nodes[self.nodes[self.place[run]].root].run).map(|r| if r == NONE { 0 } else { r }).collect(),
            is_in_phase: PARTS == 1,
            iterations,
        }
    }
}
