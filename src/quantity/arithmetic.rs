//! Arithmetic of figures.

use super::ledger::Ledger;
use super::{Dimension, Pair, Quantity, Slope};

/// Sums, products and choices that the check language and the figures share.
impl Quantity {
    /// The sum of two figures of one dimension.
    #[must_use]
    pub fn plus(&self, other: &Self) -> Self {
        Self::monotone(self.dimension, &[(self, Slope::Rising), (other, Slope::Rising)], |v| first(v) + second(v))
    }

    /// The difference of two figures of one dimension.
    #[must_use]
    pub fn minus(&self, other: &Self) -> Self {
        Self::monotone(self.dimension, &[(self, Slope::Rising), (other, Slope::Falling)], |v| first(v) - second(v))
    }

    /// The figure with its sign changed.
    #[must_use]
    pub fn negated(&self) -> Self {
        Self::monotone(self.dimension, &[(self, Slope::Falling)], |v| -first(v))
    }

    /// The product of two figures.
    #[must_use]
    pub fn times(&self, other: &Self) -> Self {
        let dimension = self.dimension.times(other.dimension);
        let inputs = [(self, Slope::Rising), (other, Slope::Rising)];
        let mut figure = Self::monotone(dimension, &inputs, |v| first(v) * second(v));
        let bounds = |pick: &dyn Fn(&Quantity) -> Pair| pick(self).product(pick(other));
        let (low, high) = bounds(&Quantity::worst);
        figure.worst = Pair::new(low, high);
        let (low, high) = bounds(&Quantity::likely);
        figure.likely = Pair::new(low, high);
        let (low, high) = bounds(&Quantity::kind);
        figure.kind = Pair::kind(low, high);
        figure
    }

    /// The reciprocal; where the figure can be zero or change its sign nothing is known of it.
    #[must_use]
    pub fn reciprocal(&self) -> Self {
        let dimension = Dimension::ONE.over(self.dimension);
        let mut figure = Self::monotone(dimension, &[(self, Slope::Falling)], |v| 1.0 / first(v));
        let same_sign =
            |pair: Pair| (pair.low() > 0.0 && pair.high() > 0.0) || (pair.low() < 0.0 && pair.high() < 0.0);
        if !same_sign(self.worst) {
            figure.worst = Pair::ANY;
        }
        if !same_sign(self.likely()) {
            figure.likely = Pair::ANY;
        }
        if !same_sign(self.kind) {
            figure.kind = Pair::ANY.reversed();
        }
        figure
    }

    /// The smaller of two figures.
    #[must_use]
    pub fn least(&self, other: &Self) -> Self {
        Self::monotone(self.dimension, &[(self, Slope::Rising), (other, Slope::Rising)], |v| first(v).min(second(v)))
    }

    /// The larger of two figures.
    #[must_use]
    pub fn greatest(&self, other: &Self) -> Self {
        Self::monotone(self.dimension, &[(self, Slope::Rising), (other, Slope::Rising)], |v| first(v).max(second(v)))
    }

    /// One of two figures, of which this one bounds it below and the other above: which of them it is nobody tells,
    /// so the range between is a fact's. The nominal value is the upper one's.
    #[must_use]
    pub fn hull(&self, upper: &Self) -> Self {
        let mut figure = self.least(upper);
        figure.worst = Pair::new(self.worst.low(), upper.worst.high());
        figure.likely = Pair::new(self.likely().low(), upper.likely().high());
        figure.kind = Pair::kind(self.kind.low(), upper.kind.high());
        figure.nominal = upper.nominal;
        figure
    }

    /// The figure at the upper end of its facts. Guesses in it stay what they are, so nothing stronger can be said.
    #[must_use]
    pub fn at_high(&self) -> Self {
        self.at_end(Pair::high)
    }

    /// The figure at the lower end of its facts.
    #[must_use]
    pub fn at_low(&self) -> Self {
        self.at_end(Pair::low)
    }

    fn at_end(&self, end: fn(Pair) -> f64) -> Self {
        // Where guesses rule, the reversed pair crosses: its ends are the guesses', not the facts'.
        if self.is_missing() || self.kind.width() < 0.0 {
            return self.clone();
        }
        let mut figure = self.clone();
        let only = |pair: Pair| Pair::new(end(pair), end(pair));
        figure.worst = if self.guesses.is_empty() { only(self.worst) } else { self.worst };
        figure.likely = only(self.likely());
        figure.kind = only(self.kind);
        if self.guesses.is_empty() {
            figure.nominal = end(self.worst);
        }
        figure.ranged_facts = Ledger::EMPTY;
        figure
    }

    /// The magnitude.
    #[must_use]
    pub fn magnitude(&self) -> Self {
        if self.worst.is_not_negative() && self.kind.is_not_negative() {
            return self.clone();
        }
        // |x| = max(x, -x) holds for crossing bounds too, but loses that it is nowhere below zero.
        let mut figure = self.greatest(&self.negated());
        let up = |pair: Pair| (pair.low().max(0.0), pair.high().max(0.0));
        let ((low, high), (likely_low, likely_high), (kind_low, kind_high)) =
            (up(figure.worst), up(figure.likely), up(figure.kind));
        figure.worst = Pair::new(low, high);
        figure.likely = Pair::new(likely_low, likely_high);
        figure.kind = Pair::kind(kind_low, kind_high);
        figure
    }

    /// The figure multiplied by a plain number.
    #[must_use]
    pub fn scaled(&self, factor: f64) -> Self {
        let slope = if factor < 0.0 { Slope::Falling } else { Slope::Rising };
        Self::monotone(self.dimension, &[(self, slope)], |v| first(v) * factor)
    }
}

fn first(values: &[f64]) -> f64 {
    values.first().copied().unwrap_or(f64::NAN)
}

fn second(values: &[f64]) -> f64 {
    values.get(1).copied().unwrap_or(f64::NAN)
}
