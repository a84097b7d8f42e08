//! The value of a fault, and the list that all stages add to.

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

/// The faults found so far.
#[derive(Clone, Debug, Default)]
pub struct Faults {
    list: Vec<Fault>,
}

impl Faults {
    /// None yet.
    pub fn new() -> Self {
        Self::default()
    }
    /// Adds one.
    pub fn add(&mut self, fault: Fault) {
        if !self.list.contains(&fault) {
            self.list.push(fault);
        }
    }
    /// Whether one of them is an error.
    pub fn any_error(&self) -> bool {
        self.list.iter().any(|fault| fault.severity == Severity::Error)
    }
    /// Whether there is none at all.
    pub fn is_empty(&self) -> bool {
        self.list.is_empty()
    }
    /// Number of errors.
    pub fn errors(&self) -> usize {
        self.list.iter().filter(|fault| fault.severity == Severity::Error).count()
    }
    /// All of them by file, place and code.
    pub fn sorted(&self) -> Vec<&Fault> {
        let mut list: Vec<&Fault> = self.list.iter().collect();
        list.sort_by(|a, b| (a.at, a.code, &a.message).cmp(&(b.at, b.code, &b.message)));
        list
    }
}
