//! A progress bar on standard error for anything over a second, only on a terminal.

use std::io::IsTerminal;
use std::time::Duration;

use indicatif::{ProgressBar, ProgressDrawTarget, ProgressStyle};

/// Work done out of work known, shown when it takes longer than a second.
pub(crate) struct Progress {
    bar: ProgressBar,
}

impl Progress {
    /// A bar with a title; hidden unless standard error is a terminal.
    pub(crate) fn new(title: &str) -> Self {
        let shown = std::io::stderr().is_terminal();
        let target =
            if shown { ProgressDrawTarget::stderr() } else { ProgressDrawTarget::hidden() };
        let bar = ProgressBar::with_draw_target(None, target);
        let style = ProgressStyle::with_template("{msg} {bar:30} {pos}/{len}  {elapsed}");
        bar.set_style(style.unwrap_or_else(|_| ProgressStyle::default_bar()));
        bar.set_message(title.to_owned());
        Self { bar }
    }

    /// So many parts of so many are done.
    pub(crate) fn at(&self, done: usize, of: usize) {
        // What ends within a second should not flicker.
        if self.bar.elapsed() < Duration::from_secs(1) {
            return;
        }
        self.bar.set_length(of as u64);
        self.bar.set_position(done as u64);
    }
}

impl Drop for Progress {
    fn drop(&mut self) {
        self.bar.finish_and_clear();
    }
}
