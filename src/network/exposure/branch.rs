//! The part of a network below an opened neutral, as a network of its own.
//!
//! What feeds it is replaced by its Thévenin equivalent about the sound state: open-circuit volts such that the sound currents
//! give the sound volts, behind the ohms of the way from the source. The other loads' answer to the changed drop on that way is
//! left out: a thousandth of a change of some tenths of a volt. For a service run nothing is left out.

use super::super::model::{Load, Network, Phasor, SLOTS, Source, Span};
use super::super::solution::Solution;
use crate::visit::Tree;

/// A whole network prepared for taking branches from.
pub(super) struct Whole<'a> {
    pub network: &'a Network,
    pub tree: &'a Tree,
    sound: Option<Solution>,
    /// Ohms from the source to the near end of each run.
    above: Vec<[f64; SLOTS]>,
    loads: Vec<Vec<Load>>,
    place: Vec<usize>,
}

/// A branch: a network whose run 0 is the one below which everything hangs.
pub(super) struct Branch {
    pub network: Network,
    /// The run each of its runs is in the whole.
    pub runs: Vec<usize>,
}

impl<'a> Whole<'a> {
    pub fn new(network: &'a Network, tree: &'a Tree, sound: Option<Solution>) -> Self {
        let mut above = vec![[0.0; SLOTS]; network.spans.len()];
        for &run in &tree.order {
            if let Some(parent) = tree.parent[run] {
                above[run] = std::array::from_fn(|s| above[parent][s] + network.spans[parent].ohms[s].unwrap_or(0.0));
            }
        }
        let mut loads = vec![Vec::new(); network.spans.len()];
        for load in &network.loads {
            loads[load.at].push(*load);
        }
        let place = vec![0; network.spans.len()];
        Self { network, tree, sound, above, loads, place }
    }

    /// Takes out what hangs below a run, that run included.
    pub fn branch(&mut self, top: usize) -> Branch {
        let mut network = Network { source: self.source(top), spans: Vec::new(), loads: Vec::new() };
        let mut runs = Vec::new();
        let mut stack = vec![top];
        while let Some(run) = stack.pop() {
            let at = runs.len();
            self.place[run] = at;
            runs.push(run);
            let span = &self.network.spans[run];
            let fed_from = self.tree.parent[run].filter(|_| run != top).map(|p| self.place[p]);
            network.spans.push(Span { fed_from, ..span.clone() });
            network.loads.extend(self.loads[run].iter().map(|l| Load { at, ..*l }));
            stack.extend(self.tree.children[run].iter().rev());
        }
        for (ohms, above) in network.spans[0].ohms.iter_mut().zip(self.above[top]) {
            *ohms = ohms.map(|o| o + above);
        }
        Branch { network, runs }
    }

    fn source(&self, top: usize) -> Source {
        let mut source = self.network.source;
        let (Some(parent), Some(sound)) = (self.tree.parent[top], &self.sound) else { return source };
        let behind = |slot: usize| {
            let (volts, amperes) = (sound.volts[parent][slot]?, sound.amperes[top][slot]?);
            let ohms = self.above[top][slot];
            Some(Phasor { re: volts.re + ohms * amperes.re, im: volts.im + ohms * amperes.im })
        };
        let Some(neutral) = behind(SLOTS - 1) else { return source };
        (source.own, source.shared) = (Phasor::default(), Phasor::default());
        for leg in 0..SLOTS - 1 {
            let emf = behind(leg).map_or(Phasor::default(), |p| p - neutral);
            let volts = emf.magnitude();
            source.volts[leg] = volts;
            source.direction[leg] = if volts > 0.0 { Phasor { re: emf.re / volts, im: emf.im / volts } } else { Phasor::default() };
        }
        source
    }
}
