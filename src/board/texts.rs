//! Texts of a board file that state figures.

use crate::knowledge::{DropoutPoint, EsrWindow};
use crate::quantity::{Dimension, Range, ReadError, read_amount, read_range, read_typical_maximum};

use super::model::Slack;
use crate::knowledge::Allowed;
use crate::source::TextFault;

/// A figure with its unit, as engineers write it: `3.3 V ± 5 %`, `50 .. 200 mΩ`.
pub(super) fn read_figure(text: &str, dimension: Dimension, allowed: Allowed) -> Result<Range, TextFault> {
    let range = read_range(text, dimension).map_err(|error| unreadable(&error, dimension))?;
    let whole = 0..text.len();
    if !(range.low().is_finite() && range.high().is_finite()) {
        let help = format!("write both ends, as in \"{}\"", example(dimension));
        return Err(TextFault::new(whole, "the figure is open at one end", "not a range", help));
    }
    admitted(range, dimension, allowed, text)
}

/// A figure as in a part file, where two values are typical and maximum: `1.10 / 1.20 V`. Relative figures are widths:
/// `±2 %` is 0.02.
pub(super) fn read_part_figure(text: &str, dimension: Dimension) -> Result<Range, TextFault> {
    if dimension == Dimension::ONE {
        return read_tolerance(text).map(|range| Range::exactly(range.high()));
    }
    let allowed = if dimension == Dimension::TEMPERATURE { Allowed::Any } else { Allowed::NotNegative };
    match read_typical_maximum(text, dimension) {
        Ok((typical, maximum)) => admitted(Range::clamped(typical, typical, maximum), dimension, allowed, text),
        Err(_) => read_figure(text, dimension, allowed),
    }
}

fn unreadable(error: &ReadError, dimension: Dimension) -> TextFault {
    let help = format!("write it as in \"{}\"", example(dimension));
    let (start, end) = (error.span().start(), error.span().end());
    TextFault::new(start..end, error.message(), format!("not {}", dimension.noun()), help)
}

fn admitted(range: Range, dimension: Dimension, allowed: Allowed, text: &str) -> Result<Range, TextFault> {
    if allowed.admits(range.low()) {
        return Ok(range);
    }
    let help = match dimension {
        Dimension::CURRENT => "write the magnitude, on a negative rail too".to_owned(),
        _ => format!("write it as in \"{}\"", example(dimension)),
    };
    let message = format!("`{}` is not possible here", text.trim());
    Err(TextFault::new(0..text.len(), message, format!("must be {}", allowed.words()), help))
}

fn example(dimension: Dimension) -> &'static str {
    const EXAMPLES: &[(Dimension, &str)] = &[
        (Dimension::VOLTAGE, "3.3 V ± 5 %"),
        (Dimension::CURRENT, "2 .. 180 mA"),
        (Dimension::RESISTANCE, "20 .. 60 mΩ"),
        (Dimension::CAPACITANCE, "10 uF"),
        (Dimension::INDUCTANCE, "10 uH"),
        (Dimension::POWER, "0.25 W"),
        (Dimension::TIME, "1 .. 100 ms"),
        (Dimension::FREQUENCY, "50 Hz"),
        (Dimension::TEMPERATURE, "-20 .. 55 °C"),
        (Dimension::THERMAL_RESISTANCE, "62 °C/W"),
        (Dimension::ANGLE, "45°"),
        (Dimension::LENGTH, "1.5 m"),
    ];
    EXAMPLES.iter().find(|(known, _)| *known == dimension).map_or("1", |(_, example)| example)
}

/// Whether a text states one value and no range or tolerance.
pub(super) fn is_single(text: &str) -> bool {
    !["..", "…", "–", "to ", "±", "+/-", "+-", "-/+", "/"].iter().any(|mark| text.contains(mark))
}

/// Lower case with single blanks: how technologies and other words are compared.
pub(super) fn plain_words(text: &str) -> String {
    text.split_whitespace().map(str::to_lowercase).collect::<Vec<_>>().join(" ")
}

/// `1.3 V at 0.5 A`, or with a typical and a maximum dropout: `1.1 / 1.3 V at 0.5 A`, `1.1 .. 1.3 V at 0.5 A`.
pub(super) fn read_dropout(text: &str) -> Result<DropoutPoint, TextFault> {
    let help = "write the dropout and its load, as in \"1.3 V at 0.5 A\"";
    let Some((drop, load)) = text.split_once(" at ") else {
        return Err(TextFault::new(0..text.len(), "the dropout names no load", "at which current?", help));
    };
    let volts = read_part_figure(drop, Dimension::VOLTAGE)?;
    let behind = drop.len() + " at ".len();
    let load = read_amount(load, Dimension::CURRENT)
        .map_err(|error| unreadable(&error, Dimension::CURRENT).shifted(behind))?;
    if load < 0.0 {
        return Err(TextFault::new(behind..text.len(), "the load is below zero", "write its magnitude", help));
    }
    Ok(DropoutPoint { from_output: 0.0, load, typical: volts.low(), maximum: Some(volts.high()) })
}

/// `0.3 .. 22 ohm`, or open at one end: `0.3 ohm ..`, `.. 22 ohm`, `>= 0.3 ohm`, `<= 22 ohm`.
pub(super) fn read_esr_window(text: &str) -> Result<EsrWindow, TextFault> {
    let begin = text.len() - text.trim_start().len();
    let bound = |part: &str, at: usize| {
        let ohms = read_amount(part, Dimension::RESISTANCE)
            .map_err(|error| unreadable(&error, Dimension::RESISTANCE).shifted(at))?;
        let negative =
            || TextFault::new(at..at + part.len(), "an ESR is below zero", "not possible", "leave it open");
        if ohms < 0.0 { Err(negative()) } else { Ok(Some(ohms)) }
    };
    if let Some(high) = text.trim().strip_prefix("..") {
        return Ok(EsrWindow { low: None, high: bound(high, begin + 2)? });
    }
    if let Some(low) = text.trim().strip_suffix("..") {
        return Ok(EsrWindow { low: bound(low, begin)?, high: None });
    }
    let range = read_range(text, Dimension::RESISTANCE).map_err(|error| unreadable(&error, Dimension::RESISTANCE))?;
    if range.high() < 0.0 || (range.low().is_finite() && range.low() < 0.0) {
        return Err(TextFault::new(0..text.len(), "an ESR is below zero", "not possible", "leave that end open"));
    }
    if range.is_exact() && is_single(text) {
        let help = "write both bounds, or leave an open end empty: \"0.3 .. 22 ohm\", \".. 5 ohm\"";
        return Err(TextFault::new(0..text.len(), "a window has two ends", "this is one value", help));
    }
    let finite = |ohms: f64| ohms.is_finite().then_some(ohms);
    Ok(EsrWindow { low: finite(range.low()), high: finite(range.high()) })
}

/// `±20 %`, `20 %`, `-20 .. 80 %`: the relative deviation, nominal 0.
pub(super) fn read_tolerance(text: &str) -> Result<Range, TextFault> {
    let help = "write it as in \"±20 %\" or \"-20 .. 80 %\"";
    let bad = |message: &str, label: &str| TextFault::new(0..text.len(), message, label, help);
    let range = read_range(text, Dimension::ONE).map_err(|error| {
        TextFault::new(error.span().start()..error.span().end(), error.message(), "not a tolerance", help)
    })?;
    // Whether `1` is one per cent or all cannot be told.
    if !(text.contains('%') || text.contains("ppm")) {
        return Err(bad("the tolerance has no unit", "per cent?"));
    }
    let (low, high) = if range.is_exact() && range.low() > 0.0 {
        (-range.high(), range.high())
    } else {
        (range.low(), range.high())
    };
    if !(-1.0..=0.0).contains(&low) || !(0.0..=10.0).contains(&high) {
        let message = format!("a tolerance cannot be `{}`", text.trim());
        return Err(bad(&message, "must go from at most -100 % through 0 upward"));
    }
    Ok(Range::clamped(low, 0.0, high))
}

/// `-0.2 V`, `12°`, `-3`: a figure in any unit.
pub(super) fn read_slack(text: &str) -> Result<Slack, TextFault> {
    let found = Dimension::NAMED
        .iter()
        .find_map(|dimension| read_amount(text, *dimension).ok().map(|value| Slack { value, dimension: *dimension }));
    found.ok_or_else(|| {
        let help = "write one figure in the requirement's unit, as the report shows it: \"-0.2 V\"";
        TextFault::new(0..text.len(), format!("`{}` is no slack", text.trim()), "not one figure", help)
    })
}
