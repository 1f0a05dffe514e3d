//! A figure that someone declared, with the place where it stands.

use std::sync::Arc;

use crate::quantity::{Dimension, Evidence, Grade, Quantity, Range};
use crate::source::{Problem, Source, Span};

/// Where a declaration stands.
#[derive(Debug, Clone)]
pub enum Place {
    /// In a board file.
    File {
        /// The file.
        source: Source,
        /// The value's place in it.
        span: Span,
        /// Whether it is the house file, which is written for more boards than this one.
        shared: bool,
    },
    /// In a field on a symbol.
    Field {
        /// The field's name as written.
        field: Arc<str>,
        /// The part that has it.
        reference: Arc<str>,
    },
}

impl Place {
    /// The place as a reader is told it: `gauge.railworthy.toml:9`, `field ESR of C4`.
    #[must_use]
    pub fn shown(&self) -> String {
        match self {
            Self::File { source, span, .. } => format!("{}:{}", source.name(), source.position(span.start()).line),
            Self::Field { field, reference } => format!("field {field} of {reference}"),
        }
    }

    /// The file it stands in, as its reader knows it; `None` for a field.
    #[must_use]
    pub fn file(&self) -> Option<&str> {
        match self {
            Self::File { source, .. } => Some(source.name()),
            Self::Field { .. } => None,
        }
    }

    /// The line it stands on, from 1; `None` for a field.
    #[must_use]
    pub fn line(&self) -> Option<usize> {
        match self {
            Self::File { source, span, .. } => Some(source.position(span.start()).line),
            Self::Field { .. } => None,
        }
    }

    /// Whether it stands in the house file.
    #[must_use]
    pub fn is_shared(&self) -> bool {
        matches!(self, Self::File { shared: true, .. })
    }

    /// `problem`, pointing here with a few words about what stands here; unchanged for a field.
    #[must_use]
    pub fn mark(&self, problem: Problem, label: impl Into<String>) -> Problem {
        match self {
            Self::File { source, span, .. } => problem.at(source, *span, label),
            Self::Field { .. } => problem,
        }
    }
}

/// Something that was declared, in a board file or in a field on a symbol.
#[derive(Debug, Clone)]
pub struct Declared<T> {
    /// What was declared; figures in SI units.
    pub value: T,
    /// Where it stands.
    pub place: Place,
}

impl<T> Declared<T> {
    /// What was declared, and where.
    #[must_use]
    pub fn new(value: T, place: Place) -> Self {
        Self { value, place }
    }

    /// What it rests on: grade *declared*, its place as the source. `what` says what it is about, as in
    /// `voltage of +5V`, and is the key of the fact.
    #[must_use]
    pub fn evidence(&self, what: impl Into<String>) -> Evidence {
        Evidence::new(Grade::Declared, what, self.place.shown())
    }

    /// Another value declared at the same place.
    #[must_use]
    pub fn map<U>(&self, change: impl FnOnce(&T) -> U) -> Declared<U> {
        Declared { value: change(&self.value), place: self.place.clone() }
    }
}

impl Declared<Range> {
    /// The figure as a fact in SI units.
    #[must_use]
    pub fn quantity(&self, dimension: Dimension, what: impl Into<String>) -> Quantity {
        Quantity::fact(dimension, self.value, self.evidence(what))
    }
}
