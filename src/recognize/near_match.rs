//! Names that no family fits, but nearly: those of a maker that is not known, and misspelt ones.

use super::family_match::{Hit, Matcher};

/// Shortest literal beginning of a pattern for which a name may be taken that is misspelt.
const SHORTEST: usize = 5;
/// Letters of a maker before the number of a part.
const MAKER_LETTERS: std::ops::RangeInclusive<usize> = 1..=4;

/// What a misspelt name means.
#[derive(Debug, Clone, Default, PartialEq)]
pub(super) struct Misspelt {
    pub(super) hits: Vec<Hit>,
    /// The name as it should be.
    pub(super) meant: String,
}

impl Matcher<'_> {
    /// The families that a reduced name fits without the letters of a maker: `CJ78L05` is somebody's 78L05.
    pub(super) fn without_maker(&self, name: &str) -> Vec<Hit> {
        let letters = name.chars().take_while(char::is_ascii_alphabetic).count();
        let rest = name.get(letters..).unwrap_or("");
        // Switching replacements of the 78 series carry their current in milliamperes: `K7805-500`.
        let rating = |part: &str| part.chars().take_while(char::is_ascii_digit).count() >= 3;
        let module = rest.starts_with("78") && rest.split('-').skip(1).any(rating);
        if !MAKER_LETTERS.contains(&letters) || !rest.starts_with(|each: char| each.is_ascii_digit()) || module {
            return Vec::new();
        }
        self.hits(rest).into_iter().map(|hit| Hit { base: hit.base + letters, ..hit }).collect()
    }

    /// The families whose number the reduced name has with a repeated character or a letter too many or too few, with two
    /// neighbours swapped, or with a letter for the digit that looks like it. Another digit is no misspelling: makers
    /// number sister parts so. Nothing where several numbers are as near; `any` allows more than repeated characters.
    pub(super) fn misspelt(&self, name: &str, any: bool) -> Misspelt {
        let mut found: Vec<(String, Vec<Hit>)> = Vec::new();
        let mut starts: Vec<&str> = self.patterns.iter().map(|pattern| pattern.start.as_str()).collect();
        starts.sort_unstable();
        starts.dedup();
        for start in starts.into_iter().filter(|start| start.len() >= SHORTEST) {
            for length in [start.len() - 1, start.len(), start.len() + 1] {
                let Some((begun, rest)) = name.split_at_checked(length) else { continue };
                // What follows the number must not be part of it.
                let digit = |each: char| each.is_ascii_digit();
                if rest.starts_with(digit) && start.ends_with(digit) && begun.ends_with(digit) {
                    continue;
                }
                let near = is_repeated(begun, start) || any && is_near(begun, start);
                if !near || found.iter().any(|(known, _)| known == start) {
                    continue;
                }
                let hits = self.hits(&format!("{start}{rest}"));
                if !hits.is_empty() {
                    found.push((start.to_owned(), hits));
                }
            }
        }
        match found.as_slice() {
            [(meant, hits)] => Misspelt { hits: hits.clone(), meant: meant.clone() },
            _ => Misspelt::default(),
        }
    }
}

/// Whether one text is the other with one of two equal neighbours missing or doubled: `AMS117` for `AMS1117`.
fn is_repeated(one: &str, other: &str) -> bool {
    let squeezed = |text: &str| {
        let mut last = None;
        text.chars().filter(|each| last.replace(*each) != Some(*each)).collect::<String>()
    };
    one.len() != other.len() && squeezed(one) == squeezed(other)
}

/// Whether one edit makes one text the other, see [`Matcher::misspelt`].
fn is_near(one: &str, other: &str) -> bool {
    let (one, other) = (one.as_bytes(), other.as_bytes());
    let before = one.iter().zip(other).take_while(|(left, right)| left == right).count();
    let after = |left: &[u8], right: &[u8]| {
        left.iter().rev().zip(right.iter().rev()).take_while(|(left, right)| left == right).count()
    };
    let (shorter, longer) = (one.len().min(other.len()), one.len().max(other.len()));
    let behind = after(one, other).min(shorter - before.min(shorter));
    match longer - shorter {
        // The maker's letters tell parts apart, so nothing is added to or taken from the first two characters.
        1 => {
            let surplus = if one.len() > other.len() { one.get(before) } else { other.get(before) };
            before + behind >= shorter && before >= 2 && surplus.is_some_and(u8::is_ascii_alphabetic)
        }
        0 if before + behind + 2 == longer => {
            let pair = |text: &[u8]| (text.get(before).copied(), text.get(before + 1).copied());
            let ((first, second), (third, fourth)) = (pair(one), pair(other));
            first == fourth && second == third
        }
        0 if before + behind + 1 == longer => looks_alike(one.get(before), other.get(before)),
        _ => false,
    }
}

/// Whether two characters are taken for each other in reading.
fn looks_alike(one: Option<&u8>, other: Option<&u8>) -> bool {
    const PAIRS: &[(u8, u8)] = &[(b'0', b'O'), (b'1', b'I'), (b'1', b'L'), (b'5', b'S'), (b'8', b'B'), (b'2', b'Z')];
    let (Some(one), Some(other)) = (one, other) else { return false };
    PAIRS.iter().any(|(left, right)| (one, other) == (left, right) || (one, other) == (right, left))
}

#[cfg(test)]
mod tests {
    use super::super::family_match::reduced;
    use super::*;
    use crate::knowledge::Knowledge;

    fn meant(name: &str) -> String {
        let knowledge = Knowledge::built_in();
        Matcher::new(&knowledge.families).misspelt(&reduced(name), true).meant
    }

    #[test]
    fn one_edit_away_from_one_number_only_is_a_misspelling() {
        for (name, wanted) in [
            ("AMS117-3.3", "AMS1117"),
            ("AMS1171-3.3", "AMS1117"),
            ("AMS11117-3.3", "AMS1117"),
            ("LP2590-33", "LP2950"),
            ("LPS907MFX-3.3", "LP5907"),
            ("LP59O7MFX-3.3", "LP5907"),
            ("MCP17O0-3302E/TO", "MCP1700"),
        ] {
            assert_eq!(meant(name), wanted, "{name}");
        }
    }

    #[test]
    fn sister_parts_and_other_makers_are_no_misspellings() {
        for name in ["MIC5209-3.3", "LP2982", "XC6228", "TPS735", "LT3083", "MCP1801", "ADP3330", "LM2935", "BC547"] {
            assert_eq!(meant(name), "", "{name}");
        }
    }

    #[test]
    fn a_number_under_any_makers_letters_is_found() {
        let knowledge = Knowledge::built_in();
        let matcher = Matcher::new(&knowledge.families);
        for (name, group) in [("CJ78L05", "78Lxx"), ("XX1117-3.3", "1117"), ("CJ7812", "78xx"), ("HX79L05", "79Lxx")]
        {
            let hits = matcher.without_maker(&reduced(name));
            assert_eq!(hits.first().map(|hit| knowledge.families[hit.family].group.as_str()), Some(group), "{name}");
        }
        assert!(matcher.without_maker("K7805-500").is_empty() && matcher.without_maker("SN74LS00").is_empty());
    }
}
