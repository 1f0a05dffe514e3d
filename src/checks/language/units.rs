//! Numbers with units, as they stand in expressions.

use super::refusal::Refusal;
use crate::quantity::{Dimension, read_amount};
use crate::source::Span;
use crate::source::toml::nearest;

/// Units to suggest in place of one that is not known.
const UNITS: &[&str] = &["V", "A", "ohm", "F", "H", "W", "s", "Hz", "°C", "°C/W", "%", "deg"];

/// A number with its unit, in SI units, with what it measures.
///
/// # Errors
/// When it is no number, or its unit is missing or not known, with the place inside `text`.
pub fn constant(text: &str) -> Result<(f64, Dimension), Refusal> {
    let read = |dimension: &Dimension| read_amount(text, *dimension).ok().map(|value| (value, *dimension));
    let mut readings = Dimension::NAMED.iter().filter_map(read);
    let whole = Span::new(0, text.len());
    match (readings.next(), readings.next()) {
        (Some(reading), None) => return Ok(reading),
        // A plain number reads as one before anything else that its digits could be short for.
        (Some(reading @ (_, Dimension::ONE)), Some(_)) => return Ok(reading),
        (Some(_), Some(_)) => {
            return Err(
                Refusal::new(whole, format!("`{text}` has no unit"), "no unit").help("write the unit: `4.7 uF`")
            );
        }
        (None, _) => {}
    }
    let is_number = |c: char| c.is_ascii_digit() || matches!(c, '.' | '-' | '+' | ' ');
    let start = text.find(|c: char| !is_number(c)).unwrap_or(text.len());
    let unit = text.get(start..).unwrap_or("");
    if start == 0 || unit.is_empty() {
        return Err(Refusal::new(whole, format!("`{text}` is no number"), "no number")
            .help("write a number with its unit: `0.2 V`"));
    }
    let refusal = Refusal::new(Span::new(start, text.len()), format!("`{unit}` is no unit"), "unknown unit");
    Err(match nearest(unit, UNITS.iter().copied()) {
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
        same("3V3", "3.3 V");
        assert_eq!(constant("45 deg").unwrap(), (45.0, Dimension::ANGLE));
        assert_eq!(constant("45 °C").unwrap().1, Dimension::TEMPERATURE);
        assert_eq!(constant("2").unwrap().1, Dimension::ONE);
    }

    #[test]
    fn an_unknown_or_missing_unit_is_refused_where_it_stands() {
        assert_eq!(constant("2 Vlt").unwrap_err().span, Span::new(2, 5));
        assert_eq!(constant("4u7").unwrap_err().message, "`4u7` has no unit");
        assert_eq!(constant("much").unwrap_err().message, "`much` is no number");
    }
}
