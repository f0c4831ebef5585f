//! How far a batch is: a bar with rate and time left on a terminal, plain lines elsewhere.

use super::journal::{Entry, Status};
use indicatif::{ProgressBar, ProgressDrawTarget, ProgressStyle};
use std::cell::Cell;
use std::io::IsTerminal;

/// Plain lines over a whole batch.
const LINES: usize = 10;

/// Counts what is done and shows it.
pub struct Progress {
    bar: Option<ProgressBar>,
    total: usize,
    count: Cell<usize>,
    written: Cell<usize>,
    plain: bool,
}

impl Progress {
    /// For so many workbooks.
    #[must_use]
    pub fn new(total: usize, quiet: bool) -> Self {
        let terminal = std::io::stderr().is_terminal();
        let bar = (terminal && !quiet).then(|| {
            let style = ProgressStyle::with_template("{bar:32} {pos} of {len}, {per_sec}, {eta} left");
            let bar = ProgressBar::with_draw_target(Some(total as u64), ProgressDrawTarget::stderr());
            style.map_or(bar.clone(), |style| bar.with_style(style))
        });
        Self { bar, total, count: Cell::new(0), written: Cell::new(0), plain: !terminal && !quiet }
    }

    /// One workbook is done.
    pub fn done(&self, entry: &Entry) {
        self.count.set(self.count.get() + 1);
        if entry.status == Status::Written {
            self.written.set(self.written.get() + 1);
        }
        if let Some(bar) = &self.bar {
            bar.inc(1);
        }
        let step = self.total.div_ceil(LINES).max(1);
        if self.plain && self.count.get().is_multiple_of(step) {
            anstream::eprintln!("midwire: {} of {}", self.count.get(), self.total);
        }
    }

    /// Takes the bar away.
    pub fn finish(&self) {
        if let Some(bar) = &self.bar {
            bar.finish_and_clear();
        }
    }

    /// Workbooks worked on.
    #[must_use]
    pub fn count(&self) -> usize {
        self.count.get()
    }

    /// Workbooks whose reports were written.
    #[must_use]
    pub fn written(&self) -> usize {
        self.written.get()
    }
}
