//! Two bounds, which may cross.

/// Bounds of a value. Where they are in order they say *for some value between*; where they cross, *for whatever
/// value between*: Kaucher's generalized intervals (E. Kaucher, Interval Analysis in the Extended Interval Space IR,
/// Computing Supplementum 2, 1980), of which the ordinary intervals are the part in order.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Pair {
    low: f64,
    high: f64,
}

impl Pair {
    /// Nothing is known: any value.
    pub const ANY: Self = Self { low: f64::NEG_INFINITY, high: f64::INFINITY };
    /// Any value from zero up.
    pub const NOT_NEGATIVE: Self = Self { low: 0.0, high: f64::INFINITY };

    /// Both bounds as given. A bound that is not a number becomes the one that decides nothing: in an ordinary
    /// pair the widest.
    #[must_use]
    pub fn new(low: f64, high: f64) -> Self {
        Self {
            low: if low.is_nan() { f64::NEG_INFINITY } else { low },
            high: if high.is_nan() { f64::INFINITY } else { high },
        }
    }

    /// Both bounds as given, for pairs that read *whatever the guesses are*: a bound that is not a number becomes
    /// the one that claims nothing.
    #[must_use]
    pub fn kind(low: f64, high: f64) -> Self {
        Self {
            low: if low.is_nan() { f64::INFINITY } else { low },
            high: if high.is_nan() { f64::NEG_INFINITY } else { high },
        }
    }

    /// The lower bound (the first; it may lie above the other).
    #[must_use]
    pub fn low(self) -> f64 {
        self.low
    }

    /// The upper bound.
    #[must_use]
    pub fn high(self) -> f64 {
        self.high
    }

    /// The bounds the other way round.
    #[must_use]
    pub fn reversed(self) -> Self {
        Self { low: self.high, high: self.low }
    }

    /// Whether `value` lies within ordinary bounds.
    #[must_use]
    pub fn contains(self, value: f64) -> bool {
        self.low <= value && value <= self.high
    }

    /// The distance between the bounds; negative where they cross.
    #[must_use]
    pub fn width(self) -> f64 {
        self.high - self.low
    }

    /// Whether it is in order and nowhere below zero.
    #[must_use]
    pub fn is_not_negative(self) -> bool {
        self.low >= 0.0 && self.high >= 0.0
    }

    /// The product of generalized intervals (Kaucher's table, by the signs of the bounds).
    #[must_use]
    pub fn product(self, other: Self) -> (f64, f64) {
        let class = |pair: Self| match (pair.low >= 0.0, pair.high >= 0.0) {
            (true, true) => Sign::Positive,
            (false, false) => Sign::Negative,
            (false, true) => Sign::Mixed,
            (true, false) => Sign::MixedReversed,
        };
        let (a, b, c, d) = (self.low, self.high, other.low, other.high);
        let times = |x: f64, y: f64| if x == 0.0 || y == 0.0 { 0.0 } else { x * y };
        use Sign::{Mixed, MixedReversed, Negative, Positive};
        match (class(self), class(other)) {
            (Positive, Positive) => (times(a, c), times(b, d)),
            (Positive, Mixed) => (times(b, c), times(b, d)),
            (Positive, Negative) => (times(b, c), times(a, d)),
            (Positive, MixedReversed) => (times(a, c), times(a, d)),
            (Mixed, Positive) => (times(a, d), times(b, d)),
            (Mixed, Mixed) => (times(a, d).min(times(b, c)), times(a, c).max(times(b, d))),
            (Mixed, Negative) => (times(b, c), times(a, c)),
            (Mixed, MixedReversed) | (MixedReversed, Mixed) => (0.0, 0.0),
            (Negative, Positive) => (times(a, d), times(b, c)),
            (Negative, Mixed) => (times(a, d), times(a, c)),
            (Negative, Negative) => (times(b, d), times(a, c)),
            (Negative, MixedReversed) => (times(b, d), times(b, c)),
            (MixedReversed, Positive) => (times(a, c), times(b, c)),
            (MixedReversed, Negative) => (times(b, d), times(a, d)),
            (MixedReversed, MixedReversed) => (times(a, c).max(times(b, d)), times(a, d).min(times(b, c))),
        }
    }
}

#[derive(Clone, Copy)]
enum Sign {
    Positive,
    Negative,
    Mixed,
    MixedReversed,
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    proptest! {
        #[test]
        fn the_product_of_ordinary_pairs_is_that_of_their_corners(
            a in -9.0..9.0f64, wide in 0.0..9.0f64, c in -9.0..9.0f64, broad in 0.0..9.0f64,
        ) {
            let (one, other) = (Pair::new(a, a + wide), Pair::new(c, c + broad));
            let corners = [a * c, a * (c + broad), (a + wide) * c, (a + wide) * (c + broad)];
            let (low, high) = one.product(other);
            prop_assert!((low - corners.iter().copied().fold(f64::INFINITY, f64::min)).abs() < 1e-9);
            prop_assert!((high - corners.iter().copied().fold(f64::NEG_INFINITY, f64::max)).abs() < 1e-9);
        }

        #[test]
        fn the_product_of_duals_is_the_dual_of_the_product(
            a in -9.0..9.0f64, b in -9.0..9.0f64, c in -9.0..9.0f64, d in -9.0..9.0f64,
        ) {
            let (one, other) = (Pair::new(a, b), Pair::new(c, d));
            let (low, high) = one.product(other);
            let (dual_low, dual_high) = one.reversed().product(other.reversed());
            prop_assert!((low - dual_high).abs() < 1e-9 && (high - dual_low).abs() < 1e-9);
        }
    }
}
