//! Sentences with figures in braces: read and typed when the file is loaded.
//!
//! `{dropout}` prints a figure with its range, `{dropout.high}` one end of it, `{output_voltage.high + dropout.high}`
//! a sum of ends, `{subject}` the subject, `{output_net}` a word, `{missing}` what is not known. `{{` is a brace.

use super::language::{Function, Node, NodeKind, Operator, Path, Refusal, Scope, expression, noun};
use crate::facts::ValueKind;
use crate::quantity::Dimension;
use crate::source::Span;

/// A sentence with figures in it.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Template {
    pub(super) parts: Vec<Part>,
}

/// A part of a sentence.
#[derive(Debug, Clone, PartialEq)]
pub(super) enum Part {
    /// Text as it is.
    Plain(String),
    /// The subject.
    Subject,
    /// The one of a group that is meant.
    Member,
    /// What is missing.
    Missing,
    /// A word or flag.
    Word(Path),
    /// A figure with its range.
    Range(Path),
    /// A single amount.
    Amount(Scalar, Dimension),
}

/// Which value of a range.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum End {
    Low,
    Nominal,
    High,
}

/// A single amount.
#[derive(Debug, Clone, PartialEq)]
pub(super) enum Scalar {
    Constant(f64),
    End(Path, End),
    Negated(Box<Scalar>),
    Binary(Operator, Box<Scalar>, Box<Scalar>),
    Call(Function, Vec<Scalar>),
}

impl Template {
    /// Reads a sentence and checks what it refers to.
    ///
    /// # Errors
    /// At the first brace that does not close, name that is not defined or part that does not fit.
    pub fn read(text: &str, scope: &Scope<'_>) -> Result<Self, Refusal> {
        let mut parts = Vec::new();
        let mut plain = String::new();
        let mut at = 0;
        while let Some(rest) = text.get(at..).filter(|rest| !rest.is_empty()) {
            if rest.starts_with("{{") || rest.starts_with("}}") {
                plain.push_str(rest.get(..1).unwrap_or(""));
                at += 2;
            } else if let Some(inner) = rest.strip_prefix('{') {
                let Some(length) = inner.find('}') else {
                    return Err(Refusal::new(Span::new(at, text.len()), "a brace is not closed", "opens here")
                        .help("write `{{` for a brace of the text"));
                };
                parts.extend((!plain.is_empty()).then(|| Part::Plain(std::mem::take(&mut plain))));
                let inside = inner.get(..length).unwrap_or("");
                parts.push(part(inside, scope).map_err(|refusal| refusal.shifted(at + 1))?);
                at += length + 2;
            } else if rest.starts_with('}') {
                return Err(Refusal::new(Span::new(at, at + 1), "a brace closes that was not opened", "closes here")
                    .help("write `}}` for a brace of the text"));
            } else {
                let length = rest.find(['{', '}']).unwrap_or(rest.len());
                plain.push_str(rest.get(..length).unwrap_or(""));
                at += length;
            }
        }
        parts.extend((!plain.is_empty()).then_some(Part::Plain(plain)));
        Ok(Self { parts })
    }

    /// The names of figures that it prints, in order of appearance.
    #[must_use]
    pub fn figures(&self) -> Vec<&Path> {
        let mut found = Vec::new();
        for part in &self.parts {
            match part {
                Part::Range(path) => found.push(path),
                Part::Amount(scalar, _) => scalar.paths(&mut found),
                _ => {}
            }
        }
        found
    }
}

impl Scalar {
    fn paths<'a>(&'a self, found: &mut Vec<&'a Path>) {
        match self {
            Self::Constant(_) => {}
            Self::End(path, _) => found.push(path),
            Self::Negated(inner) => inner.paths(found),
            Self::Binary(_, one, other) => {
                one.paths(found);
                other.paths(found);
            }
            Self::Call(_, all) => all.iter().for_each(|one| one.paths(found)),
        }
    }
}

fn part(text: &str, scope: &Scope<'_>) -> Result<Part, Refusal> {
    let name = text.trim();
    match name {
        "subject" => return Ok(Part::Subject),
        "missing" => return Ok(Part::Missing),
        _ if scope.each.as_ref().is_some_and(|each| each.variable == name) => return Ok(Part::Member),
        _ => {}
    }
    let node = expression(text)?;
    if let NodeKind::Name(name) = &node.kind
        && end(name).is_none()
    {
        return match scope.path(name, node.span)? {
            (path, ValueKind::Figure(_)) => Ok(Part::Range(path)),
            (path, ValueKind::Word(_)) => Ok(Part::Word(path)),
            (_, kind) => {
                Err(Refusal::new(node.span, format!("`{name}` is {}, which has no text", noun(kind)), "here"))
            }
        };
    }
    let (scalar, dimension) = scalar(&node, scope)?;
    Ok(Part::Amount(scalar, dimension))
}

/// The name and the end that it asks for.
fn end(name: &str) -> Option<(&str, End)> {
    let (name, end) = name.rsplit_once('.')?;
    match end {
        "low" => Some((name, End::Low)),
        "nominal" => Some((name, End::Nominal)),
        "high" => Some((name, End::High)),
        _ => None,
    }
}

fn scalar(node: &Node, scope: &Scope<'_>) -> Result<(Scalar, Dimension), Refusal> {
    match &node.kind {
        NodeKind::Name(name) => {
            let Some((inner, end)) = end(name) else {
                // A setting is a single value.
                if let (path @ Path::Setting(_), ValueKind::Figure(dimension)) = scope.path(name, node.span)? {
                    return Ok((Scalar::End(path, End::Nominal), dimension));
                }
                return Err(Refusal::new(
                    node.span,
                    format!("`{name}` is a range where one value is needed"),
                    "a range",
                )
                .help(format!("write `{name}.low`, `{name}.nominal` or `{name}.high`")));
            };
            match scope.path(inner, node.span)? {
                (path, ValueKind::Figure(dimension)) => Ok((Scalar::End(path, end), dimension)),
                (_, kind) => Err(Refusal::new(
                    node.span,
                    format!("`{inner}` is {} and has no ends", noun(kind)),
                    "not a figure",
                )),
            }
        }
        NodeKind::Number(_) => match scope.figure(node)? {
            (super::language::Figure::Constant(value, _), dimension) => Ok((Scalar::Constant(value), dimension)),
            _ => Err(Refusal::new(node.span, "a number is needed here", "no number")),
        },
        NodeKind::Negated(inner) => {
            let (inner, dimension) = scalar(inner, scope)?;
            Ok((Scalar::Negated(Box::new(inner)), dimension))
        }
        NodeKind::Binary(operator, left, right) => binary(*operator, left, right, scope),
        NodeKind::Call(function, arguments) => {
            let mut all = Vec::new();
            let mut first = None;
            for argument in arguments {
                let (scalar, dimension) = scalar(argument, scope)?;
                agree(*first.get_or_insert(dimension), dimension, argument.span)?;
                all.push(scalar);
            }
            Ok((Scalar::Call(*function, all), first.unwrap_or(Dimension::ONE)))
        }
        _ => Err(Refusal::new(node.span, "a sentence can print figures only", "not a figure")),
    }
}

fn binary(operator: Operator, left: &Node, right: &Node, scope: &Scope<'_>) -> Result<(Scalar, Dimension), Refusal> {
    let span = Span::new(left.span.start(), right.span.end());
    let ((one, a), (other, b)) = (scalar(left, scope)?, scalar(right, scope)?);
    let dimension = match operator {
        Operator::Plus | Operator::Minus => {
            agree(a, b, span)?;
            a
        }
        Operator::Times => a.times(b),
        Operator::Over => a.over(b),
        _ => return Err(Refusal::new(span, "a sentence can print figures only", "not a figure")),
    };
    Ok((Scalar::Binary(operator, Box::new(one), Box::new(other)), dimension))
}

fn agree(one: Dimension, other: Dimension, span: Span) -> Result<(), Refusal> {
    if one == other {
        return Ok(());
    }
    Err(Refusal::new(span, format!("{} and {} do not go together", one.noun(), other.noun()), "here"))
}
