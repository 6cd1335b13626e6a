//! A progress bar for long work, on a terminal only.

use super::{Common, Streams};
use indicatif::{ProgressBar, ProgressDrawTarget, ProgressStyle};

/// Rows below which a table is written before anybody could read a bar.
const LONG: u64 = 1_000_000;

/// Pictures below which the same holds.
const MANY: usize = 60;

/// How far a table has come; silent where nobody looks.
pub(super) struct Progress {
    bar: ProgressBar,
}

impl Progress {
    /// A bar for `rows` rows, shown where standard error is a terminal and `--quiet` is not given.
    pub(super) fn new(rows: u64, common: &Common, streams: &Streams) -> Self {
        Self::with(rows, rows >= LONG, common, streams)
    }
    /// A bar for `count` pictures.
    pub(super) fn pictures(count: usize, common: &Common, streams: &Streams) -> Self {
        let length = u64::try_from(count).unwrap_or(u64::MAX);
        let progress = Self::with(length, count >= MANY, common, streams);
        progress.phase("drawing");
        progress
    }
    fn with(rows: u64, long: bool, common: &Common, streams: &Streams) -> Self {
        let shown = streams.stderr_is_terminal && !common.quiet && long;
        let bar = if shown {
            let target = ProgressDrawTarget::stderr_with_hz(5);
            ProgressBar::with_draw_target(Some(rows), target)
        } else {
            ProgressBar::hidden()
        };
        let template = "{msg} {wide_bar} {percent:>3} %  {per_sec}  {eta} left";
        if let Ok(style) = ProgressStyle::with_template(template) {
            bar.set_style(style);
        }
        Self { bar }
    }
    /// What is being done now, from the first row on.
    pub(super) fn phase(&self, what: &'static str) {
        self.bar.set_message(what);
        self.bar.set_position(0);
        self.bar.reset_eta();
    }
    /// Says how many rows there are by now.
    pub(super) fn rows(&self, rows: u64) {
        self.bar.set_position(rows);
    }
    /// Says how many pictures there are by now.
    pub(super) fn at(&self, count: usize) {
        self.bar
            .set_position(u64::try_from(count).unwrap_or(u64::MAX));
    }
    /// Takes the bar away.
    pub(super) fn done(self) {
        self.bar.finish_and_clear();
    }
}
