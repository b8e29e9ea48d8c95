//! A line that shows how far a long command has come: on a terminal only, after the first second.

use std::io::{IsTerminal, stderr};
use std::thread;
use std::time::Duration;

use indicatif::{ProgressBar, ProgressDrawTarget, ProgressStyle};

/// Commands shorter than this show nothing.
const QUIET: Duration = Duration::from_secs(1);

/// The line, drawn on standard error.
pub(super) struct ProgressLine(ProgressBar);

impl ProgressLine {
    /// A line that stays hidden for the first second, and for good where nobody watches.
    pub(super) fn new() -> Self {
        let bar = ProgressBar::hidden();
        if let Ok(style) = ProgressStyle::with_template("{spinner} {pos} of {len} cases, {elapsed}")
        {
            bar.set_style(style);
        }
        if stderr().is_terminal() {
            let later = bar.clone();
            thread::spawn(move || {
                thread::sleep(QUIET);
                if !later.is_finished() {
                    later.set_draw_target(ProgressDrawTarget::stderr());
                    later.enable_steady_tick(Duration::from_millis(200));
                }
            });
        }
        Self(bar)
    }

    /// Says how many of how many cases are done.
    pub(super) fn show(&self, done: usize, of: usize) {
        self.0.set_length(of as u64);
        self.0.set_position(done as u64);
    }

    /// Takes the line away.
    pub(super) fn clear(&self) {
        self.0.finish_and_clear();
    }
}
