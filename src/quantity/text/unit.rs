//! Units and SI prefixes as engineers type them.

use super::super::dimension::Dimension;

/// A unit that was read: what one of it is in SI units, and how many bytes it took.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Unit {
    pub(super) factor: f64,
    pub(super) dimension: Dimension,
    pub(super) length: usize,
}

/// Unit symbols; of two that fit the longer one counts. Kelvins and degrees Celsius have one dimension: a difference
/// may be written in either, a level only in the latter.
const UNITS: &[(&str, Dimension, f64)] = &[
    ("V", Dimension::VOLTAGE, 1.0),
    ("Vdc", Dimension::VOLTAGE, 1.0),
    ("VDC", Dimension::VOLTAGE, 1.0),
    ("volt", Dimension::VOLTAGE, 1.0),
    ("volts", Dimension::VOLTAGE, 1.0),
    ("A", Dimension::CURRENT, 1.0),
    ("amp", Dimension::CURRENT, 1.0),
    ("amps", Dimension::CURRENT, 1.0),
    ("Ω", Dimension::RESISTANCE, 1.0),
    ("\u{2126}", Dimension::RESISTANCE, 1.0),
    ("ohm", Dimension::RESISTANCE, 1.0),
    ("ohms", Dimension::RESISTANCE, 1.0),
    ("Ohm", Dimension::RESISTANCE, 1.0),
    ("Ohms", Dimension::RESISTANCE, 1.0),
    ("OHM", Dimension::RESISTANCE, 1.0),
    ("R", Dimension::RESISTANCE, 1.0),
    ("F", Dimension::CAPACITANCE, 1.0),
    ("farad", Dimension::CAPACITANCE, 1.0),
    ("H", Dimension::INDUCTANCE, 1.0),
    ("henry", Dimension::INDUCTANCE, 1.0),
    ("W", Dimension::POWER, 1.0),
    ("watt", Dimension::POWER, 1.0),
    ("s", Dimension::TIME, 1.0),
    ("sec", Dimension::TIME, 1.0),
    ("Hz", Dimension::FREQUENCY, 1.0),
    ("hz", Dimension::FREQUENCY, 1.0),
    ("HZ", Dimension::FREQUENCY, 1.0),
    ("°C", Dimension::TEMPERATURE, 1.0),
    ("\u{2103}", Dimension::TEMPERATURE, 1.0),
    ("degC", Dimension::TEMPERATURE, 1.0),
    ("C", Dimension::TEMPERATURE, 1.0),
    ("K", Dimension::TEMPERATURE, 1.0),
    ("%", Dimension::ONE, 0.01),
    ("ppm", Dimension::ONE, 1e-6),
    ("m", Dimension::LENGTH, 1.0),
    ("mm", Dimension::LENGTH, 1e-3),
    ("cm", Dimension::LENGTH, 1e-2),
    ("deg", Dimension::ANGLE, 1.0),
    ("°", Dimension::ANGLE, 1.0),
];

/// Prefixes; `K` for kilo and `u` for micro are what keyboards give.
pub(super) const PREFIXES: &[(&str, f64)] = &[
    ("f", 1e-15),
    ("p", 1e-12),
    ("n", 1e-9),
    ("u", 1e-6),
    ("µ", 1e-6),
    ("μ", 1e-6),
    ("m", 1e-3),
    ("k", 1e3),
    ("K", 1e3),
    ("Meg", 1e6),
    ("meg", 1e6),
    ("MEG", 1e6),
    ("M", 1e6),
    ("G", 1e9),
    ("T", 1e12),
];

/// Units that take no prefix.
fn is_whole(symbol: &str, dimension: Dimension) -> bool {
    [Dimension::ONE, Dimension::ANGLE].contains(&dimension) || ["°C", "\u{2103}", "degC", "C", "hz"].contains(&symbol)
}

/// Reads a unit at the start of a text: one, or a product or quotient of several (`V/µs`, `K/W`). `wanted` decides
/// where two readings take the same length.
pub(super) fn unit(text: &str, wanted: Dimension) -> Option<Unit> {
    let mut found = simple(text, wanted)?;
    loop {
        let rest = text.get(found.length..)?;
        let quotient = rest.starts_with('/');
        let product = rest.starts_with('·') || rest.starts_with('*');
        if !(quotient || product) {
            return Some(found);
        }
        let mark = rest.chars().next().map_or(0, char::len_utf8);
        // A slash that no unit follows separates values: `1.2V/1.3V`.
        let Some(next) = rest.get(mark..).and_then(|behind| simple(behind, wanted)) else { return Some(found) };
        found = Unit {
            factor: if quotient { found.factor / next.factor } else { found.factor * next.factor },
            dimension: if quotient {
                found.dimension.over(next.dimension)
            } else {
                found.dimension.times(next.dimension)
            },
            length: found.length + mark + next.length,
        };
    }
}

fn simple(text: &str, wanted: Dimension) -> Option<Unit> {
    let mut best: Option<Unit> = None;
    let mut offer = |unit: Unit| {
        let better = best.is_none_or(|best: Unit| {
            let fits = |unit: &Unit| unit.dimension == wanted;
            (unit.length, fits(&unit)) > (best.length, fits(&best))
        });
        if better && ends_word(text, unit.length) {
            best = Some(unit);
        }
    };
    for (symbol, dimension, factor) in UNITS {
        if text.starts_with(symbol) {
            offer(Unit { factor: *factor, dimension: *dimension, length: symbol.len() });
        }
        if is_whole(symbol, *dimension) {
            continue;
        }
        for (prefix, power) in PREFIXES {
            if text.strip_prefix(prefix).is_some_and(|rest| rest.starts_with(symbol)) {
                let length = prefix.len() + symbol.len();
                offer(Unit { factor: factor * power, dimension: *dimension, length });
            }
        }
    }
    best
}

/// Whether a word ends at a byte: no letter goes on there.
fn ends_word(text: &str, at: usize) -> bool {
    text.get(at..).and_then(|rest| rest.chars().next()).is_none_or(|next| !next.is_alphabetic())
}
