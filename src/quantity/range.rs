//! A range with a nominal value inside.

use thiserror::Error;

/// Why three numbers are no range.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Error)]
pub enum RangeError {
    /// A bound is not a number.
    #[error("a bound of the range is not a number")]
    NotANumber,
    /// The bounds are not in order.
    #[error("the range is not in order (low, nominal, high)")]
    OutOfOrder,
}

/// Lowest, nominal and highest value, in SI units, in this order. Bounds may be infinite, the nominal is finite.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Range {
    low: f64,
    nominal: f64,
    high: f64,
}

impl Range {
    /// A range from its three values.
    ///
    /// # Errors
    /// When a value is not a number, the nominal is infinite, or they are not in order.
    pub fn new(low: f64, nominal: f64, high: f64) -> Result<Self, RangeError> {
        if low.is_nan() || high.is_nan() || !nominal.is_finite() {
            return Err(RangeError::NotANumber);
        }
        if low > nominal || nominal > high {
            return Err(RangeError::OutOfOrder);
        }
        Ok(Self { low, nominal, high })
    }

    /// The range between two bounds in any order, its nominal in the middle. Infinite bounds are clipped to the
    /// largest finite number.
    #[must_use]
    pub fn between(one: f64, other: f64) -> Self {
        let (low, high) = (finite(one.min(other)), finite(one.max(other)));
        Self { low, nominal: low / 2.0 + high / 2.0, high }
    }

    /// A single value.
    #[must_use]
    pub fn exactly(value: f64) -> Self {
        let value = finite(value);
        Self { low: value, nominal: value, high: value }
    }

    /// `nominal` with a relative tolerance on both sides (`0.05` for 5 %), whatever its sign.
    #[must_use]
    pub fn with_tolerance(nominal: f64, relative: f64) -> Self {
        let nominal = finite(nominal);
        let width = (nominal * finite(relative)).abs();
        Self { low: nominal - width, nominal, high: nominal + width }
    }

    /// `low .. high` with `nominal` moved inside where it lies outside.
    #[must_use]
    pub fn clamped(low: f64, nominal: f64, high: f64) -> Self {
        let (low, high) = (finite(low.min(high)), finite(low.max(high)));
        Self { low, nominal: finite(nominal).clamp(low, high), high }
    }

    /// The lowest value.
    #[must_use]
    pub fn low(self) -> f64 {
        self.low
    }

    /// The nominal value.
    #[must_use]
    pub fn nominal(self) -> f64 {
        self.nominal
    }

    /// The highest value.
    #[must_use]
    pub fn high(self) -> f64 {
        self.high
    }

    /// Every value multiplied by `factor`; a negative factor mirrors the range.
    #[must_use]
    pub fn scaled(self, factor: f64) -> Self {
        let (one, other) = (self.low * factor, self.high * factor);
        Self::clamped(one, self.nominal * factor, other)
    }

    /// The range mirrored at zero: magnitudes of a negative supply.
    #[must_use]
    pub fn mirrored(self) -> Self {
        self.scaled(-1.0)
    }

    /// The smallest range that holds both; the nominal is this one's.
    #[must_use]
    pub fn union(self, other: Self) -> Self {
        Self { low: self.low.min(other.low), nominal: self.nominal, high: self.high.max(other.high) }
    }

    /// Whether it is a single value.
    #[must_use]
    #[allow(clippy::float_cmp)] // bounds that were given as one value are the same bits
    pub fn is_exact(self) -> bool {
        self.low == self.high
    }
}

/// Infinities and values that are no number, as the nearest finite number: a range of the outside world is finite.
fn finite(value: f64) -> f64 {
    if value.is_nan() { 0.0 } else { value.clamp(f64::MIN, f64::MAX) }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_range_refuses_disorder_and_nan() {
        assert_eq!(Range::new(2.0, 1.0, 3.0), Err(RangeError::OutOfOrder));
        assert_eq!(Range::new(f64::NAN, 1.0, 3.0), Err(RangeError::NotANumber));
        assert!(Range::new(0.0, 1.0, f64::INFINITY).is_ok());
    }

    #[test]
    fn a_negative_nominal_keeps_its_tolerance_in_order() {
        let range = Range::with_tolerance(-12.0, 0.05);
        assert!((range.low() + 12.6).abs() < 1e-12 && (range.high() + 11.4).abs() < 1e-12);
        assert!((range.mirrored().low() - 11.4).abs() < 1e-12);
    }
}
