//! Reading the value text of a resistor, capacitor or inductor.
//!
//! A text is cut into words; one is the value, others may state tolerance, rated voltage or technology, the rest is
//! passed over. What cannot be read as a value is no value: a placeholder or a free text must not become a figure.

mod coded;
mod extras;
mod words;

use coded::{Coded, Found};

/// What kind of component a text belongs to: it decides units and what a number without one means.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum ComponentKind {
    /// Ohms.
    Resistor,
    /// Farads.
    Capacitor,
    /// Farads; a number without a unit is in microfarads, as large capacitors are marked.
    PolarizedCapacitor,
    /// Henries.
    Inductor,
}

/// What a component's value text says.
#[derive(Debug, Clone, PartialEq)]
pub struct ComponentText {
    /// Ohms, farads or henries, not negative; the middle of a trimmer's range.
    pub amount: f64,
    /// It was read after a repair (`1OK`), on an assumption about its unit (a bare `0.1`), or from a bound (`>2200uF`).
    pub repaired: bool,
    /// Relative tolerance where the text states a symmetrical one (0.01 for 1 %), or half a trimmer's range.
    pub tolerance: Option<f64>,
    /// Rated voltage in volts.
    pub rating: Option<f64>,
    /// Dielectric or technology word as written (`X7R`, `ELKO`).
    pub technology: Option<String>,
}

/// Reads the value text of a component; `None` where it holds no value.
#[must_use]
pub fn read_component(text: &str, kind: ComponentKind) -> Option<ComponentText> {
    let words = words::words(text);
    let (at, found, repaired) = value(&words, kind)?;
    if found.amount <= 0.0 && kind != ComponentKind::Resistor {
        return None;
    }
    let mut read = ComponentText {
        amount: found.amount,
        repaired: repaired || text.contains(words::LOST),
        tolerance: found.tolerance,
        rating: found.rating,
        technology: None,
    };
    for (_, word) in words.iter().enumerate().filter(|(index, _)| *index != at) {
        if let Some(tolerance) = extras::tolerance(word) {
            read.tolerance = read.tolerance.or(Some(tolerance));
        } else if let Some(rating) = extras::rating(word) {
            read.rating = read.rating.or(Some(rating));
        } else if read.technology.is_none() && extras::is_technology(word) {
            read.technology = Some(word.clone());
        }
    }
    Some(read)
}

/// The word that is the value: the first that has a prefix or unit, else a first word that is a bare number or code,
/// else the first that reads after a repair.
fn value(words: &[String], kind: ComponentKind) -> Option<(usize, Found, bool)> {
    let coded = Coded::new(kind);
    let is_extra = |word: &str| extras::tolerance(word).is_some() || extras::rating(word).is_some();
    let candidates = || words.iter().enumerate().filter(|(_, word)| !is_extra(word));
    let with_unit = candidates().find_map(|(at, word)| Some((at, coded.with_unit(word)?)));
    if let Some((at, found)) = with_unit {
        return Some((at, found, found.assumed));
    }
    let (at, first) = candidates().next()?;
    if at == 0
        && let Some(found) = coded.bare(first)
    {
        return Some((at, found, found.assumed));
    }
    candidates().find_map(|(at, word)| {
        let repaired = words::with_zeros(word)?;
        let found = coded.with_unit(&repaired).or_else(|| (at == 0).then(|| coded.bare(&repaired))?)?;
        Some((at, found, true))
    })
}

#[cfg(test)]
mod tests;
