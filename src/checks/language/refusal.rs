//! Why a text of the check language is refused, and where in its file that is.

use crate::source::toml::{Document, Text};
use crate::source::{Problem, Span};

/// Why an expression or a template is refused: a place in its own text, and what to do.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Refusal {
    /// The place, counted from the start of the expression.
    pub span: Span,
    /// What is wrong: one line, lower case, no full stop.
    pub message: String,
    /// A few words about what stands there.
    pub label: String,
    /// What to do.
    pub help: Option<String>,
}

impl Refusal {
    /// A refusal at a place.
    #[must_use]
    pub fn new(span: Span, message: impl Into<String>, label: impl Into<String>) -> Self {
        Self { span, message: message.into(), label: label.into(), help: None }
    }

    /// The same with what to do.
    #[must_use]
    pub fn help(mut self, help: impl Into<String>) -> Self {
        self.help = Some(help.into());
        self
    }

    /// The same, for an expression that starts `offset` bytes into a longer text.
    #[must_use]
    pub fn shifted(mut self, offset: usize) -> Self {
        self.span = self.span.shifted(offset);
        self
    }

    /// Notes it as a problem of the file that holds the text.
    pub fn report(&self, document: &Document, text: &Text<'_>) {
        let place = text.part(self.span.start()..self.span.end());
        let problem = Problem::error(self.message.as_str()).at(document.source(), place, self.label.as_str());
        document.report(match &self.help {
            Some(help) => problem.help(help.as_str()),
            None => problem,
        });
    }
}
