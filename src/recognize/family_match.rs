//! Matching part names against the name patterns of families.
//!
//! Patterns are written for people (`LM1117{V}*`); here each becomes one regular expression over the reduced name, and
//! all of them one set, so that a name is scanned once however many families are known.

use regex::{Regex, RegexSet};

use crate::knowledge::Family;

/// A family whose pattern fits a name.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) struct Hit {
    /// Index of the family.
    pub(super) family: usize,
    /// How many characters of the pattern are letters and digits of its own: how telling the match is.
    pub(super) literal: usize,
    /// How many bytes of the reduced name are the family's own number.
    pub(super) base: usize,
    /// Byte in the reduced name at which the match begins.
    pub(super) start: usize,
}

/// The compiled patterns of all families.
pub(super) struct Matcher {
    set: RegexSet,
    patterns: Vec<Pattern>,
}

struct Pattern {
    family: usize,
    literal: usize,
    regex: Regex,
    /// The literal beginning, with runs of one character cut to one.
    squeezed: String,
}

/// A name as it is compared: upper case, underscores as dashes, the micro sign as `U`.
pub(super) fn reduced(name: &str) -> String {
    let mut text = String::with_capacity(name.len());
    for each in name.trim().chars().flat_map(char::to_uppercase) {
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

/// The expression of a pattern, how many literal characters it has, and its literal beginning.
fn expression(pattern: &str) -> (String, usize, String) {
    let mut text = String::from("^(?P<base>");
    let mut literal = 0;
    let mut beginning = String::new();
    let mut open = true;
    let mut rest = pattern;
    while let Some(each) = rest.chars().next() {
        let close = |open: &mut bool, text: &mut String| {
            if std::mem::replace(open, false) {
                text.push(')');
            }
        };
        if let Some(behind) = rest.strip_prefix("{V}") {
            close(&mut open, &mut text);
            text.push_str(r"[-/ ]?(?:\d{1,2}[.VP]\d{1,3}V?|\d-\d|\d{1,4}V?)?");
            rest = behind;
            continue;
        }
        match each {
            '*' => {
                close(&mut open, &mut text);
                text.push_str(".*");
            }
            '?' => text.push('.'),
            _ => {
                let upper = reduced(&each.to_string());
                let upper = if each == ' ' { "-".to_owned() } else { upper };
                // A dash in the pattern counts little: makers and drawers leave it out.
                if upper == "-" {
                    text.push_str("[- ]?");
                } else {
                    text.push_str(&regex::escape(&upper));
                    literal += 1;
                    if open {
                        beginning.push_str(&upper);
                    }
                }
            }
        }
        rest = rest.get(each.len_utf8()..).unwrap_or("");
    }
    if open {
        text.push(')');
    }
    // What follows the name behind a separator (`/NOPB`, a package, a remark) is no part of it.
    text.push_str(r"(?:$|[-/(;+#@ ])");
    (text, literal, beginning)
}

fn squeezed(text: &str) -> String {
    let mut last = None;
    text.chars().filter(|each| last.replace(*each) != Some(*each)).collect()
}

impl Matcher {
    /// Compiles the patterns of all families; a pattern that cannot be compiled is passed over.
    pub(super) fn new(families: &[Family]) -> Self {
        let mut texts = Vec::new();
        let mut patterns = Vec::new();
        for (family, each) in families.iter().enumerate() {
            for name in &each.names {
                let (text, literal, beginning) = expression(name);
                if let Ok(regex) = Regex::new(&text) {
                    patterns.push(Pattern { family, literal, regex, squeezed: squeezed(&beginning) });
                    texts.push(text);
                }
            }
        }
        // Each pattern compiled alone, so the set fails only by its size; then nothing is matched.
        let set = RegexSet::new(&texts).unwrap_or_else(|_| RegexSet::empty());
        Self { set, patterns }
    }

    /// The families that a reduced name fits, the most telling pattern first, then in order of the families.
    pub(super) fn hits(&self, name: &str) -> Vec<Hit> {
        let mut found: Vec<Hit> = Vec::new();
        for start in starts(name) {
            let rest = name.get(start..).unwrap_or("");
            for index in &self.set.matches(rest) {
                let Some(pattern) = self.patterns.get(index) else { continue };
                let base = pattern.regex.captures(rest).and_then(|hit| hit.name("base")).map_or(0, |base| base.end());
                let hit = Hit { family: pattern.family, literal: pattern.literal, base, start };
                match found.iter_mut().find(|other| other.family == hit.family) {
                    Some(other) if other.literal < hit.literal => *other = hit,
                    Some(_) => {}
                    None => found.push(hit),
                }
            }
            if !found.is_empty() {
                break;
            }
        }
        found.sort_by(|one, other| other.literal.cmp(&one.literal).then(one.family.cmp(&other.family)));
        found
    }

    /// Families whose number the name spells with a doubled or a missing repeated character (`AMS117` for `AMS1117`).
    pub(super) fn misspelt(&self, name: &str) -> Vec<Hit> {
        let name = squeezed(name);
        let mut found: Vec<Hit> = Vec::new();
        for pattern in &self.patterns {
            let fits = pattern.squeezed.len() >= 5
                && name.strip_prefix(&pattern.squeezed).is_some_and(|rest| !rest.starts_with(|each: char| each.is_ascii_digit()));
            if fits && !found.iter().any(|hit| hit.family == pattern.family) {
                found.push(Hit { family: pattern.family, literal: pattern.literal, base: 0, start: 0 });
            }
        }
        found.sort_by(|one, other| other.literal.cmp(&one.literal).then(one.family.cmp(&other.family)));
        found
    }
}

/// Where a name may begin: at the start, then behind a maker's name or another word.
fn starts(name: &str) -> impl Iterator<Item = usize> + '_ {
    std::iter::once(0).chain(name.match_indices([' ', '(', ';', ':']).map(|(at, _)| at + 1)).take(4)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn fits(pattern: &str, name: &str) -> Option<usize> {
        let (text, _, _) = expression(pattern);
        let regex = Regex::new(&text).ok()?;
        regex.captures(&reduced(name)).and_then(|hit| hit.name("base")).map(|base| base.end())
    }

    #[test]
    fn patterns_cut_the_voltage_and_keep_the_number() {
        assert_eq!(fits("LM1117{V}*", "LM1117-3.3"), Some(6));
        assert_eq!(fits("LM1117{V}*", "lm1117mpx-33/NOPB"), Some(6));
        assert_eq!(fits("LM1117", "LM1117 SOT223"), Some(6));
        assert_eq!(fits("TLV702{V}*", "TLV70233_SOT23-5"), Some(6));
        assert_eq!(fits("LM1117{V}", "LM11173"), Some(6));
        assert_eq!(fits("LM317*", "LM337T"), None);
        assert_eq!(fits("78{V}", "7805"), Some(2));
    }

    #[test]
    fn a_missing_repeated_digit_is_told_as_a_misspelling() {
        assert_eq!(squeezed("AMS1117"), squeezed("AMS117"));
        assert_ne!(squeezed("LM317"), squeezed("LM337"));
    }
}
