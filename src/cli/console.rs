//! Standard output and standard error.

use super::status::Status;
use crate::fault::Failure;
use std::io::{self, IsTerminal, Write};
use std::sync::{Mutex, PoisonError};

/// Where the command prints: results to standard output, all else to standard error.
///
/// A reader that goes away (`halfstep schemes | head`) ends nothing. Any other trouble with standard output is
/// a failure, told when the console is closed.
pub(super) struct Console {
    /// Whether standard error takes colours: a terminal, and the user has not set `NO_COLOR`.
    pub(super) colour: bool,
    /// Whether standard error is a terminal.
    pub(super) terminal: bool,
    error: io::Stderr,
    trouble: Mutex<Option<io::Error>>,
}

impl Console {
    pub(super) fn new() -> Self {
        let terminal = io::stderr().is_terminal();
        let plain = std::env::var_os("NO_COLOR").is_some_and(|value| !value.is_empty());
        Console { colour: terminal && !plain, terminal, error: io::stderr(), trouble: Mutex::new(None) }
    }

    /// Prints a result as it stands.
    pub(super) fn print(&self, text: &str) {
        let mut out = io::stdout().lock();
        let printed = out.write_all(text.as_bytes()).and_then(|()| out.flush());
        if let Err(cause) = printed
            && cause.kind() != io::ErrorKind::BrokenPipe
        {
            self.trouble.lock().unwrap_or_else(PoisonError::into_inner).get_or_insert(cause);
        }
    }

    /// Prints a line of progress or a remark.
    pub(super) fn note(&self, line: &str) {
        self.error_text(&format!("{line}\n"));
    }

    /// Prints what went wrong, as `error: ...`.
    pub(super) fn fault(&self, message: &str) {
        let word = if self.colour { "\x1b[1;31merror\x1b[0m" } else { "error" };
        self.error_text(&format!("{word}: {message}\n"));
    }

    /// Prints a failure of the machine.
    pub(super) fn failure(&self, failure: &Failure) {
        self.fault(&failure.to_string());
    }

    /// Prints text that is laid out already, to standard error.
    pub(super) fn error_text(&self, text: &str) {
        // Nobody is left to be told where standard error is closed.
        let _ = self.error.lock().write_all(text.as_bytes());
    }

    /// Tells what was wrong with standard output, if anything.
    pub(super) fn close(&self) -> Status {
        let trouble = self.trouble.lock().unwrap_or_else(PoisonError::into_inner).take();
        trouble.map_or(Status::Well, |cause| {
            self.failure(&Failure::new("cannot write to standard output", cause));
            Status::Failed
        })
    }
}
