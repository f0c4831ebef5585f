//! Some runs of the circuit list laid out as a tree, one below the other.
//!
//! A run that is the only one fed from its source goes straight down below it; only where a source feeds several do they step
//! in. So a chain stays a chain however long it is, and the eye reads a branching as a branching.

use super::Scene;
use super::canvas::{Canvas, clean};
use crate::report::drawing::Colour;
use crate::visit::Tree;
use crate::wording::Sentence;
use std::ops::Range;

/// Steps in, at most. Beyond, a run names its source instead of being joined to it.
const MOST_COLUMNS: usize = 7;
/// Points a step.
pub(super) const STEP: f64 = 11.0;

/// One shown run and how it hangs on another.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Twig {
    pub run: usize,
    /// Position among the shown of the nearest shown run above.
    pub parent: Option<usize>,
    /// Runs between the two are not shown.
    pub skips: bool,
    /// Steps from the margin.
    pub column: usize,
    /// Too deep to be joined to its parent by a line.
    pub is_apart: bool,
}

impl Twig {
    /// Where its node stands.
    pub fn x(&self) -> f64 {
        NODE + STEP * self.column as f64
    }
}

/// Room for the node of column 0.
const NODE: f64 = 4.0;

impl Scene<'_> {
    /// Where a run is fed from, in words, where no line of the tree shows it.
    pub fn source_of(&self, twig: &Twig) -> Option<String> {
        let run = self.source.visit.runs.get(twig.run).filter(|_| twig.is_apart || twig.parent.is_none())?;
        let source = run.fed_from.as_ref()?;
        Some(self.say(&Sentence::new("figure.from").with("run", clean(&source.value))))
    }
}

/// Lays out runs, given in the order of the tree with those that hang loose behind. Linear in the number of runs.
pub(super) fn twigs(tree: &Tree, shown: &[usize]) -> Vec<Twig> {
    let n = tree.parent.len();
    let mut place: Vec<Option<usize>> = vec![None; n];
    for (i, &run) in shown.iter().enumerate() {
        if let Some(slot) = place.get_mut(run) {
            *slot = Some(i);
        }
    }
    let mut above: Vec<Option<usize>> = vec![None; n];
    for &run in &tree.order {
        if let Some(parent) = tree.parent[run] {
            above[run] = place[parent].or(above[parent]);
        }
    }
    let mut twigs: Vec<Twig> = shown
        .iter()
        .enumerate()
        .map(|(i, &run)| {
            let parent = above.get(run).copied().flatten().filter(|p| *p < i);
            let skips = parent.is_some_and(|p| tree.parent[run] != Some(shown[p]));
            Twig { run, parent, skips, column: 0, is_apart: false }
        })
        .collect();
    place_columns(&mut twigs);
    twigs
}

fn place_columns(twigs: &mut [Twig]) {
    let mut fed = vec![0usize; twigs.len()];
    for parent in twigs.iter().filter_map(|t| t.parent) {
        fed[parent] += 1;
    }
    for i in 0..twigs.len() {
        if let Some(parent) = twigs[i].parent {
            let column = twigs[parent].column + usize::from(fed[parent] > 1);
            twigs[i].column = column.min(MOST_COLUMNS);
            twigs[i].is_apart = column > MOST_COLUMNS;
        }
    }
}

/// The lines of a tree on one page. `y` are the heights of all twigs on one long sheet; `page` is the part of it to draw, which
/// begins at the page's `top`.
pub(super) fn trunks(canvas: &mut Canvas, twigs: &[Twig], y: &[f64], page: Range<f64>, top: f64) {
    let on_page = |at: f64| at.clamp(page.start, page.end) - page.start + top;
    let mut last: Vec<Option<usize>> = vec![None; twigs.len()];
    for (i, twig) in twigs.iter().enumerate().filter(|(_, t)| !t.is_apart) {
        if let Some(parent) = twig.parent {
            last[parent] = Some(i);
        }
    }
    for (parent, last) in last.iter().enumerate().filter_map(|(p, l)| Some((p, (*l)?))) {
        if y[parent] < page.end && y[last] >= page.start {
            let x = twigs[parent].x();
            canvas.line(&[(x, on_page(y[parent])), (x, on_page(y[last]))], 0.8, Colour::Faint);
        }
    }
    for (i, twig) in twigs.iter().enumerate().filter(|(i, t)| !t.is_apart && page.contains(&y[*i])) {
        if let Some(parent) = twig.parent {
            let (from, to, at) = (twigs[parent].x(), twig.x(), on_page(y[i]));
            if twig.skips && from < to {
                canvas.dashed(&[(from, at), (to, at)], 0.8, Colour::Faint, (1.5, 1.5));
            } else if from < to {
                canvas.line(&[(from, at), (to, at)], 0.8, Colour::Faint);
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// A tree from each run's source.
    fn tree(parents: &[Option<usize>]) -> Tree {
        let mut tree = Tree { parent: parents.to_vec(), ..Tree::default() };
        tree.order = (0..parents.len()).collect();
        tree
    }

    #[test]
    fn a_chain_goes_straight_down_and_a_branching_steps_in() {
        // 0 ─ 1 ─┬ 2
        //        └ 3 ─ 4
        let all: Vec<Twig> = twigs(&tree(&[None, Some(0), Some(1), Some(1), Some(3)]), &[0, 1, 2, 3, 4]);
        assert_eq!(all.iter().map(|t| t.column).collect::<Vec<_>>(), [0, 0, 1, 1, 1]);
    }

    #[test]
    fn a_run_whose_source_is_not_shown_hangs_on_the_next_above() {
        let some = twigs(&tree(&[None, Some(0), Some(1), Some(2)]), &[0, 3]);
        assert_eq!((some[1].parent, some[1].skips), (Some(0), true));
    }

    #[test]
    fn too_deep_a_branching_stands_apart_at_the_last_step() {
        // Every even run feeds a leaf and the next even run.
        let parents: Vec<Option<usize>> = (0..41).map(|i: usize| (i > 0).then(|| (i - 1) / 2 * 2)).collect();
        let all = twigs(&tree(&parents), &(0..41).collect::<Vec<_>>());
        assert_eq!(all.iter().map(|t| t.column).max(), Some(MOST_COLUMNS));
        assert!(all[40].is_apart && !all[1].is_apart);
    }
}
