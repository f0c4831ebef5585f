//! Newton's method on the nodal equations of a tree.
//!
//! With v the volts at the far end of a run, i the amperes flowing into it, Z its impedance, u the volts it is fed with, and the
//! loads linearised to D·v + c:
//!
//! ```text
//! v = u − Z·i        i = D·v + c
//! v = U·(u − Z·c)    i = S·u + s      U = (1 + Z·D)⁻¹   S = D·U   s = c − S·Z·c
//! ```
//!
//! S and s are added to D and c of the run that feeds it: the network is summed up towards the source, then the volts run down.
//! That is Gaussian elimination of the nodal equations from the leaves, in time linear in the runs and without recursion, and
//! written with ohms, so that 0 Ω needs no exception, and an open conductor (10¹² Ω here) costs no more than nanovolts.

use super::block::{Block, add_part, add_unit, apply, difference, dot, inverse, product, sum};
use super::engine::{Attached, Engine, Node, across, row};
use super::law::admittance;
use super::model::{Law, Network};

/// A load whose volts changed by more than this share in a step is linearised by its chord. The tangent of a constant-power load
/// far from the solution points away from it.
const FAR: f64 = 0.2;

/// A law is bent where its tangent's slope differs from its chord's by more than this share.
const BENT: f64 = 0.01;

/// How loads are linearised.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Slope {
    /// By their tangents; loads far from the solution may take the chord.
    Tangent,
    /// By their chords.
    Chord,
}

impl<const N: usize, const PARTS: usize> Engine<N, PARTS> {
    /// One step, Newton's with tangents, and the largest change of a load's volts.
    pub fn step(&mut self, network: &Network, slope: Slope) -> f64 {
        self.linearise(network, slope);
        self.sum_up();
        self.run_down();
        self.move_loads()
    }

    /// D and c of every node from its own loads and electrode.
    fn linearise(&mut self, network: &Network, slope: Slope) {
        let neutral = row::<N, PARTS>(3);
        self.is_transposed = false;
        for node in &mut self.nodes {
            node.d = [[0.0; N]; N];
            node.c = [0.0; N];
            for k in neutral..neutral + PARTS {
                node.d[k][k] = node.electrode;
            }
        }
        for (attached, load) in self.loads.iter_mut().zip(&network.loads) {
            attached.y = admittance(load, attached.square());
            if slope == Slope::Chord || (attached.far && matches!(load.law, Law::Electronic { .. })) {
                attached.y.bend = 0.0;
            }
            attached.stamp(&mut self.nodes[attached.node]);
        }
    }

    /// Sums the network up towards the source.
    fn sum_up(&mut self) {
        for at in (0..self.nodes.len()).rev() {
            let inserted = self.inserted_at(at);
            let (fed, rest) = self.nodes.split_at_mut(at);
            let node = &mut rest[0];
            let mut zd = match &self.supply {
                Some(z) if at == 0 => product(z, &node.d),
                _ => impede_block::<N, PARTS>(&node.z, &node.d),
            };
            add_unit(&mut zd);
            node.u = inverse(zd);
            if let Some(parent) = fed.get_mut(node.parent) {
                let s = product(&node.d, &node.u);
                let through = apply(&s, &difference(&impede::<N, PARTS>(&node.z, &node.c), &inserted));
                for i in 0..N {
                    parent.d[i] = sum(&parent.d[i], &s[i]);
                    parent.c[i] += node.c[i] - through[i];
                }
            }
        }
    }

    /// Runs the volts down from the source.
    fn run_down(&mut self) {
        for at in 0..self.nodes.len() {
            let inserted = self.inserted_at(at);
            let (fed, rest) = self.nodes.split_at_mut(at);
            let node = &mut rest[0];
            let drop = match &self.supply {
                Some(z) if at == 0 => apply(z, &node.c),
                _ => impede::<N, PARTS>(&node.z, &node.c),
            };
            let from = fed.get(node.parent).map_or(&self.emf, |p| &p.v);
            node.v = apply(&node.u, &sum(&difference(from, &drop), &inserted));
        }
    }

    fn inserted_at(&self, node: usize) -> [f64; N] {
        self.inserted.filter(|e| e.0 == node).map_or([0.0; N], |e| e.1)
    }

    /// Moves every load to the volts found and returns the largest change; not a number where one is none.
    fn move_loads(&mut self) -> f64 {
        let mut largest = 0.0;
        for load in &mut self.loads {
            let change = load.move_to(across(&self.nodes[load.node].v, load.rows));
            if change.is_nan() || change > largest {
                largest = change;
            }
        }
        largest
    }

    /// Amperes of the loads at their volts, and of the runs as sums of them: what flows into a node flows out of it.
    pub fn settle(&mut self, network: &Network) {
        let neutral = row::<N, PARTS>(3);
        for node in &mut self.nodes {
            node.i = [0.0; N];
            for k in neutral..neutral + PARTS {
                node.i[k] = node.electrode * node.v[k];
            }
        }
        for (attached, load) in self.loads.iter_mut().zip(&network.loads) {
            attached.y = admittance(load, attached.square());
            attached.i = attached.turned().map(|v| attached.y.chord * v);
            let node = &mut self.nodes[attached.node];
            add_part(&mut node.i, attached.rows.0, 1.0, &attached.i);
            add_part(&mut node.i, attached.rows.1, -1.0, &attached.i);
        }
        for at in (0..self.nodes.len()).rev() {
            let (fed, rest) = self.nodes.split_at_mut(at);
            if let Some(parent) = fed.get_mut(rest[0].parent) {
                parent.i = sum(&parent.i, &rest[0].i);
            }
        }
    }
}

impl<const PARTS: usize> Attached<PARTS> {
    fn square(&self) -> f64 {
        dot(&self.v, &self.v)
    }

    /// (1 − j·turn)·v.
    fn turned(&self) -> [f64; PARTS] {
        std::array::from_fn(|p| match (PARTS, p) {
            (1, _) => self.v[p],
            (_, 0) => self.v[0] + self.turn * self.v[1 % PARTS],
            _ => self.v[p] - self.turn * self.v[0],
        })
    }

    /// Adds its linearisation I ≈ g·v + (I₀ − g·v₀) to its node.
    fn stamp<const N: usize>(&self, node: &mut Node<N>) {
        let (a, b) = self.rows;
        let bent = self.turned().map(|v| self.y.bend * v);
        for (p, bent) in bent.iter().enumerate() {
            for (q, v) in self.v.iter().enumerate() {
                let straight = match (p, q) {
                    (p, q) if p == q => 1.0,
                    (0, _) => self.turn,
                    _ => -self.turn,
                };
                let g = self.y.chord * straight + bent * v;
                node.d[a + p][a + q] += g;
                node.d[b + p][b + q] += g;
                node.d[a + p][b + q] -= g;
                node.d[b + p][a + q] -= g;
            }
        }
        add_part(&mut node.c, a, -self.square(), &bent);
        add_part(&mut node.c, b, self.square(), &bent);
    }

    /// Takes new volts; returns how far they are from the old ones.
    fn move_to(&mut self, v: [f64; PARTS]) -> f64 {
        let moved = difference(&v, &self.v);
        let (change, old, new) = (dot(&moved, &moved), self.square(), dot(&v, &v));
        self.far = change > FAR * FAR * old.max(new);
        // Exponents below 1 are steepest at zero: a tangent from where the law is bent that leads past it leads too far.
        let is_bent = self.y.bend.abs() * old > BENT * self.y.chord;
        let is_past_zero = is_bent && dot(&v, &self.v) < 0.0;
        self.v = if is_past_zero { v.map(|x| 0.1 * x) } else { v };
        change.sqrt()
    }
}

/// Z·x, Z the impedances of a run's conductors.
pub(super) fn impede<const N: usize, const PARTS: usize>(z: &[(f64, f64); N], x: &[f64; N]) -> [f64; N] {
    std::array::from_fn(|k| {
        let (r, reactance) = z[k];
        match (PARTS, k % 2) {
            (1, _) => r * x[k],
            (_, 0) => r * x[k] - reactance * x[(k + 1) % N],
            _ => r * x[k] + reactance * x[k - 1],
        }
    })
}

/// Z·D.
pub(super) fn impede_block<const N: usize, const PARTS: usize>(z: &[(f64, f64); N], d: &Block<N>) -> Block<N> {
    std::array::from_fn(|k| {
        let (r, reactance) = z[k];
        std::array::from_fn(|j| match (PARTS, k % 2) {
            (1, _) => r * d[k][j],
            (_, 0) => r * d[k][j] - reactance * d[(k + 1) % N][j],
            _ => r * d[k][j] + reactance * d[k - 1][j],
        })
    })
}
