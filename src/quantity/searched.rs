//! Figures computed by a formula that may turn within the ranges of its inputs.

use super::figure::swing;
use super::{Dimension, Pair, Quantity};

/// Inputs whose ends are taken in every combination: those that move the formula most.
const MOST_CORNERS: usize = 4;
/// Inputs along which the search goes; the others stand at the end that is worse for each alone.
const MOST_SEARCHED: usize = 8;
/// How often it goes through them.
const MOST_ROUNDS: usize = 8;
/// The first and the last step of the search from the best corner, as shares of an input's range.
const STEPS: (f64, f64) = (0.25, 0.03);

impl Quantity {
    /// A figure computed from others by a formula that need not rise or fall with each: its bounds are looked for at the
    /// ends of the inputs, at their nominals and, from the best of these, inside. A value that is no number counts as none.
    ///
    /// The search can miss how far the formula goes, so that what rests on any guess claims no failure: its reversed bounds
    /// are `limits`, what is physically possible.
    #[must_use]
    pub fn searched(
        dimension: Dimension,
        inputs: &[&Quantity],
        limits: Pair,
        formula: impl Fn(&[f64]) -> f64,
    ) -> Self {
        let mut nominals: Vec<f64> = inputs.iter().map(|input| input.nominal).collect();
        let known = inputs.iter().all(|input| !input.is_missing());
        let mut figure = Self::constant(dimension, if known { formula(&nominals) } else { f64::NAN });
        let guessed = !known || inputs.iter().any(|input| !input.guesses.is_empty());
        figure.worst = limits;
        if known {
            figure.worst = bounds(inputs, &nominals, Quantity::worst, &formula).unwrap_or(limits);
        }
        figure.likely = figure.worst;
        if known && guessed {
            figure.likely = bounds(inputs, &nominals, Quantity::likely, &formula).unwrap_or(limits);
        }
        figure.kind = if guessed { limits.reversed() } else { figure.worst };
        for (index, input) in inputs.iter().enumerate() {
            figure.inherit(input);
            if !input.guesses.is_empty() {
                let moved = if known { swing(&formula, &mut nominals, index, input.worst) } else { 0.0 };
                figure.inherit_guesses(input, moved);
            }
        }
        figure
    }
}

/// The least and the largest value over the inputs' bounds that `pick` names; `None` where there is none.
fn bounds(
    inputs: &[&Quantity],
    nominals: &[f64],
    pick: impl Fn(&Quantity) -> Pair,
    formula: &impl Fn(&[f64]) -> f64,
) -> Option<Pair> {
    let ranges: Vec<Pair> = inputs.iter().map(|input| pick(input)).collect();
    let search = Search { nominals, ranges: &ranges, formula };
    let (low, high) = (search.extreme(1.0)?, search.extreme(-1.0)?);
    Some(Pair::new(low.min(high), high.max(low)))
}

struct Search<'a, F> {
    nominals: &'a [f64],
    ranges: &'a [Pair],
    formula: &'a F,
}

impl<F: Fn(&[f64]) -> f64> Search<'_, F> {
    /// The least value of the formula where `sign` is 1, the largest where it is −1.
    fn extreme(&self, sign: f64) -> Option<f64> {
        let value = |point: &[f64]| {
            let value = sign * (self.formula)(point);
            if value.is_nan() { f64::INFINITY } else { value }
        };
        let ranged = self.ranged(&value);
        let mut best = self.inside(self.nominals);
        let mut least = value(&best);
        let mut start = best.clone();
        for (index, end, _) in ranged.iter().skip(MOST_SEARCHED) {
            self.put(&mut start, *index, *end);
        }
        for corner in 0..1_u32 << ranged.len().min(MOST_CORNERS) {
            let mut point = start.clone();
            for (bit, (index, ..)) in ranged.iter().take(MOST_CORNERS).enumerate() {
                self.put(&mut point, *index, if corner >> bit & 1 == 1 { 1.0 } else { 0.0 });
            }
            let found = value(&point);
            if found < least {
                (best, least) = (point, found);
            }
        }
        let mut step = STEPS.0;
        for _ in 0..MOST_ROUNDS {
            let mut moved = false;
            for (index, ..) in ranged.iter().take(MOST_SEARCHED) {
                for by in [-step, step] {
                    let mut point = best.clone();
                    let share = self.share(&point, *index);
                    self.put(&mut point, *index, (share + by).clamp(0.0, 1.0));
                    let found = value(&point);
                    if found < least {
                        (best, least, moved) = (point, found, true);
                    }
                }
            }
            if !moved {
                step /= 2.0;
            }
            if step < STEPS.1 {
                break;
            }
        }
        least.is_finite().then_some(sign * least)
    }

    /// The inputs that have a range, the one that moves the formula most first: which of its ends, as a share, has the
    /// lower value, and how far it moves it.
    fn ranged(&self, value: &impl Fn(&[f64]) -> f64) -> Vec<(usize, f64, f64)> {
        let moves = |index: usize| {
            let at = |share: f64| {
                let mut point = self.inside(self.nominals);
                self.put(&mut point, index, share);
                value(&point)
            };
            let (low, high) = (at(0.0), at(1.0));
            let moved = (high - low).abs();
            (index, if high < low { 1.0 } else { 0.0 }, if moved.is_nan() { f64::INFINITY } else { moved })
        };
        let wide = self.ranges.iter().enumerate().filter(|(_, range)| range.width() > 0.0);
        let mut found: Vec<(usize, f64, f64)> = wide.map(|(index, _)| moves(index)).collect();
        found.sort_by(|one, other| other.2.total_cmp(&one.2));
        found
    }

    fn inside(&self, point: &[f64]) -> Vec<f64> {
        let pairs = point.iter().zip(self.ranges);
        pairs.map(|(value, range)| value.max(range.low()).min(range.high())).collect()
    }

    /// Puts an input at a share of its way from its low to its high end: by its logarithm where it is above zero.
    fn put(&self, point: &mut [f64], index: usize, share: f64) {
        let (Some(value), Some(range)) = (point.get_mut(index), self.ranges.get(index)) else { return };
        let (low, high) = (range.low(), range.high());
        let inner = if low > 0.0 { low * (high / low).powf(share) } else { low + (high - low) * share };
        *value = if share <= 0.0 {
            low
        } else if share >= 1.0 {
            high
        } else {
            inner
        };
    }

    fn share(&self, point: &[f64], index: usize) -> f64 {
        let (Some(value), Some(range)) = (point.get(index), self.ranges.get(index)) else { return 0.0 };
        let (low, high) = (range.low(), range.high());
        let share = if low > 0.0 { (value / low).ln() / (high / low).ln() } else { (value - low) / (high - low) };
        if share.is_nan() { 0.0 } else { share.clamp(0.0, 1.0) }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::quantity::{Evidence, Grade, Range};

    fn figure(grade: Grade, range: (f64, f64, f64), what: &str) -> Quantity {
        let range = Range::clamped(range.0, range.1, range.2);
        Quantity::given(Dimension::RESISTANCE, range, Pair::NOT_NEGATIVE, Evidence::new(grade, what, "test"))
    }

    /// Largest, 10, where the input is 2.
    fn hill(values: &[f64]) -> f64 {
        10.0 - (values[0].ln() - 2_f64.ln()).powi(2)
    }

    #[test]
    fn a_peak_between_the_ends_is_found() {
        let esr = figure(Grade::Declared, (0.1, 0.5, 100.0), "esr");
        let found = Quantity::searched(Dimension::ONE, &[&esr], Pair::ANY, hill);
        assert!((found.worst().low() - hill(&[100.0])).abs() < 1e-12);
        assert!((found.worst().high() - 10.0).abs() < 0.02, "{found:?}");
        assert_eq!((found.likely(), found.kind()), (found.worst(), found.worst()));
        assert!((found.nominal().unwrap() - hill(&[0.5])).abs() < 1e-12);
    }

    #[test]
    fn a_guess_claims_nothing_and_is_told_with_what_it_moves() {
        let fact = figure(Grade::Declared, (1.0, 2.0, 4.0), "fact");
        let guess = figure(Grade::Assumed, (1.0, 3.0, 5.0), "guess");
        let limits = Pair::new(0.0, 100.0);
        let found = Quantity::searched(Dimension::ONE, &[&fact, &guess], limits, |v| v[0] + v[1]);
        assert_eq!(found.worst(), Pair::new(2.0, 9.0));
        assert_eq!(found.likely(), Pair::new(4.0, 7.0));
        assert_eq!(found.kind(), limits.reversed());
        let moves: Vec<f64> = found.guesses().map(|guess| guess.moves).collect();
        assert_eq!(moves, [4.0]);
    }

    #[test]
    fn a_missing_input_leaves_the_limits() {
        let evidence = Evidence::new(Grade::Assumed, "load", "test");
        let missing = Quantity::missing(Dimension::CURRENT, Pair::NOT_NEGATIVE, evidence);
        let limits = Pair::new(-180.0, 180.0);
        let found = Quantity::searched(Dimension::ANGLE, &[&missing], limits, |v| v[0]);
        assert!(found.is_missing() && found.nominal().is_none());
        assert_eq!((found.worst(), found.kind()), (limits, limits.reversed()));
    }

    #[test]
    fn many_inputs_are_searched_beyond_the_corners() {
        let all: Vec<Quantity> =
            (0..11).map(|n| figure(Grade::Declared, (1.0, 2.0, 3.0), &format!("input {n}"))).collect();
        let inputs: Vec<&Quantity> = all.iter().collect();
        let found = Quantity::searched(Dimension::ONE, &inputs, Pair::ANY, |v| v.iter().sum());
        assert!((found.worst().low() - 11.0).abs() < 1e-9 && (found.worst().high() - 33.0).abs() < 1e-9);
    }
}
