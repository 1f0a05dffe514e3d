//! The tree of an expression as written, before its names are looked up.

use crate::source::Span;

/// A part of an expression with its place.
#[derive(Debug, Clone, PartialEq)]
pub struct Node {
    /// What it is.
    pub kind: NodeKind,
    /// Where it stands.
    pub span: Span,
    /// How many nodes lie below it at most: bounds every walk over the tree.
    pub depth: usize,
}

/// An operator between two parts.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
#[allow(missing_docs)] // each variant is the operator's name
pub enum Operator {
    Plus,
    Minus,
    Times,
    Over,
    Below,
    AtMost,
    Above,
    AtLeast,
    Equal,
    Unequal,
    And,
    Or,
}

/// A function of the language.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
#[allow(missing_docs)] // each variant is the function's name
pub enum Function {
    Min,
    Max,
    Abs,
}

/// What a node is.
#[derive(Debug, Clone, PartialEq)]
pub enum NodeKind {
    /// A number as written, with its unit.
    Number(String),
    /// A text between quotes.
    Quoted(String),
    /// A name; `variable.name` inside a loop.
    Name(String),
    /// `-x`
    Negated(Box<Node>),
    /// `not x`
    Not(Box<Node>),
    /// Two parts with an operator between.
    Binary(Operator, Box<Node>, Box<Node>),
    /// `min(a, b)`
    Call(Function, Vec<Node>),
    /// `x within a .. b`: the value, the two ends.
    Within(Box<Node>, Box<Node>, Box<Node>),
    /// `x is known`
    Known(Box<Node>),
    /// `x in {a, b}`
    In(Box<Node>, Vec<(String, Span)>),
}

/// A whole requirement: a condition, for each of a group or once.
#[derive(Debug, Clone, PartialEq)]
pub struct Sentence {
    /// The loop around the condition.
    pub each: Option<Each>,
    /// The condition.
    pub body: Node,
}

/// `for each variable in group:`
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Each {
    /// The name that stands for one of the group.
    pub variable: String,
    /// Where the variable stands.
    pub variable_span: Span,
    /// The name of the group.
    pub group: String,
    /// Where the group stands.
    pub group_span: Span,
}
