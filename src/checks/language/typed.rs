//! Expressions whose names and dimensions are checked. `not` is gone: it is pushed down to the comparisons.

use crate::facts::SubjectKind;
use crate::quantity::Dimension;

/// Where a name is looked up.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Path {
    /// A name of the subject.
    Subject(String),
    /// A name of the one that a loop is at, with the loop's variable.
    Member(String, String),
    /// A setting of the check.
    Setting(String),
}

impl Path {
    /// As written in the expression.
    #[must_use]
    pub fn written(&self) -> String {
        match self {
            Self::Subject(name) | Self::Setting(name) => name.clone(),
            Self::Member(variable, name) => format!("{variable}.{name}"),
        }
    }
}

/// A figure.
#[derive(Debug, Clone, PartialEq)]
pub enum Figure {
    /// A number, in SI units.
    Constant(f64, Dimension),
    /// A name.
    Name(Path),
    /// `-x`
    Negated(Box<Figure>),
    /// `x + y`
    Sum(Box<Figure>, Box<Figure>),
    /// `x - y`
    Difference(Box<Figure>, Box<Figure>),
    /// `x * y`
    Product(Box<Figure>, Box<Figure>),
    /// `x / y`
    Quotient(Box<Figure>, Box<Figure>),
    /// `min(…)`, at least one
    Least(Vec<Figure>),
    /// `max(…)`, at least one
    Greatest(Vec<Figure>),
    /// `abs(x)`
    Magnitude(Box<Figure>),
}

/// How two figures must lie.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Relation {
    /// The left one is at least as large.
    AtLeast,
    /// The left one is larger.
    Above,
}

/// A condition.
#[derive(Debug, Clone, PartialEq)]
pub enum Condition {
    /// The first figure against the second; `<` and `<=` are turned round.
    Compare(Relation, Figure, Figure),
    /// The word is one of these (or none of them where the last is false).
    Word(Path, Vec<String>, bool),
    /// The flag has this value.
    Flag(Path, bool),
    /// The figure is known, or unknown where the last is false.
    Known(Path, bool),
    /// Every one holds.
    All(Vec<Condition>),
    /// At least one holds.
    Any(Vec<Condition>),
}

/// A whole requirement.
#[derive(Debug, Clone, PartialEq)]
pub struct Requirement {
    /// The loop around it.
    pub each: Option<Loop>,
    /// What must hold.
    pub condition: Condition,
}

/// A loop over a group of the subject.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Loop {
    /// The variable.
    pub variable: String,
    /// The name of the group.
    pub group: String,
    /// What its members are.
    pub kind: SubjectKind,
}
