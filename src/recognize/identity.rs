//! Which part a device is: its texts in order of trust against the families, and what they disagree on.

use crate::circuit::Device;
use crate::knowledge::Knowledge;
use crate::quantity::Grade;

use super::family_match::{Hit, Matcher, rank, reduced};
use super::model::Identity;

/// Field names that hold a maker's part number. Order numbers of distributors name no part.
pub(super) const NUMBER_FIELDS: &[&str] = &[
    "MPN",
    "MFPN",
    "MFR_PN",
    "MFR PN",
    "MFG_PN",
    "MANUFACTURER_PART_NUMBER",
    "MANUFACTURER PART NUMBER",
    "PART NUMBER",
    "PARTNUMBER",
    "PART_NUMBER",
    "MANF#",
    "MANUFACTURER_PN",
    "MFR PART NUMBER",
    "MP",
    "PN",
    "MANUFACTURER PN",
    "MFGPN",
    "PART",
];

/// Where a name stands.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Place {
    Value,
    Number,
    Symbol,
    Board,
}

/// What identification found, before it is known whether the device is a regulator.
#[derive(Debug, Clone)]
pub(super) struct Known {
    pub(super) identity: Identity,
    /// The hit of the best family in `name`, where there is one.
    pub(super) hit: Option<Hit>,
    /// Where the name stands.
    pub(super) place: Place,
    /// Whether value and symbol name the same part, so that the symbol's text speaks of this very part.
    pub(super) symbol_agrees: bool,
    /// Whether the value names a part (rather than being free text such as `LDO`).
    pub(super) value_names_part: bool,
}

/// What names are matched against.
#[derive(Debug, Clone, Copy)]
struct Sources<'a> {
    matcher: &'a Matcher<'a>,
    knowledge: &'a Knowledge,
    /// What the fields say of the maker, lower case.
    maker: &'a str,
}

/// Whether a text looks like a part number: letters, then digits, in one word.
pub(super) fn names_part(text: &str) -> bool {
    let text = reduced(text);
    let word = text.split(' ').next().unwrap_or("");
    let letters = word.chars().take_while(char::is_ascii_alphabetic).count();
    let digits = word.chars().skip(letters).skip_while(|each| *each == '-').take_while(char::is_ascii_digit).count();
    let seventy = letters == 0 && (word.starts_with("78") || word.starts_with("79")) && word.len() >= 4;
    // `V3.3` and `LDO3V3` are no parts; `78L05` is one.
    seventy || (1..=5).contains(&letters) && digits >= 2 && !word.starts_with("LDO") && !word.starts_with("REG")
}

/// The beginning of a part number that tells parts apart: letters and the first three digits.
fn stem(text: &str) -> String {
    let mut digits = 0;
    reduced(text)
        .chars()
        .filter(|each| *each != '-')
        .take_while(|each| {
            digits += usize::from(each.is_ascii_digit());
            each.is_ascii_alphanumeric() && digits <= 4
        })
        .collect()
}

/// Whether two texts name the same part, as far as names tell.
pub(super) fn same_part(one: &str, other: &str) -> bool {
    let (one, other) = (stem(one), stem(other));
    if one.is_empty() || other.is_empty() {
        return false;
    }
    let shorter = one.len().min(other.len());
    let shared = one.chars().zip(other.chars()).take_while(|(left, right)| left == right).count();
    shared == shorter && shorter >= 4 || shared >= 6
}

/// Identifies a device. `declared` is the family that the board file names for it.
pub(super) fn identify(
    device: &Device,
    declared: Option<&str>,
    knowledge: &Knowledge,
    matcher: &Matcher<'_>,
) -> Known {
    let maker = maker(device);
    let sources = Sources { matcher, knowledge, maker: &maker };
    let value = device.value.trim();
    let symbol = device.symbol();
    let symbol_agrees = value.is_empty() || same_part(value, symbol) || reduced(value) == reduced(symbol);
    let value_names_part = names_part(value);
    let mut known = Known {
        identity: Identity {
            families: Vec::new(),
            name: if value.is_empty() { symbol.to_owned() } else { value.to_owned() },
            told_by: if value.is_empty() { "symbol".to_owned() } else { "value".to_owned() },
            grade: Grade::Drawn,
            remarks: Vec::new(),
        },
        hit: None,
        place: if value.is_empty() { Place::Symbol } else { Place::Value },
        symbol_agrees,
        value_names_part,
    };
    if let Some(name) = declared
        && let Some(family) = knowledge.families.iter().position(|family| family.name == name)
    {
        known.identity.families = vec![family];
        known.identity.told_by = "board file".to_owned();
        known.identity.grade = Grade::Declared;
        known.place = Place::Board;
        return known;
    }
    if take(&mut known, value, "value", Place::Value, Grade::Drawn, sources) {
        note_disagreement(&mut known, symbol, matcher);
        return known;
    }
    for field in &device.fields {
        let name = field.name.trim();
        if NUMBER_FIELDS.iter().any(|each| each.eq_ignore_ascii_case(name)) && !field.value.trim().is_empty() {
            let told_by = format!("{name} field");
            if take(&mut known, field.value.trim(), &told_by, Place::Number, Grade::Drawn, sources) {
                return known;
            }
        }
    }
    by_symbol(&mut known, value, symbol, sources);
    known
}

/// Takes the families that a text fits; `false` where it fits none.
fn take(known: &mut Known, text: &str, told_by: &str, place: Place, grade: Grade, sources: Sources<'_>) -> bool {
    let Sources { matcher, knowledge, maker } = sources;
    let hits = matcher.hits(&reduced(text));
    let Some(best) = hits.first() else { return false };
    known.identity.families = families(&hits, maker, knowledge);
    let Some(first) = known.identity.families.first().copied() else { return false };
    text.clone_into(&mut known.identity.name);
    told_by.clone_into(&mut known.identity.told_by);
    known.identity.grade = grade;
    known.hit = Some(hits.iter().find(|hit| hit.family == first).copied().unwrap_or(*best));
    known.place = place;
    true
}

/// The families that are meant, best first. Makers sell versions of their own under a common name: such a version is
/// taken only where a field names its maker, and then before the others.
pub(super) fn families(hits: &[Hit], maker: &str, knowledge: &Knowledge) -> Vec<usize> {
    let of_maker = |index: usize| {
        let words = knowledge.families.get(index).map_or(&[][..], |family| family.maker_words.as_slice());
        !maker.is_empty() && words.iter().any(|word| maker.contains(word.as_str()))
    };
    let is_version = |index: usize| knowledge.families.get(index).is_some_and(|family| family.version_of.is_some());
    let Some(best) = hits.first() else { return Vec::new() };
    // A more telling pattern is meant alone: TL431B is no TL431 of the wide grade, LM1117 no 1117 of an unknown maker.
    let as_telling = |hit: &&Hit| rank(hit) == rank(best);
    let mut found: Vec<usize> = hits.iter().filter(as_telling).map(|hit| hit.family).collect();
    let named: Vec<&str> =
        found.iter().filter_map(|index| knowledge.families.get(*index)).map(|family| family.name.as_str()).collect();
    let versions: Vec<usize> = (0..knowledge.families.len())
        .filter(|index| {
            let parent = knowledge.families.get(*index).and_then(|family| family.version_of.as_deref());
            parent.is_some_and(|parent| named.contains(&parent))
        })
        .filter(|index| !found.contains(index))
        .collect();
    found.extend(versions);
    found.retain(|index| !is_version(*index) || of_maker(*index));
    // A stable sort keeps the most telling pattern first among the rest.
    found.sort_by_key(|index| !of_maker(*index));
    found
}

/// The families of a name that nothing tells apart: those that are meant without a maker, and those of one maker. Each
/// with the maker that must be named for it.
pub(super) fn rivals(hits: &[Hit], knowledge: &Knowledge) -> Vec<(String, Vec<usize>)> {
    let family = |index: &usize| knowledge.families.get(*index);
    let mut groups: Vec<(String, Vec<usize>)> = vec![(String::new(), families(hits, "", knowledge))];
    let named = hits.iter().filter_map(|hit| family(&hit.family)).map(|family| family.name.as_str());
    let named: Vec<&str> = named.collect();
    let versions = knowledge
        .families
        .iter()
        .filter(|family| family.version_of.as_deref().is_some_and(|parent| named.contains(&parent)));
    for word in versions.flat_map(|version| &version.maker_words) {
        let of_maker = |index: &usize| {
            family(index).is_some_and(|family| family.maker_words.iter().any(|own| word.contains(own.as_str())))
        };
        groups.push((word.clone(), families(hits, word, knowledge).into_iter().filter(of_maker).collect()));
    }
    for (_, group) in &mut groups {
        group.sort_unstable();
    }
    groups.retain(|(_, group)| group.len() > 1);
    groups
}

/// What the fields say of the maker, or nothing.
pub(super) fn maker_as_written(device: &Device) -> &str {
    const FIELDS: &[&str] =
        &["MANUFACTURER", "MFR", "MFG", "MAKER", "MANUFACTURER_NAME", "MANUFACTURER NAME", "VENDOR", "MF"];
    FIELDS.iter().find_map(|name| device.field(name)).unwrap_or("")
}

/// The same, lower case.
fn maker(device: &Device) -> String {
    maker_as_written(device).to_lowercase()
}

/// The value names one part and the symbol another: worth a remark, and the value wins.
fn note_disagreement(known: &mut Known, symbol: &str, matcher: &Matcher) {
    if known.symbol_agrees || !names_part(symbol) {
        return;
    }
    let drawn = matcher.hits(&reduced(symbol));
    if !drawn.iter().any(|hit| known.identity.families.contains(&hit.family)) {
        known.identity.remarks.push(format!("the value is {}, the symbol that of {symbol}", known.identity.name));
    }
}

/// No text but perhaps the symbol's names a known part.
fn by_symbol(known: &mut Known, value: &str, symbol: &str, sources: Sources<'_>) {
    let matcher = sources.matcher;
    // A value one repeated digit short of a known number is that part, misspelt.
    let misspelt = if known.value_names_part { matcher.misspelt(&reduced(value)) } else { Vec::new() };
    if let Some(best) = misspelt.first() {
        known.identity.families = families(&misspelt, sources.maker, sources.knowledge);
        known.identity.grade = Grade::Inferred;
        known.identity.remarks.push(format!("the value {value} is taken for a misspelling"));
        known.hit = Some(*best);
        return;
    }
    if known.symbol_agrees {
        take(known, symbol, "symbol", Place::Symbol, Grade::Described, sources);
        // The value may carry the voltage code that the symbol lacks.
        return;
    }
    if known.value_names_part {
        // Another part on this symbol: the symbol's family says nothing of its figures.
        if names_part(symbol) {
            known.identity.remarks.push(format!("the value is {value}, the symbol that of {symbol}"));
        }
        return;
    }
    if take(known, symbol, "symbol", Place::Symbol, Grade::Inferred, sources) && !value.is_empty() {
        known.identity.remarks.push(format!("known only by its symbol {symbol}; the value is {value}"));
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn part_numbers_are_told_from_free_text() {
        for text in
            ["LM1117-3.3", "AP2114H-3.3", "78L05", "L7805", "XC6206P332MR", "R-78E5.0-0.5", "uA7805", "MIC5504-3.3"]
        {
            assert!(names_part(text), "{text}");
        }
        for text in ["LDO", "3.3V", "5V REG", "497-18013-1-ND", "LDO3V3", "", "VOLTAGE REGULATOR"] {
            assert!(!names_part(text), "{text}");
        }
    }

    #[test]
    fn names_that_share_their_number_are_one_part() {
        assert!(same_part("LM1117-3.3", "LM1117-ADJ"));
        assert!(same_part("MCP1702", "MCP1702_SOT23"));
        assert!(same_part("TLV70233", "TLV70233_SOT23-5"));
        assert!(!same_part("LM1117", "LM7805_TO220"));
        assert!(!same_part("AP2114H-3.3", "AP2112K-3.3"));
    }
}
