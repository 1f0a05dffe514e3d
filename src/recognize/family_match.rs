//! Matching part names against the name patterns of families.
//!
//! Patterns are written for people (`LM1117*{V}*`); they are cut into tokens once, and a name is walked along them with
//! the set of places that can be reached, so that the cost is linear in the name whatever the pattern.

use std::cell::{OnceCell, RefCell};
use std::collections::HashMap;

use crate::knowledge::{Family, FamilyKind, VOLTAGE_CODE};

/// A family whose pattern fits a name.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Hit {
    /// Index of the family.
    pub(super) family: usize,
    /// How many letters and digits of its own the pattern has: how telling the match is.
    pub(super) literal: usize,
    /// Up to which byte the reduced name is the family's own number.
    pub(super) base: usize,
    /// The voltage code that the name has where the pattern wants one.
    pub(super) code: Option<Code>,
}

/// What a voltage code says.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) enum Code {
    /// This many volts, a magnitude.
    Volts(f64),
    /// Adjustable.
    Adjustable,
}

#[derive(Debug, Clone, PartialEq)]
enum Token {
    Literal(char),
    /// A dash or blank, or another separator in its place. Inside a number it may be left out, as makers and drawers do;
    /// next to a `*` or a code it must be there, or it would tell nothing.
    Separator,
    One,
    Any,
    Code,
}

#[derive(Debug)]
pub(super) struct Pattern {
    family: usize,
    literal: usize,
    tokens: Vec<Token>,
    /// Number of tokens that stand before the first `?`, `*` or code.
    beginning: usize,
    /// The letters and digits of the literal beginning.
    pub(super) start: String,
}

/// The patterns of all families, with the spellings of their voltages.
#[derive(Debug)]
pub(super) struct Matcher<'a> {
    families: &'a [Family],
    pub(super) patterns: Vec<Pattern>,
    /// The voltage codes of each family, spelled out when first asked for.
    codes: Vec<OnceCell<Vec<(String, Code)>>>,
    /// What was found for a name: most parts of a board share theirs with others. Only looked up.
    known: RefCell<HashMap<String, Vec<Hit>>>,
}

/// No order code is longer; what follows is prose.
const LONGEST_NAME: usize = 80;

/// A name as it is compared: upper case, underscores as dashes, the micro sign as `U`, at most [`LONGEST_NAME`] long.
pub(super) fn reduced(name: &str) -> String {
    let mut text = String::with_capacity(name.len());
    for each in name.trim().chars().flat_map(char::to_uppercase).take(LONGEST_NAME) {
        match each {
            '\u{a0}' => text.push(' '),
            '_' => text.push('-'),
            'Μ' | 'µ' | 'μ' => text.push('U'),
            ',' => text.push('.'),
            _ => text.push(each),
        }
    }
    text
}

fn is_separator(each: char) -> bool {
    matches!(each, '-' | '.' | '/' | ' ' | '_')
}

fn compile(family: usize, pattern: &str) -> Pattern {
    let mut tokens = Vec::new();
    let mut rest = pattern;
    while let Some(each) = rest.chars().next() {
        if let Some(behind) = rest.strip_prefix(VOLTAGE_CODE) {
            tokens.push(Token::Code);
            rest = behind;
            continue;
        }
        tokens.push(match each {
            '*' => Token::Any,
            '?' => Token::One,
            '-' | ' ' => Token::Separator,
            other => Token::Literal(other.to_ascii_uppercase()),
        });
        rest = rest.get(each.len_utf8()..).unwrap_or("");
    }
    let plain = |token: &&Token| matches!(token, Token::Literal(_) | Token::Separator);
    let beginning = tokens.iter().take_while(plain).count();
    let text = |token: &Token| if let Token::Literal(each) = token { Some(*each) } else { None };
    let literal = tokens.iter().filter_map(text).count();
    let start = tokens.iter().take(beginning).filter_map(text).collect();
    Pattern { family, literal, tokens, beginning, start }
}

/// The ways in which a voltage is spelled as a code, without separators. `rounded`: references are called by fewer
/// digits than they have.
pub(super) fn spellings(volts: f64, rounded: bool) -> Vec<String> {
    let mut found = vec![format!("{volts}")];
    for decimals in 1..=3_usize {
        let text = format!("{volts:.decimals$}");
        let exact = text.parse::<f64>().is_ok_and(|value| (value - volts).abs() < 1e-9);
        if exact || rounded {
            let digits = text.replace('.', "");
            found.extend([text.replace('.', "V"), text.replace('.', "P"), text.replace('.', "-")]);
            if decimals == 1 {
                // Two digits at least, and the four of tenths and tolerance class.
                found.extend([format!("{digits:0>2}"), format!("{digits:0>2}02")]);
            }
            found.extend([digits, text]);
        }
    }
    if volts.fract() == 0.0 {
        found.push(format!("{volts:02.0}"));
        found.push(format!("{volts:.0}V"));
    }
    found.sort();
    found.dedup();
    found
}

/// How many letters and digits of its own a pattern without a voltage code has, where it fits a reduced name; `None` where
/// it does not.
pub(super) fn fit(pattern: &str, name: &str) -> Option<usize> {
    let pattern = compile(0, pattern);
    let fits = |start: usize| {
        let rest: Vec<char> = name.get(start..).unwrap_or("").chars().collect();
        begins(&pattern, &rest) && walk(&pattern, &rest, &[]).is_some()
    };
    starts(name).any(fits).then_some(pattern.literal)
}

fn codes_of(family: &Family) -> Vec<(String, Code)> {
    let mut codes: Vec<(String, Code)> =
        family.codes.iter().map(|(text, volts)| (text.to_ascii_uppercase(), Code::Volts(*volts))).collect();
    let rounded = matches!(family.kind, FamilyKind::Reference | FamilyKind::Shunt);
    for volts in &family.voltages {
        for text in spellings(*volts, rounded) {
            if !codes.iter().any(|(known, _)| *known == text) {
                codes.push((text, Code::Volts(*volts)));
            }
        }
    }
    codes.extend(family.adjust_codes.iter().map(|text| (text.clone(), Code::Adjustable)));
    codes.push(("ADJ".to_owned(), Code::Adjustable));
    codes.sort_by(|one, other| other.0.len().cmp(&one.0.len()).then(one.0.cmp(&other.0)));
    codes
}

impl<'a> Matcher<'a> {
    /// Prepares the patterns of all families.
    pub(super) fn new(families: &'a [Family]) -> Self {
        let patterns = families
            .iter()
            .enumerate()
            .flat_map(|(index, family)| family.names.iter().map(move |name| compile(index, name)));
        Self {
            patterns: patterns.collect(),
            families,
            codes: vec![OnceCell::new(); families.len()],
            known: RefCell::default(),
        }
    }

    fn codes(&self, family: usize) -> &[(String, Code)] {
        let (Some(kept), Some(family)) = (self.codes.get(family), self.families.get(family)) else { return &[] };
        kept.get_or_init(|| codes_of(family))
    }

    /// The families that a reduced name fits: those with a voltage code first, then by how telling the pattern is, then
    /// in order of the families.
    pub(super) fn hits(&self, name: &str) -> Vec<Hit> {
        if let Some(known) = self.known.borrow().get(name) {
            return known.clone();
        }
        let found = self.find(name);
        self.known.borrow_mut().insert(name.to_owned(), found.clone());
        found
    }

    fn find(&self, name: &str) -> Vec<Hit> {
        let mut found: Vec<Hit> = Vec::new();
        for start in starts(name) {
            let rest: Vec<char> = name.get(start..).unwrap_or("").chars().collect();
            for pattern in &self.patterns {
                // Most patterns fall at their first letters; only then are the voltages of the family spelled out.
                if !begins(pattern, &rest) {
                    continue;
                }
                let coded = pattern.tokens.contains(&Token::Code);
                let codes = if coded { self.codes(pattern.family) } else { &[] };
                let Some((base, code)) = walk(pattern, &rest, codes) else { continue };
                let hit = Hit { family: pattern.family, literal: pattern.literal, base: start + base, code };
                match found.iter_mut().find(|other| other.family == hit.family) {
                    Some(other) if rank(other) < rank(&hit) => *other = hit,
                    Some(_) => {}
                    None => found.push(hit),
                }
            }
            if !found.is_empty() {
                break;
            }
        }
        found.sort_by(|one, other| rank(other).cmp(&rank(one)).then(one.family.cmp(&other.family)));
        found
    }
}

/// How telling a hit is: a pattern with a voltage code first, then the one with most letters and digits of its own.
pub(super) fn rank(hit: &Hit) -> (bool, usize) {
    (hit.code.is_some(), hit.literal)
}

/// Whether a name has the letters and digits before the first separator or wildcard of a pattern.
fn begins(pattern: &Pattern, name: &[char]) -> bool {
    let letters =
        pattern.tokens.iter().map_while(|token| if let Token::Literal(each) = token { Some(each) } else { None });
    letters.zip(name.iter().map(Some).chain(std::iter::repeat(None))).all(|(wanted, found)| found == Some(wanted))
}

/// A place in the name that was reached, with the code that was passed.
type Reached = (usize, Option<Code>);

/// Walks a name along a pattern. Gives where the literal beginning ends, in bytes, and the code.
fn walk(pattern: &Pattern, name: &[char], codes: &[(String, Code)]) -> Option<(usize, Option<Code>)> {
    let mut reached: Vec<Reached> = vec![(0, None)];
    let mut base = 0;
    for (index, token) in pattern.tokens.iter().enumerate() {
        reached = match token {
            Token::Literal(each) => step(&reached, name, |found| found == *each),
            Token::One => step(&reached, name, |_| true),
            Token::Separator => {
                let beside = |at: Option<usize>| {
                    let token = at.and_then(|at| pattern.tokens.get(at));
                    matches!(token, Some(Token::Any | Token::Code))
                };
                let mut next = step(&reached, name, is_separator);
                if !beside(index.checked_sub(1)) && !beside(Some(index + 1)) {
                    next.extend(&reached);
                }
                next
            }
            Token::Any => {
                let first = reached.iter().map(|(at, _)| *at).min()?;
                let code = reached.iter().find_map(|(_, code)| *code);
                (first..=name.len()).map(|at| (at, code)).collect()
            }
            Token::Code => {
                let before = index.checked_sub(1).and_then(|before| pattern.tokens.get(before));
                pass_code(&reached, name, codes, !matches!(before, Some(Token::Literal(_) | Token::One)))
            }
        };
        if reached.is_empty() {
            return None;
        }
        if index + 1 == pattern.beginning {
            base = reached.iter().map(|(at, _)| *at).max().unwrap_or(0);
        }
    }
    // What follows the name behind a separator (`/NOPB`, a package, a remark) is no part of it.
    let ends = |at: usize| {
        name.get(at).is_none_or(|each| is_separator(*each) || matches!(each, '(' | ';' | '+' | '#' | '@'))
    };
    let (_, code) = reached.into_iter().find(|(at, _)| ends(*at))?;
    let bytes = name.iter().take(base).map(|each| each.len_utf8()).sum();
    Some((bytes, code))
}

fn step(reached: &[Reached], name: &[char], fits: impl Fn(char) -> bool) -> Vec<Reached> {
    let next = |(at, code): &Reached| name.get(*at).filter(|each| fits(**each)).map(|_| (at + 1, *code));
    reached.iter().filter_map(next).collect()
}

/// Passes a voltage code with the separators around it. Its digits must not be part of a longer number, and a single
/// digit amid letters is no voltage. `loose`: what stands before the code is not fixed by the pattern.
fn pass_code(reached: &[Reached], name: &[char], codes: &[(String, Code)], loose: bool) -> Vec<Reached> {
    let digit = |at: usize| name.get(at).is_some_and(char::is_ascii_digit);
    let mut next = Vec::new();
    for (start, _) in reached {
        let separators = name.iter().skip(*start).take_while(|each| is_separator(**each)).count();
        let at = start + separators;
        let before = at.checked_sub(1).and_then(|before| name.get(before)).copied().unwrap_or(' ');
        // Digits there go on the number before them; letters (`STA` for adjustable) do not.
        let inside = loose && separators == 0 && (before.is_ascii_digit() || before == '.');
        // A point that was taken for a separator must not cut a number.
        if loose && before == '.' && at >= 2 && digit(at - 2) {
            continue;
        }
        let detached = is_separator(before);
        for (text, code) in codes {
            let length = text.chars().count();
            let fits = name.get(at..at + length).is_some_and(|part| part.iter().copied().eq(text.chars()));
            let cut = name.get(at + length).is_some_and(|each| *each == '.') && digit(at + length + 1);
            let alone = length > 1 || !loose || detached;
            let goes_on = inside && text.starts_with(|each: char| each.is_ascii_digit());
            if fits && alone && !goes_on && !digit(at + length) && !cut {
                next.push((at + length, Some(*code)));
                break;
            }
        }
    }
    next
}

/// Where a name may begin: at the start, then behind a maker's name or another word.
fn starts(name: &str) -> impl Iterator<Item = usize> + '_ {
    std::iter::once(0).chain(name.match_indices([' ', '(', ';', ':']).map(|(at, _)| at + 1)).take(4)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn codes(voltages: &[f64]) -> Vec<(String, Code)> {
        let mut codes: Vec<(String, Code)> = voltages
            .iter()
            .flat_map(|volts| spellings(*volts, false).into_iter().map(|text| (text, Code::Volts(*volts))))
            .collect();
        codes.push(("ADJ".to_owned(), Code::Adjustable));
        codes.sort_by(|one, other| other.0.len().cmp(&one.0.len()).then(one.0.cmp(&other.0)));
        codes
    }

    fn fits(pattern: &str, name: &str) -> Option<(usize, Option<Code>)> {
        let name: Vec<char> = reduced(name).chars().collect();
        walk(&compile(0, pattern), &name, &codes(&[1.8, 2.5, 3.3, 5.0, 12.0]))
    }

    #[test]
    fn patterns_cut_the_voltage_and_keep_the_number() {
        assert_eq!(fits("LM1117*{V}*", "LM1117-3.3"), Some((6, Some(Code::Volts(3.3)))));
        assert_eq!(fits("LM1117*{V}*", "lm1117mpx-33/NOPB"), Some((6, Some(Code::Volts(3.3)))));
        assert_eq!(fits("LM1117*{V}*", "LM1117T-ADJ"), Some((6, Some(Code::Adjustable))));
        assert_eq!(fits("LM1117", "LM1117 SOT223"), Some((6, None)));
        assert_eq!(fits("TLV702{V}*", "TLV70233_SOT23-5"), Some((6, Some(Code::Volts(3.3)))));
        assert_eq!(fits("LM317*", "LM337T"), None);
        assert_eq!(fits("78{V}*", "7805CT"), Some((2, Some(Code::Volts(5.0)))));
        assert_eq!(fits("L78{V}*", "L78L05"), None);
        assert_eq!(fits("L78{V}*", "L7812CV"), Some((3, Some(Code::Volts(12.0)))));
        assert_eq!(fits("78{V}*", "78233"), None);
        assert_eq!(fits("LM1117*{V}*", "LM1117ADJ"), Some((6, Some(Code::Adjustable))));
        assert_eq!(fits("TLV11*{V}*", "TLV1133"), None);
    }
}
