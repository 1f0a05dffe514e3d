//! Figures of knowledge files as text: `20 V`, `1.10 / 1.20 V`, `1.238 / 1.250 / 1.262 V`, `0.3 .. 22 ohm`, `±4 %`.

use crate::quantity::{Dimension, Range};

/// Why a text is no figure, and which bytes of it are wrong.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Refusal {
    pub(super) message: String,
    pub(super) at: std::ops::Range<usize>,
}

/// Reads a figure: one value, `low .. high`, `typical / maximum` or `low / nominal / high`, and a unit that may stand
/// behind the last number only.
pub(super) fn read_figure(text: &str, dimension: Dimension) -> Result<Range, Refusal> {
    let whole = 0..text.len();
    let refuse = |message: &str| Refusal { message: message.to_owned(), at: whole.clone() };
    let (separator, parts) =
        if text.contains("..") { ("..", pieces(text, "..")) } else { ("/", pieces(text, " / ")) };
    let mut factor = None;
    let mut values = Vec::new();
    for (piece, at) in parts.iter().rev() {
        let (number, unit) = number(piece)
            .ok_or_else(|| Refusal { message: format!("`{piece}` is no number with a unit"), at: at.clone() })?;
        if !unit.is_empty() || factor.is_none() {
            factor = Some(
                factor_of(unit, dimension)
                    .ok_or_else(|| Refusal { message: wrong_unit(unit, dimension), at: at.clone() })?,
            );
        }
        values.push(number * factor.unwrap_or(1.0));
    }
    values.reverse();
    let range = match (separator, values.as_slice()) {
        (_, [value]) => Ok(Range::exactly(*value)),
        ("..", [low, high]) => Range::new(*low, f64::midpoint(*low, *high), *high),
        ("/", [typical, maximum]) => Range::new(*typical, *typical, *maximum),
        (_, [low, nominal, high]) => Range::new(*low, *nominal, *high),
        _ => return Err(refuse("a figure has one, two or three values")),
    };
    range.map_err(|error| refuse(&error.to_string()))
}

fn wrong_unit(unit: &str, dimension: Dimension) -> String {
    let wanted = dimension.symbol().unwrap_or("");
    if unit.is_empty() {
        format!("the unit is missing: {} in {wanted} is wanted", dimension.noun())
    } else {
        format!("`{unit}` is no unit of {}", dimension.noun())
    }
}

/// The pieces of a text between separators, trimmed, with their places.
fn pieces<'a>(text: &'a str, separator: &str) -> Vec<(&'a str, std::ops::Range<usize>)> {
    let mut start = 0;
    text.split(separator)
        .map(|piece| {
            let trimmed = piece.trim();
            let begin = start + (piece.len() - piece.trim_start().len());
            start += piece.len() + separator.len();
            (trimmed, begin..begin + trimmed.len())
        })
        .collect()
}

/// A number and the unit behind it.
fn number(text: &str) -> Option<(f64, &str)> {
    let text = text.trim_start_matches('±');
    let end = text.find(|sign: char| !(sign.is_ascii_digit() || "+-.".contains(sign))).unwrap_or(text.len());
    let (number, unit) = text.split_at_checked(end)?;
    Some((number.parse().ok().filter(|value: &f64| value.is_finite())?, unit.trim()))
}

/// What a number with this unit is multiplied with; `None` for a unit of another dimension.
fn factor_of(unit: &str, dimension: Dimension) -> Option<f64> {
    let unit = unit.replace(['µ', 'μ'], "u").replace('Ω', "ohm").replace("°", "");
    if dimension == Dimension::ONE {
        return [("", 1.0), ("%", 0.01), ("ppm", 1e-6)]
            .iter()
            .find(|(name, _)| *name == unit)
            .map(|(_, value)| *value);
    }
    if dimension == Dimension::TEMPERATURE {
        return (unit == "C" || unit == "K").then_some(1.0);
    }
    if dimension == Dimension::THERMAL_RESISTANCE {
        return (unit == "C/W" || unit == "K/W").then_some(1.0);
    }
    let base = if dimension == Dimension::RESISTANCE { "ohm" } else { dimension.symbol()? };
    let prefix = unit.strip_suffix(base)?;
    [("p", 1e-12), ("n", 1e-9), ("u", 1e-6), ("m", 1e-3), ("", 1.0), ("k", 1e3), ("M", 1e6), ("G", 1e9)]
        .iter()
        .find(|(name, _)| *name == prefix)
        .map(|(_, value)| *value)
}
