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

/// `symbol` in upper case, `text` in lower case. A pair of both polarities has none.
pub(super) fn polarity(symbol: &str, text: &str) -> Option<Polarity> {
    one_of(symbol).unwrap_or_else(|| one_of(&text.to_uppercase()).unwrap_or(None))
}

/// The outer `None`: nothing is said.
fn one_of(text: &str) -> Option<Option<Polarity>> {
    let says = |words: &[&str]| words.iter().any(|word| text.contains(word));
    match (says(N), says(P)) {
        (true, false) => Some(Some(Polarity::N)),
        (false, true) => Some(Some(Polarity::P)),
        (true, true) => Some(None),
        (false, false) => None,
    }
}
