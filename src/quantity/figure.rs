//! A figure with its three pairs of bounds.

use std::sync::Arc;

use super::ledger::Ledger;
use super::{Dimension, Evidence, Grade, Pair, Range};

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
    pub(super) dimension: Dimension,
    pub(super) nominal: f64,
    pub(super) worst: Pair,
    pub(super) likely: Pair,
    pub(super) kind: Pair,
    evidence: Ledger<Arc<Evidence>>,
    pub(super) ranged_facts: Ledger<()>,
    pub(super) guesses: Ledger<Guess>,
    missing: Ledger<Arc<Evidence>>,
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
            evidence: Ledger::EMPTY,
            ranged_facts: Ledger::EMPTY,
            guesses: Ledger::EMPTY,
            missing: Ledger::EMPTY,
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
                figure.ranged_facts = Ledger::of(key.clone(), ());
            }
        } else {
            let limits = Pair::new(limits.low().min(range.low()), limits.high().max(range.high()));
            figure.kind = limits.reversed();
            let guess = Guess { evidence: Arc::clone(&evidence), moves: range.high() - range.low() };
            figure.guesses = Ledger::of(key.clone(), guess);
        }
        figure.evidence = Ledger::of(key, evidence);
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
        figure.missing = Ledger::of(evidence.key.clone(), evidence);
        figure
    }

    /// A figure computed from others by a formula that rises or falls with each input. Each input enters the formula
    /// once, so that bounds are exact: this is how figures that share a fact are computed jointly.
    ///
    /// For such formulas the reversed bounds follow the same ends (Kaucher's extension of a monotone function).
    #[must_use]
    pub fn monotone(dimension: Dimension, inputs: &[(&Quantity, Slope)], formula: impl Fn(&[f64]) -> f64) -> Self {
        let mut values = vec![0.0; inputs.len()];
        let mut ends = |pick: &dyn Fn(&Quantity) -> Pair, low: bool| {
            for (value, (input, slope)) in values.iter_mut().zip(inputs) {
                let pair = pick(input);
                *value = if low == (*slope == Slope::Rising) { pair.low() } else { pair.high() };
            }
            formula(&values)
        };
        let mut figure = Self::constant(dimension, 0.0);
        figure.worst = Pair::new(ends(&Quantity::worst, true), ends(&Quantity::worst, false));
        figure.likely = Pair::new(ends(&Quantity::likely, true), ends(&Quantity::likely, false));
        figure.kind = Pair::kind(ends(&Quantity::kind, true), ends(&Quantity::kind, false));
        for (value, (input, _)) in values.iter_mut().zip(inputs) {
            *value = input.nominal;
        }
        figure.nominal = formula(&values);
        for (index, (input, _)) in inputs.iter().enumerate() {
            figure.inherit(input);
            if !input.guesses.is_empty() {
                let swing = swing(&formula, &mut values, index, input.worst);
                figure.inherit_guesses(input, swing);
            }
        }
        figure
    }

    /// The same bounds and value with more evidence behind it.
    #[must_use]
    pub fn also_resting_on(mut self, other: &Quantity) -> Self {
        self.inherit(other);
        self
    }

    /// The same figure, which rests on another one too that is held at one value for it: over the range of that one it says
    /// nothing.
    #[must_use]
    pub fn also_held_at(mut self, other: &Quantity) -> Self {
        self.evidence.take_over(&other.evidence, Arc::ptr_eq);
        self.missing.take_over(&other.missing, Arc::ptr_eq);
        self
    }

    pub(super) fn inherit(&mut self, other: &Quantity) {
        // Copies of one fact are one allocation; where they are not, the later one counts, as for any other.
        self.evidence.take_over(&other.evidence, Arc::ptr_eq);
        self.ranged_facts.take_over(&other.ranged_facts, |(), ()| true);
        self.missing.take_over(&other.missing, Arc::ptr_eq);
    }

    /// Takes over what an input rests on which, moved over its whole range, moves this figure by `swing`; one that could
    /// move it and does not is left out.
    pub(super) fn take_over(&mut self, input: &Quantity, swing: f64) {
        if swing > 0.0 || input.worst.width() <= 0.0 {
            self.inherit(input);
        }
        if swing > 0.0 && !input.guesses.is_empty() {
            self.inherit_guesses(input, swing);
        }
    }

    /// Takes over the guesses of an input which, moved over its whole range, moves this figure by `swing`. Facts take
    /// their part of that range: a guess gets no more of the swing than it moves of the input.
    pub(super) fn inherit_guesses(&mut self, input: &Quantity, swing: f64) {
        let total: f64 = input.guesses.values().map(|guess| guess.moves).sum();
        let whole = total.max(input.worst.width());
        let shared = input.guesses.map(|guess| {
            let share = match guess.moves {
                0.0 => 0.0,
                moves if whole.is_finite() => moves / whole,
                _ => 1.0,
            };
            let moves = if swing.is_nan() || share == 0.0 { 0.0 } else { swing.abs() * share };
            Guess { evidence: Arc::clone(&guess.evidence), moves }
        });
        self.guesses = if self.guesses.is_empty() {
            shared
        } else {
            self.guesses.joined(&shared, |known, more| Guess { moves: known.moves + more.moves, ..known.clone() })
        };
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
        self.ranged_facts.shares_a_key(&other.ranged_facts)
    }

    /// The range to show: worst bounds around the nominal value; `None` where a figure is missing.
    #[must_use]
    pub fn shown(&self) -> Option<Range> {
        self.nominal().map(|nominal| Range::clamped(self.worst.low(), nominal, self.worst.high()))
    }
}

/// How far a formula moves when one input goes over its worst bounds and the others stay at nominal.
pub(super) fn swing(formula: impl Fn(&[f64]) -> f64, nominals: &mut [f64], index: usize, bounds: Pair) -> f64 {
    let mut at = |end: f64| {
        let nominal = nominals.get_mut(index).map(|value| std::mem::replace(value, end));
        let moved = formula(nominals);
        if let (Some(value), Some(nominal)) = (nominals.get_mut(index), nominal) {
            *value = nominal;
        }
        moved
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
    fn a_guess_is_not_charged_with_what_the_facts_beside_it_move() {
        let exactly = |value| Range::new(value, value, value).unwrap();
        let supply = Quantity::fact(Dimension::VOLTAGE, Range::between(4.0, 6.0), evidence(Grade::Declared, "in"));
        let guess = |range| Quantity::given(Dimension::VOLTAGE, range, Pair::ANY, evidence(Grade::Assumed, "drop"));
        let moves = |drop: Quantity| {
            let twice = supply.minus(&drop).scaled(2.0);
            twice.guesses().map(|guess| guess.moves).sum::<f64>()
        };
        assert!((moves(guess(Range::between(0.0, 0.5))) - 1.0).abs() < 1e-12);
        assert_eq!(moves(guess(exactly(0.0))), 0.0);
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
