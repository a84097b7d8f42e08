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
            message: message.into(),
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
        self.label = label.into();
        self
    }
    /// With another place that belongs to it.
    #[must_use]
    pub fn also(mut self, at: Span, label: impl Into<String>) -> Self {
        self.also.push((at, label.into()));
        self
    }
    /// With what to do.
    #[must_use]
    pub fn help(mut self, help: impl Into<String>) -> Self {
        self.help = Some(help.into());
        self
    }
}

/// Faults kept at most: a hostile study shall not fill the memory with them.
const MOST_KEPT: usize = 10_000;

/// The faults found so far.
///
/// Each is kept once. Beyond 10,000 they are counted only.
#[derive(Clone, Debug, Default)]
pub struct Faults {
    list: Vec<Fault>,
    /// What tells faults apart, so that adding one takes the same time however many there are.
    seen: BTreeSet<(Span, &'static str, String)>,
    unkept: usize,
    errors: usize,
}

impl Faults {
    /// None yet.
    pub fn new() -> Self {
        Self::default()
    }
    /// Adds one, unless one of the same place, code and message is there.
    pub fn add(&mut self, fault: Fault) {
        if self.list.len() >= MOST_KEPT {
            self.unkept += 1;
            self.errors += usize::from(fault.severity == Severity::Error);
        } else if self.seen.insert((fault.at, fault.code, fault.message.clone())) {
            self.errors += usize::from(fault.severity == Severity::Error);
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
    fn a_fault_is_kept_once_and_a_flood_is_counted() {
        let mut faults = Faults::new();
        for i in 0..200_000 {
            let at = Span { start: i / 2, end: i / 2, ..Span::default() };
            faults.add(Fault::warning("odd", at, "odd"));
        }
        faults.add(Fault::error("bad", Span::default(), "bad"));
        assert_eq!(faults.sorted().len(), MOST_KEPT);
        assert_eq!(faults.errors(), 1);
        assert!(faults.any_error() && faults.count() > 100_000);
    }
}
