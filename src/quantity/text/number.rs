//! Numbers as engineers type them.

/// A number and how many bytes it took.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Number {
    pub(super) value: f64,
    pub(super) length: usize,
    /// It has no sign, point or exponent: an infix letter (`4u7`) can be its point.
    pub(super) plain: bool,
}

/// Reads a number at the start of a text: sign, digits, a point or decimal comma with digits behind it, exponent. A
/// point that no digit follows is left alone (`50..200`), as is an `e` without digits.
pub(super) fn number(text: &str) -> Option<Number> {
    let (negative, start) = sign(text);
    let mut at = start;
    let mut written = String::new();
    let whole = digits(text.get(at..)?);
    written.push_str(whole);
    at += whole.len();
    let mut plain = start == 0;
    if let Some(rest) = text.get(at..).and_then(|rest| rest.strip_prefix(['.', ','])) {
        let part = digits(rest);
        if !part.is_empty() {
            plain = false;
            written.push('.');
            written.push_str(part);
            at += 1 + part.len();
        }
    }
    if !written.bytes().any(|byte| byte.is_ascii_digit()) {
        return None;
    }
    if let Some(exponent) = exponent(text.get(at..)?) {
        plain = false;
        written.push_str(exponent);
        at += exponent.len();
    }
    let value: f64 = written.parse().ok()?;
    value.is_finite().then_some(Number { value: if negative { -value } else { value }, length: at, plain })
}

/// The digits at the start of a text.
pub(super) fn digits(text: &str) -> &str {
    let end = text.find(|letter: char| !letter.is_ascii_digit()).unwrap_or(text.len());
    text.get(..end).unwrap_or_default()
}

fn sign(text: &str) -> (bool, usize) {
    match text.chars().next() {
        Some('+') => (false, 1),
        Some('-') => (true, 1),
        Some(minus @ '\u{2212}') => (true, minus.len_utf8()),
        _ => (false, 0),
    }
}

fn exponent(text: &str) -> Option<&str> {
    let rest = text.strip_prefix(['e', 'E'])?;
    let unsigned = rest.strip_prefix(['+', '-']).unwrap_or(rest);
    let power = digits(unsigned);
    (!power.is_empty()).then(|| text.get(..text.len() - unsigned.len() + power.len()))?
}
