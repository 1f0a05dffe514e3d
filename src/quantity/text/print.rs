//! Printing amounts and ranges.

use super::super::dimension::Dimension;
use super::super::range::Range;

/// Prefixes by power of a thousand.
const PREFIXES: &[(i32, &str)] =
    &[(-5, "f"), (-4, "p"), (-3, "n"), (-2, "µ"), (-1, "m"), (0, ""), (1, "k"), (2, "M"), (3, "G"), (4, "T")];

/// What stands for "no bound" in a range is printed as such, whether it is infinite or was clipped to a finite number.
const UNBOUNDED: f64 = 1e300;

/// Below a thousandth of the smallest prefix an amount is what rounding leaves of a difference.
const NOTHING: f64 = 1e-18;

/// Prints an amount with its unit and a prefix, to four digits where the first is a 1 and three otherwise: `3.3 V`,
/// `4.7 µF`, `25.5 mΩ`, `1.24 kΩ`, `-12 V`, `45°`, `0 A`, `∞`.
#[must_use]
pub fn print_amount(value: f64, dimension: Dimension) -> String {
    if value.is_nan() {
        return "?".to_owned();
    }
    if value.abs() >= UNBOUNDED {
        return if value < 0.0 { "-∞" } else { "∞" }.to_owned();
    }
    let value = cleared(value, dimension);
    let thousands = thousands(value, dimension);
    with_unit(&digits(value, thousands), thousands, dimension)
}

/// Prints a range: `3.24 .. 3.36 V` with one prefix for both ends where they are of a size, `300 nA .. 1 A` where they
/// are not, `3.3 V` where both print alike, `≥ 3 V`, `≤ 5 V` or `any` where it has no bound.
#[must_use]
pub fn print_range(range: Range, dimension: Dimension) -> String {
    let (low, high) = (cleared(range.low(), dimension), cleared(range.high(), dimension));
    match (low <= -UNBOUNDED, high >= UNBOUNDED) {
        (true, true) => return "any".to_owned(),
        (true, false) => return format!("≤ {}", print_amount(high, dimension)),
        (false, true) => return format!("≥ {}", print_amount(low, dimension)),
        (false, false) => {}
    }
    let largest = if low.abs() > high.abs() { low } else { high };
    let smallest = if low.abs() > high.abs() { high } else { low };
    let shared = thousands(largest, dimension);
    let apart = (smallest != 0.0 && smallest.abs() < largest.abs() / 1000.0 && has_prefixes(dimension)).then_some(());
    let (first, last) = match apart {
        Some(()) => (print_amount(low, dimension), print_amount(high, dimension)),
        None => (digits(low, shared), with_unit(&digits(high, shared), shared, dimension)),
    };
    let high_alone = print_amount(high, dimension);
    if print_amount(low, dimension) == high_alone { high_alone } else { format!("{first} .. {last}") }
}

/// The amount without what rounding left of a difference of equals.
fn cleared(value: f64, dimension: Dimension) -> f64 {
    if has_prefixes(dimension) && value.abs() < NOTHING { 0.0 } else { value }
}

/// The power of a thousand whose prefix an amount takes.
fn thousands(value: f64, dimension: Dimension) -> i32 {
    let magnitude = value.abs();
    if magnitude == 0.0 || !has_prefixes(dimension) {
        return 0;
    }
    // Rounding first: 999.96 is 1.000 k.
    let mut power = (exponent(magnitude)).div_euclid(3);
    if rounded(magnitude) >= 1000.0 * 1000_f64.powi(power) * (1.0 - 1e-12) {
        power += 1;
    }
    let highest = match dimension {
        // Large capacitors are marked in microfarads, and nobody counts in kiloseconds.
        Dimension::CAPACITANCE if magnitude < 0.1 => -2,
        Dimension::CAPACITANCE | Dimension::TIME => 0,
        _ => 4,
    };
    power.clamp(-5, highest)
}

fn has_prefixes(dimension: Dimension) -> bool {
    ![Dimension::ONE, Dimension::TEMPERATURE, Dimension::THERMAL_RESISTANCE, Dimension::ANGLE].contains(&dimension)
        && dimension.symbol().is_some()
}

/// The power of ten of the first digit.
#[allow(clippy::cast_possible_truncation)] // a finite number's logarithm lies within ±324
fn exponent(magnitude: f64) -> i32 {
    let guess = magnitude.log10().floor() as i32;
    if magnitude >= 10_f64.powi(guess + 1) { guess + 1 } else { guess }
}

/// Rounded to the digits that are printed.
fn rounded(magnitude: f64) -> f64 {
    let places = places(magnitude);
    format!("{magnitude:.places$e}").parse().unwrap_or(magnitude)
}

/// How many digits follow the first: three behind a 1, two behind another.
fn places(magnitude: f64) -> usize {
    let scaled = format!("{magnitude:.3e}");
    if scaled.starts_with('1') { 3 } else { 2 }
}

/// The digits of a value in a unit of `1000^thousands`, without zeros at the end.
#[allow(clippy::cast_sign_loss)] // clamped to be positive
fn digits(value: f64, thousands: i32) -> String {
    if value == 0.0 {
        return "0".to_owned();
    }
    let magnitude = rounded(value.abs());
    let sign = if value < 0.0 { "-" } else { "" };
    let shift = exponent(magnitude) - 3 * thousands;
    // Far from its unit a number of many zeros would hide its digits.
    if !(-4..=9).contains(&shift) {
        let text = format!("{:.3e}", magnitude / 1000_f64.powi(thousands));
        let (number, power) = text.split_once('e').unwrap_or((&text, "0"));
        return format!("{sign}{}e{power}", trimmed(number));
    }
    let decimals = (i32::try_from(places(magnitude)).unwrap_or(3) - shift).clamp(0, 12) as usize;
    let shown = format!("{:.decimals$}", magnitude / 1000_f64.powi(thousands));
    format!("{sign}{}", trimmed(&shown))
}

fn trimmed(number: &str) -> &str {
    if number.contains('.') { number.trim_end_matches('0').trim_end_matches('.') } else { number }
}

fn with_unit(digits: &str, thousands: i32, dimension: Dimension) -> String {
    let prefix = PREFIXES.iter().find(|(power, _)| *power == thousands).map_or("", |(_, prefix)| prefix);
    match dimension.symbol() {
        Some("") => digits.to_owned(),
        Some(_) if dimension == Dimension::ANGLE => format!("{digits}°"),
        Some(symbol) => format!("{digits} {prefix}{symbol}"),
        None => format!("{digits} {dimension}"),
    }
}

#[cfg(test)]
mod tests {
    use super::super::read::{read_amount, read_range};
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn what_rounding_leaves_of_a_difference_is_nothing() {
        assert_eq!(print_amount(1.694e-21, Dimension::CURRENT), "0 A");
        let range = Range::clamped(-1.694e-21, 1e-6, 2e-6);
        assert_eq!(print_range(range, Dimension::CURRENT), "0 .. 2 µA");
        assert_eq!(print_amount(1e-15, Dimension::CAPACITANCE), "1 fF");
    }

    #[test]
    fn amounts_print_with_a_prefix_and_without_noise() {
        let amounts = [
            (3.3, Dimension::VOLTAGE, "3.3 V"),
            (4.7e-6, Dimension::CAPACITANCE, "4.7 µF"),
            (0.0255, Dimension::RESISTANCE, "25.5 mΩ"),
            (1240.0, Dimension::RESISTANCE, "1.24 kΩ"),
            (-12.0, Dimension::VOLTAGE, "-12 V"),
            (0.0, Dimension::CURRENT, "0 A"),
            (f64::INFINITY, Dimension::VOLTAGE, "∞"),
            (f64::MIN, Dimension::VOLTAGE, "-∞"),
            (1.0 / 3.0, Dimension::VOLTAGE, "333 mV"),
            (1.2345, Dimension::VOLTAGE, "1.234 V"),
            (999.96, Dimension::RESISTANCE, "1 kΩ"),
            (4700e-6, Dimension::CAPACITANCE, "4700 µF"),
            (1.0, Dimension::CAPACITANCE, "1 F"),
            (25.0, Dimension::TEMPERATURE, "25 °C"),
            (0.5, Dimension::TEMPERATURE, "0.5 °C"),
            (62.0, Dimension::THERMAL_RESISTANCE, "62 °C/W"),
            (45.0, Dimension::ANGLE, "45°"),
            (-2.887, Dimension::ANGLE, "-2.89°"),
            (1800.0, Dimension::TIME, "1800 s"),
            (0.05, Dimension::ONE, "0.05"),
            (2.5e6, Dimension::FREQUENCY, "2.5 MHz"),
            (0.5e6, Dimension::VOLTAGE.over(Dimension::TIME), "500000 V·s^-1"),
            (1e-17, Dimension::CURRENT, "0.01 fA"),
        ];
        for (value, dimension, expected) in amounts {
            assert_eq!(print_amount(value, dimension), expected);
        }
    }

    #[test]
    fn ranges_share_a_prefix() {
        let range = |low: f64, high: f64| Range::between(low, high);
        assert_eq!(print_range(range(3.24, 3.36), Dimension::VOLTAGE), "3.24 .. 3.36 V");
        assert_eq!(print_range(range(0.002, 0.18), Dimension::CURRENT), "2 .. 180 mA");
        assert_eq!(print_range(range(-14.0, -13.2), Dimension::VOLTAGE), "-14 .. -13.2 V");
        assert_eq!(print_range(range(0.0, 470e-6), Dimension::CAPACITANCE), "0 .. 470 µF");
        assert_eq!(print_range(range(300e-9, 1.0), Dimension::CURRENT), "300 nA .. 1 A");
        assert_eq!(print_range(range(-2.887, 70.33), Dimension::ANGLE), "-2.89 .. 70.3°");
        assert_eq!(print_range(range(3.3, 3.3), Dimension::VOLTAGE), "3.3 V");
        assert_eq!(print_range(range(3.3, 3.3004), Dimension::VOLTAGE), "3.3 V");
        assert_eq!(print_range(Range::new(3.0, 3.0, f64::INFINITY).unwrap(), Dimension::VOLTAGE), "≥ 3 V");
        assert_eq!(print_range(Range::new(f64::NEG_INFINITY, 0.0, 5.0).unwrap(), Dimension::VOLTAGE), "≤ 5 V");
        assert_eq!(print_range(range(f64::MIN, f64::MAX), Dimension::VOLTAGE), "any");
    }

    /// Values of every size that the trade knows, both signs, and zero.
    fn value() -> impl Strategy<Value = f64> {
        prop_oneof![
            9 => (-14.0..11.0_f64, any::<bool>()).prop_map(|(power, up)| 10_f64.powf(power) * if up { 1.0 } else { -1.0 }),
            1 => Just(0.0),
        ]
    }

    /// Half a unit of the last printed digit of three.
    fn as_printed(one: f64, other: f64) -> bool {
        (one - other).abs() <= 5.001e-3 * one.abs().max(other.abs())
    }

    proptest! {
        #[test]
        fn what_is_printed_reads_back_to_the_printed_digits(value in value(), which in 0..Dimension::NAMED.len()) {
            let dimension = Dimension::NAMED[which];
            let text = print_amount(value, dimension);
            let read = read_amount(&text, dimension).map_err(|error| TestCaseError::fail(format!("{text}: {error}")))?;
            prop_assert!(as_printed(value, read), "{value} {text} {read}");
            prop_assert_eq!(print_amount(read, dimension), text, "printing is stable");
        }

        #[test]
        fn a_printed_range_reads_back(one in value(), other in value(), which in 0..Dimension::NAMED.len()) {
            let dimension = Dimension::NAMED[which];
            let range = Range::between(one, other);
            let text = print_range(range, dimension);
            let read = read_range(&text, dimension).map_err(|error| TestCaseError::fail(format!("{text}: {error}")))?;
            prop_assert!(as_printed(range.low(), read.low()) && as_printed(range.high(), read.high()), "{text}");
        }

        #[test]
        fn no_text_makes_a_reader_fail_otherwise_than_by_an_error(text in "\\PC{0,24}", which in 0..Dimension::NAMED.len()) {
            let errors = [read_amount(&text, Dimension::NAMED[which]).err(), read_range(&text, Dimension::NAMED[which]).err()];
            for error in errors.into_iter().flatten() {
                prop_assert!(text.get(error.span().start()..error.span().end()).is_some());
            }
        }

        #[test]
        fn texts_that_look_like_figures_never_panic(text in "[0-9.,eE+±/ -]{0,6}[a-zA-ZµΩ°%]{0,3}[0-9.,/ ]{0,4}[a-zVAΩ%]{0,2}") {
            let read = read_range(&text, Dimension::RESISTANCE);
            prop_assert!(read.is_err() || read.is_ok_and(|range| range.low() <= range.high()));
        }
    }
}
