//! Prints figures in sentences.

use crate::quantity::Dimension;

/// A value with its unit, three digits.
pub(super) fn print(value: f64, dimension: Dimension) -> String {
    let (number, unit) = scaled(value, value, dimension);
    format!("{number} {unit}").trim_end().to_owned()
}

/// A range with its unit; one value where the ends are equal as printed.
pub(super) fn print_range(low: f64, high: f64, dimension: Dimension) -> String {
    let largest = if low.abs() > high.abs() { low } else { high };
    let (from, unit) = scaled(low, largest, dimension);
    let (to, _) = scaled(high, largest, dimension);
    if from == to { format!("{to} {unit}") } else { format!("{from} .. {to} {unit}") }.trim_end().to_owned()
}

const SCALES: &[(f64, &str)] =
    &[(1e9, "G"), (1e6, "M"), (1e3, "k"), (1.0, ""), (1e-3, "m"), (1e-6, "µ"), (1e-9, "n"), (1e-12, "p")];

fn scaled(value: f64, like: f64, dimension: Dimension) -> (String, String) {
    let symbol = dimension.symbol().map_or_else(|| dimension.to_string(), str::to_owned);
    let plain = symbol.is_empty() || dimension == Dimension::TEMPERATURE || like == 0.0;
    let scale = SCALES.iter().find(|(factor, _)| !plain && like.abs() >= factor * 0.9995).unwrap_or(&(1.0, ""));
    let number = value / scale.0;
    let digits = if number.abs() >= 99.95 {
        0
    } else if number.abs() >= 9.995 {
        1
    } else {
        2
    };
    (format!("{number:.digits$}"), format!("{}{symbol}", scale.1))
}
