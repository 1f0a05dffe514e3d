//! Numbers with units, as they stand in expressions.

use super::refusal::Refusal;
use crate::quantity::Dimension;
use crate::source::Span;
use crate::source::toml::nearest;

/// Units with their dimension and factor to SI.
const UNITS: &[(&str, Dimension, f64)] = &[
    ("V", Dimension::VOLTAGE, 1.0),
    ("A", Dimension::CURRENT, 1.0),
    ("ohm", Dimension::RESISTANCE, 1.0),
    ("Ω", Dimension::RESISTANCE, 1.0),
    ("F", Dimension::CAPACITANCE, 1.0),
    ("H", Dimension::INDUCTANCE, 1.0),
    ("W", Dimension::POWER, 1.0),
    ("s", Dimension::TIME, 1.0),
    ("Hz", Dimension::FREQUENCY, 1.0),
    ("C/W", Dimension::THERMAL_RESISTANCE, 1.0),
    ("°C/W", Dimension::THERMAL_RESISTANCE, 1.0),
    ("K/W", Dimension::THERMAL_RESISTANCE, 1.0),
    ("C", Dimension::TEMPERATURE, 1.0),
    ("°C", Dimension::TEMPERATURE, 1.0),
    ("K", Dimension::TEMPERATURE, 1.0),
    ("%", Dimension::ONE, 0.01),
    ("deg", Dimension::ONE, 1.0),
    ("°", Dimension::ONE, 1.0),
];

const PREFIXES: &[(&str, f64)] = &[
    ("", 1.0),
    ("p", 1e-12),
    ("n", 1e-9),
    ("u", 1e-6),
    ("µ", 1e-6),
    ("μ", 1e-6),
    ("m", 1e-3),
    ("k", 1e3),
    ("M", 1e6),
    ("G", 1e9),
];

/// A number with its unit in SI units, with its dimension.
///
/// # Errors
/// When the unit is not known, with the place inside `text`.
pub fn constant(text: &str) -> Result<(f64, Dimension), Refusal> {
    let whole = Span::new(0, text.len());
    let is_digit = |c: char| c.is_ascii_digit() || c == '.' || c == '-' || c == '+';
    let split = text.find(|c: char| !is_digit(c)).unwrap_or(text.len());
    let split = match text.get(split..) {
        Some(rest)
            if rest.starts_with(['e', 'E']) && rest.get(1..).is_some_and(|rest| rest.starts_with(is_digit)) =>
        {
            let tail = rest.get(1..).unwrap_or("");
            split + 1 + tail.find(|c: char| !is_digit(c)).unwrap_or(tail.len())
        }
        _ => split,
    };
    let (number, unit) = text.split_at_checked(split).unwrap_or((text, ""));
    let start = text.len() - unit.trim_start().len();
    let unit = unit.trim();
    let Some(value) = number.parse::<f64>().ok().filter(|value| value.is_finite()) else {
        return Err(Refusal::new(whole, format!("`{text}` is no number"), "no number"));
    };
    if unit.is_empty() {
        return Ok((value, Dimension::ONE));
    }
    for (name, dimension, factor) in UNITS {
        let Some(prefix) = unit.strip_suffix(name) else { continue };
        if let Some((_, scale)) = PREFIXES.iter().find(|(known, _)| *known == prefix) {
            return Ok((value * factor * scale, *dimension));
        }
    }
    let refusal = Refusal::new(Span::new(start, text.len()), format!("`{unit}` is no unit"), "unknown unit");
    Err(match nearest(unit, UNITS.iter().map(|(name, ..)| *name)) {
        Some(near) => refusal.help(format!("did you mean `{near}`?")),
        None => refusal.help("units are V, A, ohm, F, H, W, s, Hz, C, C/W, % and deg, with p n u m k M before them"),
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn units_are_read_as_engineers_type_them() {
        let same = |one: &str, other: &str| {
            let (a, b) = (constant(one).unwrap(), constant(other).unwrap());
            assert!(a.1 == b.1 && (a.0 - b.0).abs() <= 1e-12 * a.0.abs(), "{one} {other}");
        };
        same("10uF", "10 µF");
        same("5 ohm", "5Ω");
        same("62 C/W", "62 °C/W");
        same("5 %", "0.05");
        same("25 C", "25 °C");
        same("2e-3 A", "2 mA");
        same("45 deg", "45°");
    }

    #[test]
    fn an_unknown_unit_is_refused_where_it_stands() {
        assert_eq!(constant("2 Vlt").unwrap_err().span, Span::new(2, 5));
    }
}
