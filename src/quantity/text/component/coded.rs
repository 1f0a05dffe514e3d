//! One word as a value: IEC 60062 codes (`4u7`, `R047`), numbers with unit, three-digit codes, bare numbers.

use super::super::number::digits;
use super::{ComponentKind, extras};

/// A word that was read as a value.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Found {
    pub(super) amount: f64,
    pub(super) tolerance: Option<f64>,
    pub(super) rating: Option<f64>,
    /// The unit was assumed, or the number is only a bound.
    pub(super) assumed: bool,
}

impl Found {
    fn new(amount: f64) -> Self {
        Self { amount, tolerance: None, rating: None, assumed: false }
    }
}

/// Reads words for one kind of component.
pub(super) struct Coded {
    kind: ComponentKind,
    multipliers: &'static [(&'static str, f64)],
    units: &'static [&'static str],
}

/// Case decides: `M` is mega for resistors; for capacitors `m` is milli and `M` alone says nothing.
const OHMS: &[(&str, f64)] = &[
    ("Meg", 1e6),
    ("MEG", 1e6),
    ("meg", 1e6),
    ("M", 1e6),
    ("k", 1e3),
    ("K", 1e3),
    ("G", 1e9),
    ("m", 1e-3),
    ("R", 1.0),
    ("r", 1.0),
    ("E", 1.0),
    ("Ω", 1.0),
];
const FARADS: &[(&str, f64)] = &[
    ("p", 1e-12),
    ("P", 1e-12),
    ("n", 1e-9),
    ("N", 1e-9),
    ("u", 1e-6),
    ("U", 1e-6),
    ("µ", 1e-6),
    ("m", 1e-3),
    ("F", 1.0),
];
const HENRIES: &[(&str, f64)] =
    &[("p", 1e-12), ("n", 1e-9), ("N", 1e-9), ("u", 1e-6), ("U", 1e-6), ("µ", 1e-6), ("m", 1e-3), ("H", 1.0)];

impl Coded {
    pub(super) fn new(kind: ComponentKind) -> Self {
        let (multipliers, units): (_, &'static [&'static str]) = match kind {
            ComponentKind::Resistor => (OHMS, &["Ohms", "ohms", "Ohm", "ohm", "OHM", "Ω", "R", "r", "E"]),
            ComponentKind::Capacitor | ComponentKind::PolarizedCapacitor => (FARADS, &["Farad", "farad", "F", "f"]),
            ComponentKind::Inductor => (HENRIES, &["Henry", "henry", "H", "h"]),
        };
        Self { kind, multipliers, units }
    }

    /// A word that has a prefix, a unit or a code's letter.
    pub(super) fn with_unit(&self, word: &str) -> Option<Found> {
        let bounded = word.trim_start_matches(['>', '<', '≥', '≤', '~', '≈']);
        let found = self.range(bounded).or_else(|| self.number(self.without_letter(bounded)))?;
        Some(Found { assumed: found.assumed || bounded.len() < word.len(), ..found })
    }

    /// A word that is digits alone, where the kind of component says what they count.
    pub(super) fn bare(&self, word: &str) -> Option<Found> {
        let capacitor = matches!(self.kind, ComponentKind::Capacitor | ComponentKind::PolarizedCapacitor);
        if capacitor && let Some(found) = three_digits(word) {
            return Some(found);
        }
        let (number, rest) = decimal(word)?;
        if !rest.is_empty() {
            return None;
        }
        let value: f64 = number.parse().ok()?;
        let assumed = |amount| Some(Found { assumed: true, ..Found::new(amount) });
        match self.kind {
            ComponentKind::Resistor => Some(Found::new(value)),
            ComponentKind::PolarizedCapacitor if value > 0.0 => assumed(value / 1e6),
            // Old sheets: microfarads below 1, picofarads from 10 up; between them nobody can tell.
            ComponentKind::Capacitor if value > 0.0 && value < 1.0 => assumed(value / 1e6),
            ComponentKind::Capacitor if value >= 10.0 && !number.contains('.') => assumed(value / 1e12),
            _ => None,
        }
    }

    /// `C0.3uF` is 0.3 µF and `B10k` a linear potentiometer of 10 kΩ: a letter that says what the part is.
    fn without_letter<'a>(&self, word: &'a str) -> &'a str {
        let letters: &[char] = match self.kind {
            ComponentKind::Resistor => &['A', 'B', 'C'],
            ComponentKind::Capacitor | ComponentKind::PolarizedCapacitor => &['C'],
            ComponentKind::Inductor => &['L'],
        };
        let without = word
            .strip_prefix(letters)
            .filter(|rest| rest.starts_with(|next: char| next.is_ascii_digit() || next == '.'));
        without.unwrap_or(word)
    }

    /// `12-22pF`, `5..30p`: a trimmer.
    fn range(&self, word: &str) -> Option<Found> {
        let (low, high) = word.split_once("..").or_else(|| word.split_once('-'))?;
        let high = self.number(high)?;
        let low = match decimal(low)? {
            // The first number takes the second one's unit: what that unit makes of its digits.
            (number, "") => number.parse::<f64>().ok()? * self.unit_of(word.get(low.len()..)?)?,
            _ => self.number(low)?.amount,
        };
        let middle = (low + high.amount) / 2.0;
        let fits = low > 0.0 && high.amount > low;
        fits.then(|| Found { tolerance: Some((high.amount - middle) / middle), ..Found::new(middle) })
    }

    fn unit_of(&self, word: &str) -> Option<f64> {
        let (_, rest) = decimal(word.trim_start_matches(['-', '.']))?;
        self.multipliers.iter().find(|(letter, _)| rest.starts_with(letter)).map(|(_, factor)| *factor)
    }

    fn number(&self, word: &str) -> Option<Found> {
        let (number, rest) = decimal(word).unwrap_or(("", word));
        let (letter, factor, behind) = self.multiplier(rest)?;
        let part = digits(behind);
        let written = match (number, part) {
            ("", "") => return None,
            // `600R` on an inductor is the impedance of a bead.
            (_, "") if letter == "R" && self.kind != ComponentKind::Resistor => return None,
            // `R1` is more often a name than a tenth of an ohm, as are `C1` and `L1`.
            ("", part) if part.len() < 2 => return None,
            (number, "") => number.to_owned(),
            (number, _) if number.contains('.') => return None,
            ("", part) => format!("0.{part}"),
            (number, part) => format!("{number}.{part}"),
        };
        let value: f64 = written.parse().ok()?;
        let amount = if factor < 1.0 { value / (1.0 / factor).round() } else { value * factor };
        let mut found = Found::new(amount);
        let behind = behind.get(part.len()..)?;
        if let Some(assumed) = self.odd_unit(letter, behind) {
            return Some(Found { amount: value * assumed, assumed: true, ..found });
        }
        // `47u16V`: a rated voltage hangs on.
        if !part.is_empty() && !number.is_empty() && behind.eq_ignore_ascii_case("v") {
            let amount: f64 = number.parse().ok()?;
            let amount = if factor < 1.0 { amount / (1.0 / factor).round() } else { amount * factor };
            return Some(Found { rating: part.parse().ok(), ..Found::new(amount) });
        }
        self.finish(&mut found, behind).then_some(found)
    }

    /// A prefix or unit letter at the start of a text, and what follows it. A unit without a prefix counts as one.
    fn multiplier<'a>(&self, text: &'a str) -> Option<(&'static str, f64, &'a str)> {
        if self.kind != ComponentKind::Resistor && text.starts_with('R') {
            // A code's `R` counts in the unit that parts of the kind are marked in: picofarads, microhenries.
            let marked = if self.kind == ComponentKind::Inductor { 1e-6 } else { 1e-12 };
            return Some(("R", marked, text.get(1..)?));
        }
        let long = self.units.iter().find(|unit| unit.len() > 2 && text.starts_with(**unit));
        if let Some(unit) = long {
            return Some((unit, 1.0, text.get(unit.len()..)?));
        }
        let (letter, factor) = self.multipliers.iter().find(|(letter, _)| text.starts_with(letter))?;
        Some((letter, *factor, text.get(letter.len()..)?))
    }

    /// What stands behind the number and its prefix: the unit, a tolerance letter, a rated voltage.
    fn finish(&self, found: &mut Found, behind: &str) -> bool {
        let unit = self.units.iter().find(|unit| behind.starts_with(**unit));
        let tail = unit.and_then(|unit| behind.get(unit.len()..)).unwrap_or(behind);
        for rest in [tail, behind] {
            if rest.is_empty() {
                return true;
            }
            if let Some(tolerance) = extras::letter_tolerance(rest, found.amount, self.kind) {
                found.tolerance = tolerance;
                return true;
            }
            if let Some(rating) = extras::rating(rest) {
                found.rating = Some(rating);
                return true;
            }
        }
        false
    }

    /// American `MFD` for microfarads, and codes with `R` on anything but a resistor: the factor of the number.
    fn odd_unit(&self, letter: &str, behind: &str) -> Option<f64> {
        let capacitor = matches!(self.kind, ComponentKind::Capacitor | ComponentKind::PolarizedCapacitor);
        match (letter, behind) {
            ("R", "") if capacitor => Some(1e-12),
            ("m", "fd" | "FD") if capacitor => Some(1e-6),
            _ => None,
        }
    }
}

/// A number with an optional point at the start of a word.
fn decimal(word: &str) -> Option<(&str, &str)> {
    let whole = digits(word);
    let rest = word.get(whole.len()..)?;
    let part = rest.strip_prefix('.').map_or("", digits);
    let length = if part.is_empty() { whole.len() } else { whole.len() + 1 + part.len() };
    (length > 0).then(|| word.split_at_checked(length))?
}

/// Significant figures of the E24 series, as codes are made of them.
const E24: &[u32] = &[10, 11, 12, 13, 15, 16, 18, 20, 22, 24, 27, 30, 33, 36, 39, 43, 47, 51, 56, 62, 68, 75, 82, 91];

/// `104` is 10 and four zeros in picofarads, `475` 4.7 µF, `229` 2.2 pF; a tolerance letter may follow. Codes that end
/// in 0 are left to be bare numbers: 220 on a sheet is 220 pF more often than 22, and nobody can tell what `100M` is.
fn three_digits(word: &str) -> Option<Found> {
    let code = digits(word);
    let (figures, power) = code.split_at_checked(2).filter(|(_, power)| power.len() == 1)?;
    let figures: u32 = figures.parse().ok().filter(|figures| E24.contains(figures))?;
    let picofarads = f64::from(figures)
        * match power.parse::<i32>().ok()? {
            0 => return None,
            power @ 1..=7 => 10_f64.powi(power),
            8 => 0.01,
            _ => 0.1,
        };
    let amount = picofarads / 1e12;
    let mut found = Found { assumed: true, ..Found::new(amount) };
    let rest = word.get(3..)?;
    if !rest.is_empty() {
        found.tolerance = extras::letter_tolerance(rest, amount, ComponentKind::Capacitor)?;
    }
    Some(found)
}
