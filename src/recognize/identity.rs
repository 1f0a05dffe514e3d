//! Which part a device is: its texts in order of trust against the families, and what they disagree on.

use crate::circuit::Device;
use crate::knowledge::Knowledge;
use crate::quantity::Grade;

use super::family_match::{Hit, Matcher, reduced};
use super::makers;
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

/// Whether a field of this name holds a maker's part number.
#[must_use]
pub fn holds_part_number(field: &str) -> bool {
    NUMBER_FIELDS.iter().any(|known| known.eq_ignore_ascii_case(field.trim()))
}

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
#[derive(Clone, Copy)]
pub(super) struct Sources<'a> {
    pub(super) matcher: &'a Matcher<'a>,
    pub(super) knowledge: &'a Knowledge,
    /// Whether pins and text are those of a regulator or reference: only then a name may be taken for a similar one.
    pub(super) regulating: &'a dyn Fn() -> bool,
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
pub(super) fn identify(device: &Device, declared: Option<&str>, sources: Sources<'_>) -> Known {
    let maker = maker_as_written(device);
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
        && let Some(family) = sources.knowledge.families.iter().position(|family| family.name == name)
    {
        known.identity.families = vec![family];
        known.identity.told_by = "board file".to_owned();
        known.identity.grade = Grade::Declared;
        known.place = Place::Board;
        return known;
    }
    if take(&mut known, value, ("value", Place::Value, Grade::Drawn), maker, sources) {
        note_disagreement(&mut known, symbol, sources.matcher);
        return known;
    }
    for field in &device.fields {
        let name = field.name.trim();
        if NUMBER_FIELDS.iter().any(|each| each.eq_ignore_ascii_case(name)) && !field.value.trim().is_empty() {
            let told_by = format!("{name} field");
            if take(&mut known, field.value.trim(), (&told_by, Place::Number, Grade::Drawn), maker, sources) {
                return known;
            }
        }
    }
    if !by_similar_name(&mut known, device, maker, sources) {
        by_symbol(&mut known, value, symbol, maker, sources);
    }
    known
}

/// Takes the families that a text fits; `false` where it fits none.
fn take(
    known: &mut Known,
    text: &str,
    (told_by, place, grade): (&str, Place, Grade),
    maker: &str,
    sources: Sources<'_>,
) -> bool {
    let hits = sources.matcher.hits(&reduced(text));
    known.identity.grade = grade;
    if !take_hits(known, &hits, maker, sources.knowledge) {
        known.identity.grade = Grade::Drawn;
        return false;
    }
    text.clone_into(&mut known.identity.name);
    told_by.clone_into(&mut known.identity.told_by);
    known.place = place;
    true
}

/// Takes the families of hits. Another maker than theirs makes them a guess.
fn take_hits(known: &mut Known, hits: &[Hit], maker: &str, knowledge: &Knowledge) -> bool {
    let meant = makers::meant(hits, &maker.to_lowercase(), knowledge);
    let Some(first) = meant.families.first().copied() else { return false };
    known.hit = hits.iter().find(|hit| hit.family == first).or(hits.first()).copied();
    known.identity.families = meant.families;
    if meant.foreign
        && let Some(family) = knowledge.families.get(first)
    {
        known.identity.grade = known.identity.grade.weaker(Grade::Inferred);
        let remark = format!("made by {maker}, whose data sheet is not known; judged as that of {}", family.maker);
        known.identity.remarks.push(remark);
    }
    true
}

/// No text names a known part, but the value may be one of a maker that is not known, or a known part misspelt.
fn by_similar_name(known: &mut Known, device: &Device, maker: &str, sources: Sources<'_>) -> bool {
    let value = device.value.trim();
    if !known.value_names_part || !(sources.regulating)() {
        return false;
    }
    let name = reduced(value);
    let anyones = sources.matcher.without_maker(&name);
    let (hits, remark) = if anyones.is_empty() {
        // A library that draws and describes such a part knows how it is written.
        let described = known.symbol_agrees && !device.description.is_empty() && !device.description_of_other;
        let misspelt = sources.matcher.misspelt(&name, !described);
        (misspelt.hits, format!("the value {value} is taken for a misspelling of {}", misspelt.meant))
    } else {
        (anyones, format!("the maker of {value} is not known; the figures of all known makers are guesses"))
    };
    let before = known.identity.remarks.len();
    if !take_hits(known, &hits, maker, sources.knowledge) {
        return false;
    }
    known.identity.remarks.truncate(before);
    known.identity.grade = Grade::Inferred;
    known.identity.remarks.push(remark);
    true
}

/// What the fields say of the maker. Shops that stand in such a field make nothing.
pub(super) fn maker_as_written(device: &Device) -> &str {
    const SHOPS: &[&str] =
        &["mouser", "digikey", "digi-key", "lcsc", "farnell", "newark", "arrow", "tme", "reichelt", "rs components"];
    const FIELDS: &[&str] =
        &["MANUFACTURER", "MFR", "MFG", "MAKER", "MANUFACTURER_NAME", "MANUFACTURER NAME", "VENDOR", "MF"];
    let shop = |text: &&str| SHOPS.iter().any(|shop| text.to_lowercase().contains(shop));
    FIELDS.iter().filter_map(|name| device.field(name)).find(|text| !shop(text)).unwrap_or("").trim()
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
fn by_symbol(known: &mut Known, value: &str, symbol: &str, maker: &str, sources: Sources<'_>) {
    if known.symbol_agrees {
        take(known, symbol, ("symbol", Place::Symbol, Grade::Described), maker, sources);
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
    if take(known, symbol, ("symbol", Place::Symbol, Grade::Inferred), maker, sources) && !value.is_empty() {
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
