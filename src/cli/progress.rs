//! Progress: a line that changes on a terminal, plain lines elsewhere, on standard error.

use super::console::Console;
use indicatif::{MultiProgress, ProgressBar, ProgressDrawTarget, ProgressStyle};
use std::time::Duration;

/// Where the studies at hand tell what is being done.
pub(super) struct Progress<'a> {
    console: &'a Console,
    quiet: bool,
    lines: Option<MultiProgress>,
}

impl<'a> Progress<'a> {
    pub(super) fn new(console: &'a Console, quiet: bool) -> Self {
        let lines = (console.terminal && !quiet)
            .then(|| MultiProgress::with_draw_target(ProgressDrawTarget::stderr()));
        Progress { console, quiet, lines }
    }

    /// A study whose issue begins.
    pub(super) fn begin(&self, study: &str) -> Line<'_> {
        let bar = self.lines.as_ref().map(|lines| {
            let bar = lines.add(ProgressBar::new_spinner());
            if let Ok(style) = ProgressStyle::with_template("{spinner} {prefix}: {msg}") {
                bar.set_style(style);
            }
            bar.set_prefix(study.to_owned());
            bar.enable_steady_tick(Duration::from_millis(100));
            bar
        });
        if bar.is_none() && !self.quiet {
            self.console.note(&format!("issuing {study}"));
        }
        Line { progress: self, study: study.to_owned(), bar }
    }
}

/// The line of one study.
pub(super) struct Line<'a> {
    progress: &'a Progress<'a>,
    study: String,
    bar: Option<ProgressBar>,
}

impl Line<'_> {
    /// Tells what is being done now.
    pub(super) fn doing(&self, what: &str) {
        if let Some(bar) = &self.bar {
            bar.set_message(what.to_owned());
        }
    }

    /// Tells that the study is done with, and whether it was issued.
    pub(super) fn end(self, taken: Duration, issued: bool) {
        let word = if issued { "issued" } else { "not issued" };
        let text = format!("{word} {} ({:.1} s)", self.study, taken.as_secs_f64());
        if let Some(bar) = &self.bar {
            bar.finish_and_clear();
            // Above the lines that still change.
            if let Some(lines) = &self.progress.lines {
                let _ = lines.println(text);
            }
        } else if !self.progress.quiet {
            self.progress.console.note(&text);
        }
    }
}
