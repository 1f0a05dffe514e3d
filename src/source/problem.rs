//! What went wrong while reading a text: where, why and what to do.

use super::{Source, Span};

/// How much a problem matters.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Severity {
    /// Something was passed over that does not touch the result.
    Note,
    /// Something is odd; the result stands.
    Warning,
    /// Something is lost; the result is not whole.
    Error,
}

/// A problem met while reading, pointing into the text that has it.
#[derive(Debug, Clone)]
pub struct Problem {
    severity: Severity,
    message: String,
    place: Option<(Source, Span)>,
    label: Option<String>,
    help: Option<String>,
}

impl Problem {
    /// Something is lost or refused: one line, lower case, no full stop.
    #[must_use]
    pub fn error(message: impl Into<String>) -> Self {
        Self::new(Severity::Error, message)
    }

    /// Something is odd.
    #[must_use]
    pub fn warning(message: impl Into<String>) -> Self {
        Self::new(Severity::Warning, message)
    }

    /// Something was done that the reader should know of.
    #[must_use]
    pub fn note(message: impl Into<String>) -> Self {
        Self::new(Severity::Note, message)
    }

    fn new(severity: Severity, message: impl Into<String>) -> Self {
        Self { severity, message: message.into(), place: None, label: None, help: None }
    }

    /// The same problem, pointing at `span` of `source` with a few words about what stands there.
    #[must_use]
    pub fn at(mut self, source: &Source, span: impl Into<Span>, label: impl Into<String>) -> Self {
        self.place = Some((source.clone(), span.into()));
        self.label = Some(label.into());
        self
    }

    /// The same problem with what to do about it.
    #[must_use]
    pub fn help(mut self, help: impl Into<String>) -> Self {
        self.help = Some(help.into());
        self
    }

    /// How much it matters.
    #[must_use]
    pub fn severity(&self) -> Severity {
        self.severity
    }

    /// What is wrong, in one line.
    #[must_use]
    pub fn message(&self) -> &str {
        &self.message
    }

    /// The text and the place in it.
    #[must_use]
    pub fn place(&self) -> Option<(&Source, Span)> {
        self.place.as_ref().map(|(source, span)| (source, *span))
    }

    /// A few words about what stands at the place.
    #[must_use]
    pub fn label(&self) -> Option<&str> {
        self.label.as_deref()
    }

    /// What to do.
    #[must_use]
    pub fn advice(&self) -> Option<&str> {
        self.help.as_deref()
    }
}
