//! Cuts an expression into words, numbers and signs.

use super::refusal::Refusal;
use crate::source::Span;

/// The most tokens that an expression may have.
pub const MAX_TOKENS: usize = 600;

/// What a token is.
#[derive(Debug, Clone, PartialEq)]
pub(super) enum Token {
    /// A number with its unit, as written: `0.5`, `2 V`, `4u7`.
    Number(String),
    /// A name or keyword; dots join the parts of a name.
    Word(String),
    /// A text between quotes.
    Quoted(String),
    /// An operator, bracket or separator.
    Sign(&'static str),
}

/// The words that are not names.
pub const KEYWORDS: &[&str] = &["and", "or", "not", "within", "is", "known", "in", "for", "each"];

/// Signs, the longer before the shorter that they begin with.
const SIGNS: &[&str] = &[
    "<=", ">=", "==", "!=", "..", "≤", "≥", "±", "+/-", "<", ">", "=", "+", "-", "*", "/", "(", ")", "{", "}", "[",
    "]", ",", ":", "×", "·", "−",
];

/// Cuts a text into tokens with their places.
///
/// # Errors
/// At the first character that the language does not know, an open quote, or past [`MAX_TOKENS`].
pub(super) fn tokens(text: &str) -> Result<Vec<(Token, Span)>, Refusal> {
    let mut found = Vec::new();
    let mut at = 0;
    while let Some(rest) = text.get(at..).filter(|rest| !rest.is_empty()) {
        let Some(first) = rest.chars().next() else { break };
        if first.is_whitespace() {
            at += first.len_utf8();
            continue;
        }
        let (token, length) = next(rest, first).map_err(|message| {
            let span = Span::new(at, at + first.len_utf8());
            Refusal::new(span, message, "here")
        })?;
        if found.len() >= MAX_TOKENS {
            let span = Span::new(at, at + length);
            return Err(Refusal::new(span, format!("the expression has more than {MAX_TOKENS} parts"), "too much"));
        }
        found.push((token, Span::new(at, at + length)));
        at += length;
    }
    Ok(found)
}

fn next(rest: &str, first: char) -> Result<(Token, usize), String> {
    if first.is_ascii_digit() {
        let length = number(rest);
        let written = rest.get(..length).unwrap_or("");
        return Ok((Token::Number(written.to_owned()), length));
    }
    if first.is_alphabetic() || first == '_' {
        let length =
            rest.find(|c: char| !(c.is_alphanumeric() || c == '_' || c == '.' || c == '-')).unwrap_or(rest.len());
        let word = rest.get(..length).unwrap_or("");
        // `..` and a trailing dot are signs; a hyphen belongs to a word only between letters (`npn-follower`), and
        // names have none, so that `a - b` needs its spaces.
        let word = word.split("..").next().unwrap_or(word).trim_end_matches(['.', '-']);
        return Ok((Token::Word(word.to_owned()), word.len()));
    }
    if first == '\'' || first == '"' {
        let Some(inner) = rest.get(1..).and_then(|inner| inner.split_once(first)) else {
            return Err("a text is not closed".to_owned());
        };
        return Ok((Token::Quoted(inner.0.to_owned()), inner.0.len() + 2));
    }
    match SIGNS.iter().find(|sign| rest.starts_with(**sign)) {
        Some(sign) => Ok((Token::Sign(plain(sign)), sign.len())),
        None => Err(format!("`{}` is no part of the check language", first.escape_debug())),
    }
}

/// One spelling of each sign.
fn plain(sign: &'static str) -> &'static str {
    match sign {
        "≤" => "<=",
        "≥" => ">=",
        "×" | "·" => "*",
        "−" => "-",
        "+/-" => "±",
        same => same,
    }
}

/// The length of a number with its unit at the start of `rest`.
fn number(rest: &str) -> usize {
    let digits = |from: usize| rest.get(from..).map_or(0, |rest| rest.bytes().take_while(u8::is_ascii_digit).count());
    let mut end = digits(0);
    if rest.get(end..).is_some_and(|rest| rest.starts_with('.')) && digits(end + 1) > 0 {
        end += 1 + digits(end + 1);
    }
    end += exponent(rest.get(end..).unwrap_or(""));
    let glued = unit(rest.get(end..).unwrap_or(""));
    if glued > 0 {
        // IEC 60062 writes the multiplier in place of the decimal point: 4u7.
        return end + glued + digits(end + glued);
    }
    let spaces = rest.get(end..).map_or(0, |rest| rest.len() - rest.trim_start_matches([' ', '\t']).len());
    let spaced = unit(rest.get(end + spaces..).unwrap_or(""));
    if spaced > 0 { end + spaces + spaced } else { end }
}

fn exponent(rest: &str) -> usize {
    let mut bytes = rest.bytes();
    if !matches!(bytes.next(), Some(b'e' | b'E')) {
        return 0;
    }
    let tail = rest.get(1..).unwrap_or("");
    let sign = usize::from(tail.starts_with(['+', '-']));
    let digits = tail.get(sign..).map_or(0, |tail| tail.bytes().take_while(u8::is_ascii_digit).count());
    if digits > 0 { 1 + sign + digits } else { 0 }
}

/// The length of a unit at the start of `rest`; a keyword is none.
fn unit(rest: &str) -> usize {
    if rest.starts_with('%') {
        return 1;
    }
    let is_part = |c: char| c.is_alphabetic() || matches!(c, 'µ' | '°' | 'Ω');
    let length = rest.find(|c: char| !is_part(c)).unwrap_or(rest.len());
    let word = rest.get(..length).unwrap_or("");
    if KEYWORDS.contains(&word) || rest.get(length..).is_some_and(|rest| rest.starts_with('_')) {
        return 0;
    }
    let tail = rest.get(length..).unwrap_or("");
    if matches!(word, "C" | "K" | "°C" | "°K" | "k" | "mK") && tail.starts_with("/W") { length + 2 } else { length }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn words(text: &str) -> Vec<String> {
        tokens(text)
            .unwrap()
            .into_iter()
            .map(|(token, _)| match token {
                Token::Number(text) | Token::Word(text) => text,
                Token::Quoted(text) => format!("'{text}'"),
                Token::Sign(sign) => sign.to_owned(),
            })
            .collect()
    }

    #[test]
    fn numbers_keep_their_units_and_leave_ranges_and_keywords() {
        assert_eq!(words("x within 0.5 .. 2 V and y"), ["x", "within", "0.5", "..", "2 V", "and", "y"]);
        assert_eq!(words("1..2e-3F"), ["1", "..", "2e-3F"]);
        assert_eq!(words("4u7 62 °C/W 5 % 10µF/2"), ["4u7", "62 °C/W", "5 %", "10µF", "/", "2"]);
        assert_eq!(words("0.5 or 3 and"), ["0.5", "or", "3", "and"]);
    }

    #[test]
    fn words_keep_inner_dots_and_hyphens() {
        assert_eq!(words("capacitor.esr<=a..b"), ["capacitor.esr", "<=", "a", "..", "b"]);
        assert_eq!(words("pass == npn-follower"), ["pass", "==", "npn-follower"]);
        assert_eq!(words("n == '+3V3' ≥ 2"), ["n", "==", "'+3V3'", ">=", "2"]);
    }

    #[test]
    fn an_unknown_sign_and_an_open_quote_are_refused_where_they_stand() {
        assert_eq!(tokens("a ? b").unwrap_err().span, Span::new(2, 3));
        assert_eq!(tokens("a == 'b").unwrap_err().message, "a text is not closed");
    }
}
