//! What a name means: one entry for each figure, in the file that computes it.

use super::{Facts, Subject, SubjectKind, Value};
use crate::quantity::Dimension;

/// What a name stands for, for every subject.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum ValueKind {
    /// A figure of this dimension.
    Figure(Dimension),
    /// A word, one of these; empty for names of nets and parts.
    Word(&'static [&'static str]),
    /// Yes or no.
    Flag,
    /// Subjects of this kind.
    Group(SubjectKind),
}

/// A name of the check language.
#[derive(Debug)]
pub struct Definition {
    /// The name, lower case with underscores.
    pub name: &'static str,
    /// What it is a figure of.
    pub of: SubjectKind,
    /// What it stands for.
    pub kind: ValueKind,
    /// Its meaning in one line.
    pub meaning: &'static str,
    /// The source file that computes it.
    pub defined_in: &'static str,
    /// Computes it.
    pub compute: fn(&Facts<'_>, Subject) -> Value,
}
