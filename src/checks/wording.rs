//! Puts the figures of a judged requirement into its sentences.

use super::language::{Context, Decision, Function, Operator, Path, value};
use super::template::{End, Part, Scalar, Template};
use super::verdict::Verdict;
use crate::facts::Value;
use crate::quantity::{Pair, Quantity, print_amount, print_range};

/// What a sentence is filled with.
#[derive(Debug, Clone, Copy)]
pub struct Filling<'a> {
    /// The subject, the group's member and the values.
    pub context: Context<'a>,
    /// The verdict: which bounds `.low` and `.high` take.
    pub verdict: Verdict,
    /// What decided.
    pub decision: &'a Decision,
}

/// A filled sentence, and whether each figure in it was known and finite.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Sentence {
    /// The text.
    pub text: String,
    /// Whether nothing in it is unknown, unbounded or does not apply, and no difference in it comes out at zero or less.
    pub whole: bool,
}

impl Template {
    /// Fills the sentence.
    #[must_use]
    pub fn fill(&self, filling: Filling<'_>) -> Sentence {
        let mut sentence = Sentence { text: String::new(), whole: true };
        for part in &self.parts {
            match filling.part(part) {
                Ok(text) => sentence.text.push_str(&text),
                Err(text) => {
                    sentence.text.push_str(&text);
                    sentence.whole = false;
                }
            }
        }
        sentence
    }
}

impl Filling<'_> {
    /// The text of a part; an error is the text for what is not known.
    fn part(&self, part: &Part) -> Result<String, String> {
        let label = |subject| self.context.figures.label(subject);
        match part {
            Part::Plain(text) => Ok(text.clone()),
            Part::Subject => Ok(label(self.context.subject)),
            Part::Member => Ok(label(self.context.member.unwrap_or(self.context.subject))),
            Part::Missing => Ok(missing(self.decision)),
            Part::Word(path) => match self.value(path) {
                Value::Word(word) if !word.word.is_empty() => Ok(word.word),
                _ => Err("none".to_owned()),
            },
            Part::Range(path) => match self.value(path) {
                Value::Figure(figure) => range(&figure),
                _ => Err("none".to_owned()),
            },
            Part::Amount(scalar, dimension) => {
                let amount = self.scalar(scalar);
                match amount {
                    None => Err("unknown".to_owned()),
                    // A remedy that would need less than nothing of something is none.
                    Some(value) if value <= 0.0 && matches!(scalar, Scalar::Binary(Operator::Minus, ..)) => {
                        Err(print_amount(value, *dimension))
                    }
                    Some(value) if value.is_finite() => Ok(print_amount(value, *dimension)),
                    Some(_) => Err("unbounded".to_owned()),
                }
            }
        }
    }

    fn value(&self, path: &Path) -> Value {
        value(self.context, path)
    }

    /// The bounds to speak of: what is claimed with guesses at nominal is worded so.
    fn bounds(&self, figure: &Quantity) -> Pair {
        match self.verdict {
            Verdict::Fails | Verdict::Doubtful => figure.likely(),
            _ => figure.worst(),
        }
    }

    fn scalar(&self, scalar: &Scalar) -> Option<f64> {
        Some(match scalar {
            Scalar::Constant(value) => *value,
            Scalar::End(path, end) => {
                let Value::Figure(figure) = self.value(path) else { return None };
                match end {
                    End::Low => self.bounds(&figure).low(),
                    End::High => self.bounds(&figure).high(),
                    End::Nominal => figure.nominal()?,
                }
            }
            Scalar::Negated(inner) => -self.scalar(inner)?,
            Scalar::Binary(operator, one, other) => {
                let (one, other) = (self.scalar(one)?, self.scalar(other)?);
                let result = match operator {
                    Operator::Plus => one + other,
                    Operator::Minus => one - other,
                    Operator::Times => one * other,
                    _ => one / other,
                };
                Some(result).filter(|result| !result.is_nan())?
            }
            Scalar::Call(function, all) => {
                let values: Option<Vec<f64>> = all.iter().map(|one| self.scalar(one)).collect();
                let values = values?.into_iter();
                match function {
                    Function::Min => values.reduce(f64::min)?,
                    Function::Max => values.reduce(f64::max)?,
                    Function::Abs => values.map(f64::abs).next()?,
                }
            }
        })
    }
}

fn range(figure: &Quantity) -> Result<String, String> {
    match figure.shown() {
        None => Err("unknown".to_owned()),
        Some(range) => Ok(print_range(range, figure.dimension())),
    }
}

/// What is missing, in words: `supply VCC and load on +5V are not known`.
#[must_use]
pub fn missing(decision: &Decision) -> String {
    let mut phrases: Vec<String> = Vec::new();
    for evidence in &decision.missing {
        let phrase = evidence.settle.as_ref().map_or_else(|| evidence.what.clone(), crate::quantity::Settle::phrase);
        if !phrases.contains(&phrase) {
            phrases.push(phrase);
        }
    }
    match phrases.split_last() {
        None => "a figure is not known".to_owned(),
        Some((only, [])) => format!("{only} {} not known", if only.starts_with("pins ") { "are" } else { "is" }),
        Some((last, rest)) => format!("{} and {last} are not known", rest.join(", ")),
    }
}
