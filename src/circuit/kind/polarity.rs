//! The polarity of a transistor by its symbol's name and text.

use super::super::model::Polarity;

const N: &[&str] = &[
    "NPN",
    "NMOS",
    "NFET",
    "NJFET",
    "N-CHANNEL",
    "N CHANNEL",
    "N-CH",
    "MOS_N",
    "MOSFET_N",
    "N-MOSFET",
    "N-JFET",
    "NIGBT",
    "N-MOS",
];
const P: &[&str] = &[
    "PNP",
    "PMOS",
    "PFET",
    "PJFET",
    "P-CHANNEL",
    "P CHANNEL",
    "P-CH",
    "MOS_P",
    "MOSFET_P",
    "P-MOSFET",
    "P-JFET",
    "P-MOS",
];

const BOTH: &[&str] =
    &["P/N-CH", "N/P-CH", "N AND P", "P AND N", "N+P", "P+N", "N/P CH", "P/N CH", "COMPLEMENTARY PAIR"];

/// What a symbol's name (in upper case), then its text, say; the inner `None` for a pair of both polarities, the outer
/// one where nothing is said.
pub(super) fn polarity(symbol: &str, text: &str) -> Option<Option<Polarity>> {
    one_of(symbol).or_else(|| one_of(&text.to_uppercase()))
}

fn one_of(text: &str) -> Option<Option<Polarity>> {
    let says = |words: &[&str]| words.iter().any(|word| text.contains(word));
    match (says(N), says(P)) {
        _ if says(BOTH) => Some(None),
        (true, false) => Some(Some(Polarity::N)),
        (false, true) => Some(Some(Polarity::P)),
        (true, true) => Some(None),
        (false, false) => None,
    }
}
