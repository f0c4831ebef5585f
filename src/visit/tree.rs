//! The circuit list as a tree of runs.

use super::{Run, name_key};
use std::collections::HashMap;

/// Parents, children and order of the runs. Indices are positions in the circuit list.
#[derive(Clone, Debug, Default)]
pub struct Tree {
    /// The run each run is fed from; `None` for those fed by the utility and those that hang loose.
    pub parent: Vec<Option<usize>>,
    /// Runs fed from each run, in list order.
    pub children: Vec<Vec<usize>>,
    /// Runs fed by the utility, in list order.
    pub roots: Vec<usize>,
    /// All runs reachable from the utility, each after the run it is fed from, depth first in list order.
    pub order: Vec<usize>,
    /// What keeps runs out of `order`, or is otherwise wrong with the list.
    pub faults: Vec<TreeFault>,
}

/// What can be wrong with a circuit list as a tree.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum TreeFault {
    /// `Fed from` names no circuit of the list.
    UnknownSource {
        /// The run.
        run: usize,
    },
    /// The run feeds itself through others; one fault a run of the ring.
    Loop {
        /// A run of the ring.
        run: usize,
    },
    /// The name stands in the list before; the first one counts as the source of others.
    Duplicate {
        /// The later run.
        run: usize,
        /// The earlier one.
        first: usize,
    },
}

impl Tree {
    /// Builds the tree in time linear in the number of runs, whatever the list says: chains of any length and rings included.
    #[must_use]
    pub fn new(runs: &[Run]) -> Self {
        let n = runs.len();
        let mut tree = Self { parent: vec![None; n], children: vec![Vec::new(); n], ..Self::default() };
        let mut named: HashMap<String, usize> = HashMap::with_capacity(n);
        for (run, r) in runs.iter().enumerate() {
            if let Some(&first) = named.get(&name_key(&r.name.value)) {
                tree.faults.push(TreeFault::Duplicate { run, first });
            } else {
                named.insert(name_key(&r.name.value), run);
            }
        }
        for (run, r) in runs.iter().enumerate() {
            match &r.fed_from {
                None => tree.roots.push(run),
                Some(source) => match named.get(&name_key(&source.value)) {
                    Some(&parent) => {
                        tree.parent[run] = Some(parent);
                        tree.children[parent].push(run);
                    }
                    None => tree.faults.push(TreeFault::UnknownSource { run }),
                },
            }
        }
        let mut reached = vec![false; n];
        let mut stack: Vec<usize> = tree.roots.iter().rev().copied().collect();
        while let Some(run) = stack.pop() {
            reached[run] = true;
            tree.order.push(run);
            stack.extend(tree.children[run].iter().rev());
        }
        tree.find_rings(&reached);
        tree
    }

    /// Runs that were not reached and lead back to themselves. A run that merely hangs below a ring or an unknown source is not
    /// at fault itself.
    fn find_rings(&mut self, reached: &[bool]) {
        let n = reached.len();
        // 0: not seen; k: seen on the walk that began at run k − 1.
        let mut walk = vec![0usize; n];
        for start in (0..n).filter(|&r| !reached[r]) {
            let mut at = start;
            while walk[at] == 0 {
                walk[at] = start + 1;
                match self.parent[at] {
                    Some(parent) => at = parent,
                    None => break,
                }
            }
            if walk[at] == start + 1 && self.parent[at].is_some() {
                let first = at;
                loop {
                    self.faults.push(TreeFault::Loop { run: at });
                    at = self.parent[at].unwrap_or(first);
                    if at == first {
                        break;
                    }
                }
            }
        }
    }

    /// The run itself and what feeds it, up to the utility. Bounded even in a ring.
    pub fn path_up(&self, run: usize) -> impl Iterator<Item = usize> + '_ {
        std::iter::successors(Some(run), |&r| self.parent[r]).take(self.parent.len())
    }

    /// Depth of a run below the utility: 0 for a service run.
    #[must_use]
    pub fn depth(&self, run: usize) -> usize {
        self.path_up(run).count() - 1
    }
}
