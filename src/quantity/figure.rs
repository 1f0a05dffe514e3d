//! A figure with its three pairs of bounds.

use std::collections::{BTreeMap, BTreeSet};
use std::sync::Arc;

use super::{Dimension, Evidence, Grade, Key, Pair, Range};

/// A guess that a figure hangs on, and how far it moves that figure over its range.
#[derive(Debug, Clone, PartialEq)]
pub struct Guess {
    /// What the guess is and what would settle it.
    pub evidence: Arc<Evidence>,
    /// How far the figure moves, in its own unit, when the guess goes from end to end; infinite for a missing figure.
    pub moves: f64,
}

/// Whether a figure rises or falls with an input.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Slope {
    /// It rises or stays.
    Rising,
    /// It falls or stays.
    Falling,
}

/// A figure: a range in SI units, held as three pairs of bounds, with the facts and guesses behind it.
///
/// *worst*: facts and guesses over their ranges. *likely*: facts over their range, guesses at nominal. *kind*: facts
/// over their range, guesses reversed over what is physically possible, so that the pair may cross.
#[derive(Debug, Clone, PartialEq)]
pub struct Quantity {
    dimension: Dimension,
    nominal: f64,
    worst: Pair,
    likely: Pair,
    kind: Pair,
    evidence: BTreeMap<Key, Arc<Evidence>>,
    ranged_facts: BTreeSet<Key>,
    guesses: BTreeMap<Key, Guess>,
    missing: BTreeMap<Key, Arc<Evidence>>,
}

impl Quantity {
    /// A constant without evidence: a number in a formula.
    #[must_use]
    pub fn constant(dimension: Dimension, value: f64) -> Self {
        let pair = Pair::new(value, value);
        Self {
            dimension,
            nominal: value,
            worst: pair,
            likely: pair,
            kind: pair,
            evidence: BTreeMap::new(),
            ranged_facts: BTreeSet::new(),
            guesses: BTreeMap::new(),
            missing: BTreeMap::new(),
        }
    }

    /// A figure with its evidence. Whether it is a fact or a guess follows from the evidence's grade; `limits` are
    /// what is physically possible and matter for guesses only (they are widened to hold the range).
    #[must_use]
    pub fn given(dimension: Dimension, range: Range, limits: Pair, evidence: Evidence) -> Self {
        let mut figure = Self::constant(dimension, range.nominal());
        figure.worst = Pair::new(range.low(), range.high());
        let evidence = Arc::new(evidence);
        let key = evidence.key.clone();
        if evidence.grade.is_fact() {
            figure.likely = figure.worst;
            figure.kind = figure.worst;
            if !range.is_exact() {
                figure.ranged_facts.insert(key.clone());
            }
        } else {
            let limits = Pair::new(limits.low().min(range.low()), limits.high().max(range.high()));
            figure.kind = limits.reversed();
            let guess = Guess { evidence: Arc::clone(&evidence), moves: range.high() - range.low() };
            figure.guesses.insert(key.clone(), guess);
        }
        figure.evidence.insert(key, evidence);
        figure
    }

    /// A fact: declared, drawn, published or described. A guess's grade in `evidence` makes it a guess whose limits
    /// are those of its dimension.
    #[must_use]
    pub fn fact(dimension: Dimension, range: Range, evidence: Evidence) -> Self {
        Self::given(dimension, range, physical(dimension), evidence)
    }

    /// A figure that nothing tells: any value within `limits`.
    #[must_use]
    pub fn missing(dimension: Dimension, limits: Pair, evidence: Evidence) -> Self {
        let mut figure = Self::constant(dimension, 0.0);
        let evidence = Arc::new(evidence);
        figure.worst = limits;
        figure.likely = limits;
        figure.kind = limits.reversed();
        figure.nominal = f64::NAN;
        figure.missing.insert(evidence.key.clone(), evidence);
        figure
    }

    /// A figure computed from others by a formula that rises or falls with each input. Each input enters the formula
    /// once, so that bounds are exact: this is how figures that share a fact are computed jointly.
    ///
    /// For such formulas the reversed bounds follow the same ends (Kaucher's extension of a monotone function).
    #[must_use]
    pub fn monotone(dimension: Dimension, inputs: &[(&Quantity, Slope)], formula: impl Fn(&[f64]) -> f64) -> Self {
        let ends = |pick: &dyn Fn(&Quantity) -> Pair, low: bool| {
            let values: Vec<f64> = inputs
                .iter()
                .map(|(input, slope)| {
                    let pair = pick(input);
                    if low == (*slope == Slope::Rising) { pair.low() } else { pair.high() }
                })
                .collect();
            formula(&values)
        };
        let mut figure = Self::constant(dimension, 0.0);
        figure.worst = Pair::new(ends(&Quantity::worst, true), ends(&Quantity::worst, false));
        figure.likely = Pair::new(ends(&Quantity::likely, true), ends(&Quantity::likely, false));
        figure.kind = Pair::kind(ends(&Quantity::kind, true), ends(&Quantity::kind, false));
        let nominals: Vec<f64> = inputs.iter().map(|(input, _)| input.nominal).collect();
        figure.nominal = formula(&nominals);
        for (index, (input, _)) in inputs.iter().enumerate() {
            figure.inherit(input);
            figure.inherit_guesses(input, swing(&formula, &nominals, index, input.worst));
        }
        figure
    }

    /// The same bounds and value with more evidence behind it.
    #[must_use]
    pub fn also_resting_on(mut self, other: &Quantity) -> Self {
        self.inherit(other);
        self
    }

    fn inherit(&mut self, other: &Quantity) {
        self.evidence.extend(other.evidence.iter().map(|(key, evidence)| (key.clone(), Arc::clone(evidence))));
        self.ranged_facts.extend(other.ranged_facts.iter().cloned());
        self.missing.extend(other.missing.iter().map(|(key, evidence)| (key.clone(), Arc::clone(evidence))));
    }

    /// Takes over the guesses of an input which, moved over its whole range, moves this figure by `swing`.
    fn inherit_guesses(&mut self, input: &Quantity, swing: f64) {
        let total: f64 = input.guesses.values().map(|guess| guess.moves).sum();
        for (key, guess) in &input.guesses {
            let share = if total > 0.0 && total.is_finite() { guess.moves / total } else { 1.0 };
            let moves = if swing.is_nan() { 0.0 } else { swing.abs() * share };
            self.guesses
                .entry(key.clone())
                .and_modify(|known| known.moves += moves)
                .or_insert_with(|| Guess { evidence: Arc::clone(&guess.evidence), moves });
        }
    }

    /// What it measures.
    #[must_use]
    pub fn dimension(&self) -> Dimension {
        self.dimension
    }

    /// The nominal value: facts and guesses at nominal. `None` where a figure is missing.
    #[must_use]
    pub fn nominal(&self) -> Option<f64> {
        (self.missing.is_empty() && self.nominal.is_finite()).then_some(self.nominal)
    }

    /// Facts and guesses over their ranges.
    #[must_use]
    pub fn worst(&self) -> Pair {
        self.worst
    }

    /// Facts over their range, guesses at nominal.
    #[must_use]
    pub fn likely(&self) -> Pair {
        if self.is_missing() { self.worst } else { self.likely }
    }

    /// Facts over their range, guesses reversed over what is physically possible: the pair may cross.
    #[must_use]
    pub fn kind(&self) -> Pair {
        self.kind
    }

    /// Whether a figure behind it is missing.
    #[must_use]
    pub fn is_missing(&self) -> bool {
        !self.missing.is_empty()
    }

    /// What is missing behind it, in a stable order.
    pub fn missing_evidence(&self) -> impl Iterator<Item = &Evidence> {
        self.missing.values().map(AsRef::as_ref)
    }

    /// The facts and guesses behind it, in a stable order.
    pub fn evidence(&self) -> impl Iterator<Item = &Evidence> {
        self.evidence.values().map(AsRef::as_ref)
    }

    /// The guesses behind it, in a stable order.
    pub fn guesses(&self) -> impl Iterator<Item = &Guess> {
        self.guesses.values()
    }

    /// The weakest grade behind it; `None` for a constant.
    #[must_use]
    pub fn grade(&self) -> Option<Grade> {
        self.evidence.values().map(|evidence| evidence.grade).max()
    }

    /// Whether a fact that has a range stands behind both figures.
    #[must_use]
    pub fn shares_a_ranged_fact(&self, other: &Quantity) -> bool {
        self.ranged_facts.intersection(&other.ranged_facts).next().is_some()
    }

    /// The range to show: worst bounds around the nominal value; `None` where a figure is missing.
    #[must_use]
    pub fn shown(&self) -> Option<Range> {
        self.nominal().map(|nominal| Range::clamped(self.worst.low(), nominal, self.worst.high()))
    }
}

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
        figure.ranged_facts.clear();
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

/// How far a formula moves when one input goes over its worst bounds and the others stay at nominal.
fn swing(formula: impl Fn(&[f64]) -> f64, nominals: &[f64], index: usize, bounds: Pair) -> f64 {
    let at = |end: f64| {
        let mut values = nominals.to_vec();
        if let Some(value) = values.get_mut(index) {
            *value = end;
        }
        formula(&values)
    };
    at(bounds.high()) - at(bounds.low())
}

/// What is physically possible for a figure of a dimension.
fn physical(dimension: Dimension) -> Pair {
    if dimension.is_never_negative() { Pair::NOT_NEGATIVE } else { Pair::ANY }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn evidence(grade: Grade, what: &str) -> Evidence {
        Evidence::new(grade, what, "test")
    }

    #[test]
    fn a_guess_is_reversed_over_its_limits_and_a_fact_is_not() {
        let range = Range::new(1.0, 2.0, 4.0).unwrap();
        let fact = Quantity::given(Dimension::VOLTAGE, range, Pair::ANY, evidence(Grade::Drawn, "a"));
        assert_eq!(fact.kind(), Pair::new(1.0, 4.0));
        let guess = Quantity::given(Dimension::VOLTAGE, range, Pair::new(0.0, 9.0), evidence(Grade::Inferred, "b"));
        assert_eq!(guess.kind(), Pair::new(9.0, 0.0));
        assert_eq!(guess.likely(), Pair::new(2.0, 2.0));
        assert_eq!(guess.worst(), Pair::new(1.0, 4.0));
    }

    #[test]
    fn a_difference_takes_opposite_ends_and_keeps_what_each_guess_moves() {
        let fact = Quantity::fact(Dimension::VOLTAGE, Range::between(4.0, 5.0), evidence(Grade::Declared, "in"));
        let guess = Quantity::given(
            Dimension::VOLTAGE,
            Range::new(3.2, 3.3, 3.6).unwrap(),
            Pair::ANY,
            evidence(Grade::Inferred, "out"),
        );
        let headroom = fact.minus(&guess);
        assert!((headroom.worst().low() - 0.4).abs() < 1e-12);
        assert!((headroom.likely().low() - 0.7).abs() < 1e-12);
        assert_eq!(headroom.kind().low(), f64::INFINITY);
        let moves: Vec<f64> = headroom.guesses().map(|guess| guess.moves).collect();
        assert!(moves.len() == 1 && (moves[0] - 0.4).abs() < 1e-12);
    }

    #[test]
    fn a_missing_figure_has_no_nominal_and_keeps_its_limits() {
        let figure = Quantity::missing(Dimension::CURRENT, Pair::new(0.0, 1.0), evidence(Grade::Assumed, "load"));
        let twice = figure.scaled(2.0);
        assert!(twice.is_missing() && twice.nominal().is_none() && twice.shown().is_none());
        assert_eq!(twice.worst(), Pair::new(0.0, 2.0));
        assert_eq!(twice.kind(), Pair::new(2.0, 0.0));
    }

    #[test]
    fn a_reciprocal_of_a_figure_that_can_be_zero_claims_nothing() {
        let figure = Quantity::fact(Dimension::VOLTAGE, Range::between(-1.0, 1.0), evidence(Grade::Declared, "v"));
        let reciprocal = figure.reciprocal();
        assert_eq!(reciprocal.worst(), Pair::ANY);
        assert_eq!(reciprocal.kind(), Pair::ANY.reversed());
    }
}
