//! Reading gains, in decibels or as ratios.

use super::super::dimension::Dimension;
use super::super::range::Range;
use super::read::{ReadError, read_range};
use crate::source::Span;

/// Reads a gain as the ratio that it is: `80 dB`, `75 / 80 / 85 dB`, `80 dB ± 3 dB`, or a plain number.
///
/// # Errors
/// As [`read_range`]; also where a part in hundred stands beside decibels, which does not tell of what.
pub fn read_gain(text: &str) -> Result<Range, ReadError> {
    if !text.contains(DECIBEL) {
        return read_range(text, Dimension::ONE);
    }
    if let Some(at) = text.find('%') {
        return Err(ReadError::new("write the spread of a gain in decibels", Span::new(at, at + 1)));
    }
    // Blanks in place of the unit keep every place in the text.
    let decibels = read_range(&text.replace(DECIBEL, "  "), Dimension::ONE)?;
    let ratio = |decibels: f64| 10_f64.powf(decibels / 20.0);
    Ok(Range::clamped(ratio(decibels.low()), ratio(decibels.nominal()), ratio(decibels.high())))
}

const DECIBEL: &str = "dB";

#[cfg(test)]
mod tests {
    use super::*;

    fn gain(text: &str) -> (f64, f64, f64) {
        let read = read_gain(text).unwrap();
        (read.low(), read.nominal(), read.high())
    }

    #[test]
    fn a_gain_is_read_in_decibels_or_as_a_ratio() {
        let close = |one: (f64, f64, f64), other: (f64, f64, f64)| {
            let near = |a: f64, b: f64| (a / b - 1.0).abs() < 1e-12;
            assert!(near(one.0, other.0) && near(one.1, other.1) && near(one.2, other.2), "{one:?} {other:?}");
        };
        close(gain("80 dB"), (1e4, 1e4, 1e4));
        close(gain("60 / 80 / 100dB"), (1e3, 1e4, 1e5));
        close(gain("80 dB ± 20 dB"), (1e3, 1e4, 1e5));
        close(gain("10000"), (1e4, 1e4, 1e4));
        close(gain("-20 dB"), (0.1, 0.1, 0.1));
    }

    #[test]
    fn what_is_no_gain_is_refused_at_its_place() {
        let wrong = |text: &str| {
            let error = read_gain(text).unwrap_err();
            (error.message().to_owned(), error.span().start()..error.span().end())
        };
        assert_eq!(wrong("80 dB ± 5 %").1, 11..12);
        assert_eq!(wrong("80 dB V"), ("expected a plain number, but `V` is the unit of a voltage".to_owned(), 6..7));
        assert!(read_gain("dB").is_err() && read_gain("").is_err() && read_gain("80 db").is_err());
    }
}
