//! The adjoint network: one sweep gives the gradient of an observed quantity by everything at once.
//!
//! Put one ampere into the terminals of an observed voltage (one volt against an observed current), short the sources, transpose
//! the blocks. With w and j the volts and amperes that follow, Tellegen's theorem gives the derivatives: i·j by a run's ohms, −w
//! across a load by its amperes, −j at the source by its volts (Director and Rohrer, *The generalized adjoint network and
//! network sensitivities*, IEEE Transactions on Circuit Theory 16, 1969, 318–323; from memory, and checked against differences).

use super::block::{add_part, add_unit, apply, apply_transposed, difference, dot, inverse, product, sum, transposed};
use super::engine::{Engine, NONE, across, row};
use super::model::{Law, Network, SLOTS, Source};
use super::sensitivity::Gradient;
use super::sweep::{impede, impede_block};

/// Above so many ohms a current is found from the volts along the run, below from the loads beyond it: each loses digits where
/// the other does not.
const WEAK: f64 = 1.0;

/// Where to excite the adjoint network, with the direction of the observed quantity.
#[derive(Clone, Copy, Debug)]
pub(super) enum Excitation<const PARTS: usize> {
    /// Amperes between two rows; `None` is the centre tap.
    Between(Option<(usize, usize)>, Option<(usize, usize)>, [f64; PARTS]),
    /// Volts in a row of a run.
    Along((usize, usize), [f64; PARTS]),
}

impl<const N: usize, const PARTS: usize> Engine<N, PARTS> {
    /// Solves the adjoint network.
    pub fn adjoint(&mut self, excitation: Excitation<PARTS>) {
        self.transpose();
        for node in &mut self.nodes {
            node.ct = [0.0; N];
        }
        let along = match excitation {
            Excitation::Between(plus, minus, direction) => {
                for (terminal, k) in [(plus, -1.0), (minus, 1.0)] {
                    let Some((node, row)) = terminal else { continue };
                    add_part(&mut self.nodes[node].ct, row, k, &direction);
                }
                None
            }
            Excitation::Along((node, row), direction) => {
                let mut volts = [0.0; N];
                add_part(&mut volts, row, -1.0, &direction);
                Some((node, volts))
            }
        };
        self.sum_up_adjoint(along);
        self.run_down_adjoint(along);
    }

    /// (1 + Zᵀ·Dᵀ)⁻¹ of every node, once for a solution. In phase D is symmetric, and U is it already.
    fn transpose(&mut self) {
        if PARTS == 1 || self.is_transposed {
            return;
        }
        self.is_transposed = true;
        for (at, node) in self.nodes.iter_mut().enumerate() {
            let d = transposed(&node.d);
            let mut zd = match &self.supply {
                Some(z) if at == 0 => product(&transposed(z.as_ref()), &d),
                _ => impede_block::<N, PARTS>(&conjugate(&node.z), &d),
            };
            add_unit(&mut zd);
            node.ut = inverse(zd);
        }
    }

    fn sum_up_adjoint(&mut self, along: Option<(usize, [f64; N])>) {
        for at in (0..self.nodes.len()).rev() {
            let (fed, rest) = self.nodes.split_at_mut(at);
            let node = &rest[0];
            let Some(parent) = fed.get_mut(node.parent) else { continue };
            let mut from = node.ct;
            if let Some((_, volts)) = along.filter(|a| a.0 == at) {
                from = sum(&from, &apply_transposed(&node.d, &volts));
            }
            if from != [0.0; N] {
                parent.ct = sum(&parent.ct, &apply_transposed(&node.u, &from));
            }
        }
    }

    fn run_down_adjoint(&mut self, along: Option<(usize, [f64; N])>) {
        for at in 0..self.nodes.len() {
            let (fed, rest) = self.nodes.split_at_mut(at);
            let node = &mut rest[0];
            let mut from = fed.get(node.parent).map_or([0.0; N], |p| p.vt);
            if let Some((_, volts)) = along.filter(|a| a.0 == at) {
                from = sum(&from, &volts);
            }
            let z = conjugate(&node.z);
            let drop = match &self.supply {
                Some(supply) if at == 0 => apply_transposed(supply, &node.ct),
                _ => impede::<N, PARTS>(&z, &node.ct),
            };
            let u = if PARTS == 1 { &node.u } else { &node.ut };
            node.vt = apply(u, &difference(&from, &drop));
            node.it = sum(&apply_transposed(&node.d, &node.vt), &node.ct);
            for k in (0..N).filter(|&k| z[k].0 > WEAK) {
                node.it[k] = admitted::<N, PARTS>(z[k], &difference(&from, &node.vt), k);
            }
        }
    }

    /// Reads the gradient off the adjoint network.
    pub fn gradient(&self, network: &Network, into: &mut Gradient) {
        into.electrode = 0.0;
        let neutral = row::<N, PARTS>(3);
        for node in self.nodes.iter().filter(|n| n.run != NONE) {
            for slot in 0..SLOTS {
                let at = row::<N, PARTS>(slot);
                let is_there = self.has[node.run][slot];
                into.ohms[node.run][slot] = if is_there { node.z[at].0 * part_product::<N, PARTS>(&node.i, &node.it, at) } else { 0.0 };
            }
            into.electrode += node.electrode * part_product::<N, PARTS>(&node.v, &node.vt, neutral);
        }
        for (k, (attached, load)) in self.loads.iter().zip(&network.loads).enumerate() {
            let w = across(&self.nodes[attached.node].vt, attached.rows);
            into.watts[k] = -dot(&attached.i, &w);
            into.exponent[k] = match load.law {
                Law::Power { .. } => attached.y.by_exponent * into.watts[k],
                Law::Electronic { .. } => 0.0,
            };
        }
        into.source = self.by_source(&network.source);
    }

    fn by_source(&self, source: &Source) -> [f64; 3] {
        let mut total = [0.0; N];
        for node in self.nodes.iter().filter(|n| n.parent == NONE) {
            total = sum(&total, &node.it);
        }
        std::array::from_fn(|leg| {
            let (direction, at) = (source.direction[leg], row::<N, PARTS>(leg));
            match PARTS {
                _ if row::<N, PARTS>(leg) == row::<N, PARTS>(3) => 0.0,
                1 => -total[at] * direction.re,
                _ => -(total[at] * direction.re + total[at + 1] * direction.im),
            }
        })
    }
}

/// Impedances whose blocks are the transposed ones.
fn conjugate<const N: usize>(z: &[(f64, f64); N]) -> [(f64, f64); N] {
    z.map(|(r, x)| (r, -x))
}

/// Row k of Z⁻¹·x.
fn admitted<const N: usize, const PARTS: usize>(z: (f64, f64), x: &[f64; N], k: usize) -> f64 {
    let (r, reactance) = z;
    match (PARTS, k % 2) {
        (1, _) => x[k] / r,
        (_, 0) => (r * x[k] + reactance * x[(k + 1) % N]) / (r * r + reactance * reactance),
        _ => (r * x[k] - reactance * x[k - 1]) / (r * r + reactance * reactance),
    }
}

/// Sum of the products of the parts of a conductor's two vectors.
fn part_product<const N: usize, const PARTS: usize>(a: &[f64; N], b: &[f64; N], at: usize) -> f64 {
    (at..at + PARTS).map(|k| a[k] * b[k]).sum()
}
