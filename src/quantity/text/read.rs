//! Reading amounts and ranges.

use std::fmt;

use super::super::dimension::Dimension;
use super::super::range::Range;
use super::number::{digits, number};
use super::unit::{PREFIXES, unit};
use crate::source::Span;

/// Why a text is no amount or range, and where in it.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct ReadError {
    message: String,
    span: Span,
}

impl ReadError {
    pub(super) fn new(message: &str, span: Span) -> Self {
        Self { message: message.to_owned(), span }
    }

    /// What is wrong and what was expected, in one line.
    #[must_use]
    pub fn message(&self) -> &str {
        &self.message
    }

    /// The bytes of the text that are wrong; empty at its end where something is missing.
    #[must_use]
    pub fn span(&self) -> Span {
        self.span
    }
}

impl fmt::Display for ReadError {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.write_str(&self.message)
    }
}

impl std::error::Error for ReadError {}

/// Reads one number with its unit: `180 mA`, `4.7uF`, `4u7`, `62 °C/W`, `45°`, `1k5`, `5 %` (0.05), `1e-6 F`.
///
/// The unit must be there, except for a plain number, and where a letter of the unit or a prefix stands for the decimal
/// point or follows a resistance, capacitance or inductance (`4u7`, `3V3`, `10k`).
///
/// # Errors
/// When it is no number, the unit is missing or of another dimension, or something follows.
pub fn read_amount(text: &str, dimension: Dimension) -> Result<f64, ReadError> {
    let mut reader = Reader::new(text, dimension);
    let amount = reader.amount()?;
    reader.end()?;
    reader.resolve(&amount, None)
}

/// Reads a range: `10.8 .. 14.4 V` (its nominal is the middle), `3.3 V ± 5 %`, `1.238 / 1.250 / 1.262 V` (lowest,
/// nominal, highest), `±20 %` (around zero), `>= 3 V`, `<= 5 V`, `any`, or one value. A unit may stand at every number or
/// only at the last.
///
/// # Errors
/// When it is none of these, a unit is missing or of another dimension, or the numbers are not in order.
pub fn read_range(text: &str, dimension: Dimension) -> Result<Range, ReadError> {
    let mut reader = Reader::new(text, dimension);
    let range = reader.range()?;
    reader.end()?;
    Ok(range)
}

/// Reads `1.20 / 1.30 V`: what is typical and what is the most; one value is both.
///
/// # Errors
/// When it is not that, a unit is missing or of another dimension, or the typical value is the larger one.
pub fn read_typical_maximum(text: &str, dimension: Dimension) -> Result<(f64, f64), ReadError> {
    let mut reader = Reader::new(text, dimension);
    let first = reader.amount()?;
    let second = if reader.eat(&["/"]) { Some(reader.amount()?) } else { None };
    reader.end()?;
    let maximum = reader.resolve(second.as_ref().unwrap_or(&first), None)?;
    let typical = reader.resolve(&first, second.as_ref())?;
    if typical > maximum {
        return Err(reader.whole("the typical value lies above the maximum"));
    }
    Ok((typical, maximum))
}

/// A number as read, before its unit is settled.
#[derive(Debug, Clone, Copy)]
struct Amount {
    value: f64,
    /// What one of the unit or prefix is; `None` where nothing stands behind the number.
    factor: Option<f64>,
    /// Per cent, which can be relative to another number.
    relative: bool,
    end: usize,
}

struct Reader<'a> {
    text: &'a str,
    at: usize,
    dimension: Dimension,
}

impl<'a> Reader<'a> {
    fn new(text: &'a str, dimension: Dimension) -> Self {
        let mut reader = Self { text, at: 0, dimension };
        reader.skip_blanks();
        reader
    }

    fn rest(&self) -> &'a str {
        self.text.get(self.at..).unwrap_or_default()
    }

    fn skip_blanks(&mut self) {
        self.at += self.rest().len() - self.rest().trim_start().len();
    }

    /// Passes over the first of some marks that stands next, and the blanks behind it.
    fn eat(&mut self, marks: &[&str]) -> bool {
        let Some(mark) = marks.iter().find(|mark| self.rest().starts_with(**mark)) else { return false };
        self.at += mark.len();
        self.skip_blanks();
        true
    }

    fn error(&self, span: Span, message: impl Into<String>) -> ReadError {
        ReadError { message: message.into(), span }
    }

    fn whole(&self, message: impl Into<String>) -> ReadError {
        self.error(Span::new(0, self.text.len()), message)
    }

    fn end(&self) -> Result<(), ReadError> {
        let rest = self.rest();
        if rest.is_empty() {
            return Ok(());
        }
        Err(self.error(
            Span::new(self.at, self.text.len()),
            format!("`{}` does not belong to {}", rest.trim_end(), self.dimension.noun()),
        ))
    }

    fn range(&mut self) -> Result<Range, ReadError> {
        if self.eat(&["any"]) {
            return Ok(Range::new(f64::NEG_INFINITY, 0.0, f64::INFINITY).unwrap_or(Range::exactly(0.0)));
        }
        if self.eat(PLUS_MINUS) {
            let width = self.amount()?;
            let width = self.resolve(&width, None)?.abs();
            return Ok(Range::clamped(-width, 0.0, width));
        }
        let (at_least, at_most) = (self.eat(&["≥", ">="]), self.eat(&["≤", "<="]));
        let first = self.amount()?;
        if at_least || at_most {
            let bound = self.resolve(&first, None)?;
            let range = if at_least { (bound, f64::INFINITY) } else { (f64::NEG_INFINITY, bound) };
            return Range::new(range.0, bound, range.1).map_err(|error| self.whole(error.to_string()));
        }
        if self.eat(&["...", "..", "…", "to ", "–"]) {
            let last = self.amount()?;
            let (low, high) = (self.resolve(&first, Some(&last))?, self.resolve(&last, None)?);
            return self.in_order(low, low / 2.0 + high / 2.0, high);
        }
        if self.eat(PLUS_MINUS) {
            return self.with_tolerance(&first);
        }
        if self.eat(&["/"]) {
            return self.three(&first);
        }
        Ok(Range::exactly(self.resolve(&first, None)?))
    }

    fn with_tolerance(&mut self, nominal: &Amount) -> Result<Range, ReadError> {
        let width = self.amount()?;
        if width.relative && self.dimension != Dimension::ONE {
            let nominal = self.resolve(nominal, None)?;
            return Ok(Range::with_tolerance(nominal, width.value * width.factor.unwrap_or(1.0)));
        }
        let (nominal, width) = (self.resolve(nominal, Some(&width))?, self.resolve(&width, None)?.abs());
        Ok(Range::clamped(nominal - width, nominal, nominal + width))
    }

    fn three(&mut self, low: &Amount) -> Result<Range, ReadError> {
        let nominal = self.amount()?;
        if !self.eat(&["/"]) {
            return Err(self.whole("two values say too little here: write `low .. high` or `low / nominal / high`"));
        }
        let high = self.amount()?;
        let last = Some(&high);
        self.in_order(self.resolve(low, last)?, self.resolve(&nominal, last)?, self.resolve(&high, None)?)
    }

    fn in_order(&self, low: f64, nominal: f64, high: f64) -> Result<Range, ReadError> {
        Range::new(low, nominal, high).map_err(|_| self.whole("the values are not in order: the lowest comes first"))
    }

    /// Reads a number and what belongs to it, up to the next mark.
    fn amount(&mut self) -> Result<Amount, ReadError> {
        let expected = self.dimension.noun();
        let Some(number) = number(self.rest()) else {
            let end = if self.rest().is_empty() { self.at } else { self.text.len() };
            return Err(self.error(Span::new(self.at, end), format!("expected {expected}")));
        };
        let start = self.at;
        self.at += number.length;
        if number.plain
            && let Some((factor, value)) = self.infix(start)
        {
            return Ok(self.amount_of(value, Some(factor), false));
        }
        let attached = self.at;
        self.skip_blanks();
        if let Some(found) = unit(self.rest(), self.dimension) {
            let relative = self.rest().starts_with('%') || self.rest().starts_with("ppm");
            if found.dimension != self.dimension && !relative {
                let wrong = self.rest().get(..found.length).unwrap_or_default();
                let message = format!("expected {expected}, but `{wrong}` is the unit of {}", found.dimension.noun());
                return Err(self.error(Span::new(self.at, self.at + found.length), message));
            }
            self.at += found.length;
            return Ok(self.amount_of(number.value, Some(found.factor), relative));
        }
        let bare = PREFIXES.iter().find(|(prefix, _)| self.at == attached && self.rest().starts_with(prefix));
        if let Some((prefix, factor)) = bare.filter(|(prefix, _)| self.takes_a_bare_prefix(prefix)) {
            self.at += prefix.len();
            return Ok(self.amount_of(number.value, Some(*factor), false));
        }
        Ok(Amount { value: number.value, factor: None, relative: false, end: attached })
    }

    fn amount_of(&mut self, value: f64, factor: Option<f64>, relative: bool) -> Amount {
        let end = self.at;
        self.skip_blanks();
        Amount { value, factor, relative, end }
    }

    /// A prefix or unit as the decimal point (`4u7`, `3V3`), with or without the unit behind it.
    fn infix(&mut self, start: usize) -> Option<(f64, f64)> {
        let rest = self.rest();
        let letter = PREFIXES.iter().copied().find(|(prefix, _)| rest.starts_with(prefix) && self.has_prefixes());
        let point = unit_letter(rest, self.dimension).map(|length| (length, 1.0));
        let (length, factor) = letter.map(|(prefix, factor)| (prefix.len(), factor)).or(point)?;
        let part = digits(rest.get(length..)?);
        if part.is_empty() {
            return None;
        }
        let whole = self.text.get(start..self.at)?;
        let value = format!("{whole}.{part}").parse().ok()?;
        self.at += length + part.len();
        let behind = unit(self.rest(), self.dimension).filter(|unit| unit.dimension == self.dimension);
        if let Some(unit) = behind.filter(|unit| unit.factor.to_bits() == 1.0_f64.to_bits()) {
            self.at += unit.length;
        }
        Some((factor, value))
    }

    fn has_prefixes(&self) -> bool {
        ![Dimension::ONE, Dimension::TEMPERATURE, Dimension::THERMAL_RESISTANCE, Dimension::ANGLE]
            .contains(&self.dimension)
    }

    fn takes_a_bare_prefix(&self, prefix: &str) -> bool {
        let kind = [Dimension::RESISTANCE, Dimension::CAPACITANCE, Dimension::INDUCTANCE].contains(&self.dimension);
        let behind = self.rest().get(prefix.len()..).and_then(|rest| rest.chars().next());
        kind && behind.is_none_or(|next| !next.is_alphanumeric())
    }

    /// The value in SI units; a number without a unit takes that of `other`.
    fn resolve(&self, amount: &Amount, other: Option<&Amount>) -> Result<f64, ReadError> {
        let relative = amount.relative && self.dimension != Dimension::ONE;
        let factor = amount.factor.or_else(|| other.and_then(|other| other.factor)).filter(|_| !relative);
        match factor {
            Some(factor) => Ok(scaled(amount.value, factor)),
            None if self.dimension == Dimension::ONE => Ok(amount.value),
            None => {
                let message = match self.dimension.symbol() {
                    Some(symbol) => format!("expected {}: the unit `{symbol}` is missing", self.dimension.noun()),
                    None => format!("expected {}", self.dimension.noun()),
                };
                Err(self.error(Span::new(amount.end, amount.end), message))
            }
        }
    }
}

const PLUS_MINUS: &[&str] = &["±", "+/-", "+-", "-/+"];

/// Dividing by an exact power of ten rounds once, as the decimal text would: `180 mA` is 0.18 and not 0.18000000000000002.
fn scaled(value: f64, factor: f64) -> f64 {
    if factor < 1.0 { value / (1.0 / factor).round() } else { value * factor }
}

/// The length of a letter that stands for the unit of a dimension where it is the decimal point.
fn unit_letter(text: &str, dimension: Dimension) -> Option<usize> {
    const LETTERS: &[(Dimension, &str)] = &[
        (Dimension::VOLTAGE, "V"),
        (Dimension::CURRENT, "A"),
        (Dimension::RESISTANCE, "R"),
        (Dimension::RESISTANCE, "Ω"),
        (Dimension::CAPACITANCE, "F"),
        (Dimension::INDUCTANCE, "H"),
        (Dimension::POWER, "W"),
    ];
    LETTERS
        .iter()
        .find(|(known, letter)| *known == dimension && text.starts_with(letter))
        .map(|(_, letter)| letter.len())
}

#[cfg(test)]
mod tests;
