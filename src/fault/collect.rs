//! The value of a fault, and the list that all stages add to.

use std::collections::BTreeSet;

use super::Span;

/// How bad a fault is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Severity {
    /// The study cannot be issued.
    Error,
    /// The study can be issued; the practitioner should look.
    Warning,
    /// Worth knowing.
    Note,
}

/// One thing wrong with a study: one cause, one fault.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Fault {
    /// How bad it is.
    pub severity: Severity,
    /// Stable name in kebab case: `unknown-name`.
    pub code: &'static str,
    /// One clause, lower case, no full stop, true when read alone.
    pub message: String,
    /// The smallest text that is wrong.
    pub at: Span,
    /// What the marked text is, in a word or two; may be empty.
    pub label: String,
    /// The other ends: a first definition, the thing that it clashes with.
    pub also: Vec<(Span, String)>,
    /// What to do.
    pub help: Option<String>,
}

impl Fault {
    /// An error.
    pub fn error(code: &'static str, at: Span, message: impl Into<String>) -> Self {
        Fault {
            severity: Severity::Error,
            code,
            message: tidy(&message.into(), LONGEST_MESSAGE),
            at,
            label: String::new(),
            also: Vec::new(),
            help: None,
        }
    }
    /// A warning.
    pub fn warning(code: &'static str, at: Span, message: impl Into<String>) -> Self {
        Fault { severity: Severity::Warning, ..Self::error(code, at, message) }
    }
    /// A note.
    pub fn note(code: &'static str, at: Span, message: impl Into<String>) -> Self {
        Fault { severity: Severity::Note, ..Self::error(code, at, message) }
    }
    /// With a label beside the marked text.
    #[must_use]
    pub fn label(mut self, label: impl Into<String>) -> Self {
        self.label = tidy(&label.into(), LONGEST_QUOTE);
        self
    }
    /// With another place that belongs to it.
    #[must_use]
    pub fn also(mut self, at: Span, label: impl Into<String>) -> Self {
        self.also.push((at, tidy(&label.into(), LONGEST_QUOTE)));
        self
    }
    /// With what to do.
    #[must_use]
    pub fn help(mut self, help: impl Into<String>) -> Self {
        self.help = Some(tidy(&help.into(), LONGEST_MESSAGE));
        self
    }
}

/// A message or help is cut behind this many characters.
const LONGEST_MESSAGE: usize = 400;
/// A text of a study inside a message is cut behind this many characters.
const LONGEST_QUOTE: usize = 60;

/// A text of a study, short enough for a message and on one line.
pub fn clip(text: &str) -> String {
    tidy(text, LONGEST_QUOTE)
}

/// A text on one line, cut behind `most` characters, without what could steer a terminal: control characters
/// and changes of the direction of writing.
fn tidy(text: &str, most: usize) -> String {
    let mut chars = text.chars();
    let steers = |c: char| {
        c.is_control()
            || matches!(c, '\u{200e}' | '\u{200f}' | '\u{202a}'..='\u{202e}' | '\u{2066}'..='\u{2069}')
    };
    let mut out: String = chars.by_ref().take(most).map(|c| if steers(c) { ' ' } else { c }).collect();
    if chars.next().is_some() {
        out.push_str("...");
    }
    out
}

/// Errors kept at most, and as many warnings and notes: a hostile study shall not fill the memory with them.
const MOST_KEPT: usize = 10_000;

/// The faults found so far.
///
/// Each is kept once. Beyond 10,000 errors, and 10,000 warnings and notes, they are counted only.
#[derive(Clone, Debug, Default)]
pub struct Faults {
    list: Vec<Fault>,
    /// What tells faults apart, so that adding one takes the same time however many there are.
    seen: BTreeSet<(Span, &'static str, String)>,
    unkept: usize,
    kept_errors: usize,
    errors: usize,
}

impl Faults {
    /// None yet.
    pub fn new() -> Self {
        Self::default()
    }
    /// Adds one, unless one of the same place, code and message is there.
    pub fn add(&mut self, fault: Fault) {
        let is_error = fault.severity == Severity::Error;
        let kept = if is_error { self.kept_errors } else { self.list.len() - self.kept_errors };
        if kept >= MOST_KEPT {
            self.unkept += 1;
            self.errors += usize::from(is_error);
        } else if self.seen.insert((fault.at, fault.code, fault.message.clone())) {
            self.errors += usize::from(is_error);
            self.kept_errors += usize::from(is_error);
            self.list.push(fault);
        }
    }
    /// Whether one of them is an error.
    pub fn any_error(&self) -> bool {
        self.errors() > 0
    }
    /// Whether there is none at all.
    pub fn is_empty(&self) -> bool {
        self.list.is_empty()
    }
    /// Number of errors.
    pub fn errors(&self) -> usize {
        self.errors
    }
    /// Number of faults of all severities.
    pub fn count(&self) -> usize {
        self.list.len() + self.unkept
    }
    /// Those that were kept by file, place and code.
    pub fn sorted(&self) -> Vec<&Fault> {
        let mut list: Vec<&Fault> = self.list.iter().collect();
        list.sort_by(|a, b| (a.at, a.code, &a.message).cmp(&(b.at, b.code, &b.message)));
        list
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_could_steer_a_terminal_is_taken_out() {
        let fault = Fault::error("odd", Span::default(), "a\u{1b}[31m\nb\u{202e}c").help("x".repeat(5000));
        assert_eq!(fault.message, "a [31m b c");
        assert!(fault.help.unwrap().len() < 500);
    }

    #[test]
    fn a_fault_is_kept_once_and_a_flood_is_counted() {
        let mut faults = Faults::new();
        for i in 0..200_000 {
            let at = Span { start: i / 2, end: i / 2, ..Span::default() };
            faults.add(Fault::warning("odd", at, "odd"));
        }
        faults.add(Fault::error("bad", Span::default(), "bad"));
        assert_eq!(faults.sorted().len(), MOST_KEPT + 1);
        assert_eq!(faults.errors(), 1);
        assert!(faults.any_error() && faults.count() > 100_000);
    }
}
