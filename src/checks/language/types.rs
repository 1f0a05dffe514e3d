//! Looks names up and checks dimensions when a file is loaded, so that no board is needed to find a slip.

use std::collections::BTreeMap;

use super::names::Names;
use super::refusal::Refusal;
use super::syntax::{Function, Node, NodeKind, Operator, Sentence};
use super::typed::{Condition, Figure, Loop, Path, Relation, Requirement};
use super::units;
use crate::facts::{SubjectKind, ValueKind};
use crate::quantity::Dimension;
use crate::source::Span;
use crate::source::toml::nearest;

/// What an expression may refer to.
pub struct Scope<'a> {
    /// The defined names.
    pub names: &'a dyn Names,
    /// What the check is about.
    pub about: SubjectKind,
    /// The settings of the check with their dimensions.
    pub settings: &'a BTreeMap<String, Dimension>,
    /// The loop that the expression stands in.
    pub each: Option<Loop>,
}

impl std::fmt::Debug for Scope<'_> {
    fn fmt(&self, formatter: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(formatter, "Scope(about {}, {} settings)", self.about.name(), self.settings.len())
    }
}

/// A figure with its dimension, and whether it was written as a number without a unit.
struct Typed {
    figure: Figure,
    dimension: Dimension,
    bare: bool,
}

impl Scope<'_> {
    /// Checks a requirement.
    ///
    /// # Errors
    /// At the first name that is not defined, or part that does not fit.
    pub fn requirement(&mut self, sentence: &Sentence) -> Result<Requirement, Refusal> {
        if let Some(each) = &sentence.each {
            let kind = match self.names.kind(self.about, &each.group) {
                Some(ValueKind::Group(kind)) => kind,
                Some(_) => {
                    return Err(Refusal::new(
                        each.group_span,
                        format!("`{}` is no group", each.group),
                        "not a group",
                    ));
                }
                None => return Err(self.unknown(&each.group, each.group_span, self.about, "")),
            };
            let taken = self.names.kind(self.about, &each.variable).is_some();
            if taken || each.variable.contains('.') || self.settings.contains_key(&each.variable) {
                let message = format!("`{}` has a meaning already", each.variable);
                return Err(
                    Refusal::new(each.variable_span, message, "taken").help("choose another name for the loop")
                );
            }
            self.each = Some(Loop { variable: each.variable.clone(), group: each.group.clone(), kind });
        }
        let condition = self.condition(&sentence.body, true)?;
        Ok(Requirement { each: self.each.clone(), condition })
    }

    /// Checks a condition that must hold, or must not where `wanted` is false.
    ///
    /// # Errors
    /// As [`Scope::requirement`].
    pub fn condition(&self, node: &Node, wanted: bool) -> Result<Condition, Refusal> {
        match &node.kind {
            NodeKind::Not(inner) => self.condition(inner, !wanted),
            NodeKind::Binary(operator @ (Operator::And | Operator::Or), left, right) => {
                let both = vec![self.condition(left, wanted)?, self.condition(right, wanted)?];
                let all = (*operator == Operator::And) == wanted;
                Ok(if all { Condition::All(both) } else { Condition::Any(both) })
            }
            NodeKind::Binary(operator @ (Operator::Equal | Operator::Unequal), left, right) => {
                self.equality(left, right, (*operator == Operator::Equal) == wanted)
            }
            NodeKind::Binary(operator, left, right) if order(*operator).is_some() => {
                let (left, right) = self.comparable(left, right)?;
                Ok(compare(*operator, left, right, wanted))
            }
            NodeKind::Within(value, low, high) => {
                let (inside, low) = self.comparable(value, low)?;
                let (same, high) = self.comparable(value, high)?;
                let sides = vec![
                    compare(Operator::AtLeast, inside, low, wanted),
                    compare(Operator::AtMost, same, high, wanted),
                ];
                Ok(if wanted { Condition::All(sides) } else { Condition::Any(sides) })
            }
            NodeKind::Known(inner) => {
                let NodeKind::Name(name) = &inner.kind else {
                    return Err(Refusal::new(inner.span, "only a name can be known", "not a name"));
                };
                Ok(Condition::Known(self.path(name, inner.span)?.0, wanted))
            }
            NodeKind::In(value, set) => {
                let (path, words) = self.word(value)?;
                let set = set.iter().map(|(word, span)| member(words, word, *span)).collect::<Result<_, _>>()?;
                Ok(Condition::Word(path, set, wanted))
            }
            NodeKind::Name(name) => match self.path(name, node.span)? {
                (path, ValueKind::Flag) => Ok(Condition::Flag(path, wanted)),
                (_, kind) => Err(no_condition(node.span, &format!("`{name}` is {}", noun(kind)))),
            },
            _ => Err(no_condition(node.span, "this is a figure")),
        }
    }

    /// Checks a figure.
    ///
    /// # Errors
    /// As [`Scope::requirement`].
    pub fn figure(&self, node: &Node) -> Result<(Figure, Dimension), Refusal> {
        self.typed(node).map(|typed| (typed.figure, typed.dimension))
    }

    fn typed(&self, node: &Node) -> Result<Typed, Refusal> {
        let made = |figure, dimension| Ok(Typed { figure, dimension, bare: false });
        match &node.kind {
            NodeKind::Number(text) => {
                let (value, dimension) =
                    units::constant(text).map_err(|refusal| refusal.shifted(node.span.start()))?;
                let bare = text.ends_with(|c: char| c.is_ascii_digit()) && dimension == Dimension::ONE;
                Ok(Typed { figure: Figure::Constant(value, dimension), dimension, bare })
            }
            NodeKind::Name(name) => match self.path(name, node.span)? {
                (path, ValueKind::Figure(dimension)) => made(Figure::Name(path), dimension),
                (_, kind) => {
                    let message = format!("`{name}` is {} where a figure is needed", noun(kind));
                    Err(Refusal::new(node.span, message, "not a figure"))
                }
            },
            NodeKind::Negated(inner) => {
                let inner = self.typed(inner)?;
                Ok(Typed { figure: Figure::Negated(Box::new(inner.figure)), ..inner })
            }
            NodeKind::Binary(operator, left, right) => self.arithmetic(*operator, left, right, node.span),
            NodeKind::Call(function, arguments) => self.call(*function, arguments),
            _ => Err(Refusal::new(node.span, "this is a condition where a figure is needed", "not a figure")),
        }
    }

    fn arithmetic(&self, operator: Operator, left: &Node, right: &Node, span: Span) -> Result<Typed, Refusal> {
        if let Operator::Plus | Operator::Minus = operator {
            let (one, other) = (self.typed(left)?, self.typed(right)?);
            same(&one, left.span, &other, right.span)?;
            let (dimension, bare) = (one.dimension, one.bare && other.bare);
            let (one, other) = (Box::new(one.figure), Box::new(other.figure));
            let figure =
                if operator == Operator::Plus { Figure::Sum(one, other) } else { Figure::Difference(one, other) };
            return Ok(Typed { figure, dimension, bare });
        }
        if operator != Operator::Times && operator != Operator::Over {
            return Err(Refusal::new(span, "this is a condition where a figure is needed", "not a figure"));
        }
        let (one, other) = (self.typed(left)?, self.typed(right)?);
        let bare = one.bare && other.bare;
        let product = operator == Operator::Times;
        let dimension =
            if product { one.dimension.times(other.dimension) } else { one.dimension.over(other.dimension) };
        if !product && matches!(other.figure, Figure::Constant(0.0, _)) {
            return Err(Refusal::new(right.span, "nothing can be divided by zero", "zero"));
        }
        let (one, other) = (Box::new(one.figure), Box::new(other.figure));
        let figure = if product { Figure::Product(one, other) } else { Figure::Quotient(one, other) };
        Ok(Typed { figure, dimension, bare })
    }

    fn call(&self, function: Function, arguments: &[Node]) -> Result<Typed, Refusal> {
        let mut figures = Vec::new();
        let mut first: Option<(Typed, Span)> = None;
        for node in arguments {
            let typed = self.typed(node)?;
            if let Some((first, span)) = &first {
                same(first, *span, &typed, node.span)?;
            }
            figures.push(typed.figure.clone());
            first = first.or(Some((typed, node.span)));
        }
        let Some((first, _)) = first else {
            return Err(Refusal::new(Span::default(), "a function needs a figure", "empty"));
        };
        let figure = match function {
            Function::Min => Figure::Least(figures),
            Function::Max => Figure::Greatest(figures),
            Function::Abs => Figure::Magnitude(Box::new(first.figure)),
        };
        Ok(Typed { figure, dimension: first.dimension, bare: first.bare })
    }

    fn comparable(&self, left: &Node, right: &Node) -> Result<(Figure, Figure), Refusal> {
        let (one, other) = (self.typed(left)?, self.typed(right)?);
        same(&one, left.span, &other, right.span)?;
        Ok((one.figure, other.figure))
    }

    fn equality(&self, left: &Node, right: &Node, wanted: bool) -> Result<Condition, Refusal> {
        let (path, words) = match self.word(left) {
            Ok(found) => found,
            Err(refusal) => {
                // A figure on the left is the common slip, and has its own answer.
                self.typed(left).map_err(|_| refusal)?;
                let span = Span::new(left.span.start(), right.span.end());
                return Err(Refusal::new(span, "figures are ranges, which cannot be compared by `==`", "two ranges")
                    .help("write `>=`, `<=` or `within`; `==` compares words"));
            }
        };
        let (NodeKind::Name(word) | NodeKind::Quoted(word)) = &right.kind else {
            return Err(Refusal::new(right.span, "a word is needed after `==`", "not a word"));
        };
        Ok(Condition::Word(path, vec![member(words, word, right.span)?], wanted))
    }

    fn word(&self, node: &Node) -> Result<(Path, &'static [&'static str]), Refusal> {
        if let NodeKind::Name(name) = &node.kind {
            return match self.path(name, node.span)? {
                (path, ValueKind::Word(words)) => Ok((path, words)),
                (_, ValueKind::Flag) => Err(Refusal::new(node.span, format!("`{name}` is a yes or no"), "no word")
                    .help(format!("write `{name}` or `not {name}`"))),
                (_, kind) => {
                    Err(Refusal::new(node.span, format!("`{name}` is {} and no word", noun(kind)), "no word"))
                }
            };
        }
        Err(Refusal::new(node.span, "a name that stands for a word is needed here", "no name"))
    }

    /// What a name stands for.
    pub(crate) fn path(&self, name: &str, span: Span) -> Result<(Path, ValueKind), Refusal> {
        if let Some(dimension) = self.settings.get(name) {
            return Ok((Path::Setting(name.to_owned()), ValueKind::Figure(*dimension)));
        }
        if let Some((variable, inner)) = name.split_once('.') {
            return match &self.each {
                Some(each) if each.variable == variable => match self.names.kind(each.kind, inner) {
                    Some(kind) => Ok((Path::Member(variable.to_owned(), inner.to_owned()), kind)),
                    None => Err(self.unknown(inner, span, each.kind, &format!("{variable}."))),
                },
                _ if self.names.kind(self.about, variable).is_some() => {
                    Err(Refusal::new(span, format!("`{variable}` has no part `{inner}`"), "unknown part")
                        .help(format!("in sentences: `{variable}.low`, `{variable}.nominal`, `{variable}.high`")))
                }
                _ => Err(Refusal::new(span, format!("`{variable}` is no variable of a loop here"), "unknown name")
                    .help("a loop is begun by `for each name in group:`")),
            };
        }
        match self.names.kind(self.about, name) {
            Some(kind) => Ok((Path::Subject(name.to_owned()), kind)),
            None => Err(self.unknown(name, span, self.about, "")),
        }
    }

    fn unknown(&self, name: &str, span: Span, of: SubjectKind, before: &str) -> Refusal {
        let refusal = Refusal::new(span, format!("a {} has no figure `{name}`", of.name()), "unknown name");
        if name.contains('-') {
            return refusal.help("put spaces around a minus sign");
        }
        let mut known = self.names.known(of);
        if before.is_empty() {
            known.extend(self.settings.keys().map(String::as_str));
        }
        match nearest(name, known) {
            Some(near) => refusal.help(format!("did you mean `{before}{near}`?")),
            None => refusal.help("`railworthy catalog quantities` lists every name"),
        }
    }
}

fn order(operator: Operator) -> Option<(bool, Relation)> {
    match operator {
        Operator::AtLeast => Some((false, Relation::AtLeast)),
        Operator::Above => Some((false, Relation::Above)),
        Operator::AtMost => Some((true, Relation::AtLeast)),
        Operator::Below => Some((true, Relation::Above)),
        _ => None,
    }
}

/// `left operator right`, or its opposite where it is not wanted: `not (a >= b)` is `b > a`.
fn compare(operator: Operator, left: Figure, right: Figure, wanted: bool) -> Condition {
    let (turned, relation) = order(operator).unwrap_or((false, Relation::AtLeast));
    let (left, right) = if turned { (right, left) } else { (left, right) };
    match (wanted, relation) {
        (true, _) => Condition::Compare(relation, left, right),
        (false, Relation::AtLeast) => Condition::Compare(Relation::Above, right, left),
        (false, Relation::Above) => Condition::Compare(Relation::AtLeast, right, left),
    }
}

fn same(one: &Typed, one_span: Span, other: &Typed, other_span: Span) -> Result<(), Refusal> {
    if one.dimension == other.dimension {
        return Ok(());
    }
    let missing = |span, known: &Typed| {
        let unit = known.dimension.symbol().map_or_else(|| known.dimension.to_string(), str::to_owned);
        Refusal::new(span, format!("the number has no unit and is set against {}", known.dimension.noun()), "no unit")
            .help(format!("write the unit: `… {unit}`"))
    };
    if one.bare {
        return Err(missing(one_span, other));
    }
    if other.bare {
        return Err(missing(other_span, one));
    }
    let span = Span::new(one_span.start(), other_span.end());
    let message = format!("{} and {} do not go together", one.dimension.noun(), other.dimension.noun());
    Err(Refusal::new(span, message, format!("{} and {}", unit(one.dimension), unit(other.dimension))))
}

fn unit(dimension: Dimension) -> String {
    if dimension == Dimension::ONE { "no unit".to_owned() } else { dimension.to_string() }
}

fn member(words: &'static [&'static str], word: &str, span: Span) -> Result<String, Refusal> {
    if words.is_empty() || words.contains(&word) {
        return Ok(word.to_owned());
    }
    let near =
        nearest(word, words.iter().copied()).map(|near| format!("did you mean `{near}`? ")).unwrap_or_default();
    Err(Refusal::new(span, format!("`{word}` is none of the words that can stand here"), "unknown word")
        .help(format!("{near}the words are {}", words.join(", "))))
}

fn no_condition(span: Span, what: &str) -> Refusal {
    Refusal::new(span, format!("{what} where a condition is needed"), "no condition")
        .help("compare it with something, as in `x >= 2 V`")
}

/// What a name stands for, in words.
#[must_use]
pub fn noun(kind: ValueKind) -> String {
    match kind {
        ValueKind::Figure(dimension) => dimension.noun(),
        ValueKind::Word(_) => "a word".to_owned(),
        ValueKind::Flag => "a yes or no".to_owned(),
        ValueKind::Group(kind) => format!("a group of {}s", kind.name()),
    }
}
