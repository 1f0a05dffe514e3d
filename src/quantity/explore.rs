//! Figures by formulas whose slopes nobody knows: circuits that are solved.

use super::{Dimension, Pair, Quantity};

/// The share of a figure's own size below which an input does not move it.
const STILL: f64 = 1e-7;
/// The share of a figure's range below which what an input does to it is not told.
const MINUTE: f64 = 1e-3;
/// An input over which a figure is looked at between its ends too: its high end over its low one.
const WIDE: f64 = 2.0;
/// Of how many inputs, those that move the figure most, the joint ends are tried once more, one by one.
const TRIED_AGAIN: usize = 6;

/// What one input does to a figure.
#[derive(Debug, Clone, Copy)]
struct Course {
    /// Where the figure is least and where it is largest, as values of the input.
    least: Place,
    most: Place,
    /// How far it moves.
    swing: f64,
}

/// A value within an input's range.
#[derive(Debug, Clone, Copy, PartialEq)]
enum Place {
    Low,
    Nominal,
    High,
    /// Between an end and the nominal value.
    At(f64),
}

/// The pair of bounds of an input that is looked at.
type Pick = fn(&Quantity) -> Pair;

impl Place {
    fn of(self, pair: Pair, nominal: f64) -> f64 {
        match self {
            Self::Low => pair.low(),
            Self::High => pair.high(),
            Self::Nominal => nominal,
            // Guesses lie at their nominal value in one of the pairs.
            Self::At(value) => value.clamp(pair.low().min(pair.high()), pair.low().max(pair.high())),
        }
    }
}

struct Explorer<'a, E> {
    inputs: &'a [&'a Quantity],
    formula: &'a mut dyn FnMut(&[f64]) -> Result<f64, E>,
    courses: Vec<Course>,
    nominals: Vec<f64>,
    nominal: f64,
    least: f64,
    most: f64,
}

impl Quantity {
    /// A figure computed from others by a formula of which nothing is known but that it is continuous. Each input is moved
    /// alone over its range, with values between the ends where that is wide, since some figures peak inside; the ends
    /// found so are taken together, and those that matter most are each tried the other way once more.
    ///
    /// The reversed bounds follow the same ends; where a guess that moves the figure has no finite limits, nothing is
    /// claimed by them.
    ///
    /// # Errors
    /// The first error of the formula.
    pub fn explored<E>(
        dimension: Dimension,
        inputs: &[&Quantity],
        mut formula: impl FnMut(&[f64]) -> Result<f64, E>,
    ) -> Result<Self, E> {
        if inputs.iter().any(|input| input.is_missing()) {
            return Ok(Self::unknown(dimension, inputs));
        }
        let nominals: Vec<f64> = inputs.iter().map(|input| input.nominal).collect();
        let nominal = formula(&nominals)?;
        let mut explorer = Explorer {
            inputs,
            formula: &mut formula,
            courses: Vec::with_capacity(inputs.len()),
            nominals,
            nominal,
            least: nominal,
            most: nominal,
        };
        for index in 0..inputs.len() {
            let course = explorer.course(index)?;
            explorer.courses.push(course);
        }
        let mut figure = Self::constant(dimension, nominal);
        let low = explorer.joint(Self::worst, true)?;
        let high = explorer.joint(Self::worst, false)?;
        let (low, high) = (explorer.again(low, true)?, explorer.again(high, false)?);
        let likely = (explorer.joint(Self::likely, true)?, explorer.joint(Self::likely, false)?);
        figure.likely = Pair::new(likely.0.min(nominal), likely.1.max(nominal));
        let (low, high) = (low.min(explorer.least), high.max(explorer.most));
        figure.worst = Pair::new(low.min(figure.likely.low()), high.max(figure.likely.high()));
        // What fails whatever the guesses are fails with likely ones, though a course may bend beyond its range.
        let kind = explorer.kind()?;
        figure.kind = Pair::kind(kind.low().max(figure.likely.low()), kind.high().min(figure.likely.high()));
        let told = MINUTE * explorer.courses.iter().map(|course| course.swing).fold(0.0, f64::max);
        for (input, course) in inputs.iter().zip(&explorer.courses) {
            figure.take_over(input, if course.swing > told { course.swing } else { 0.0 });
        }
        Ok(figure)
    }

    /// A figure of which an input is missing.
    fn unknown(dimension: Dimension, inputs: &[&Quantity]) -> Self {
        let mut figure = Self::constant(dimension, f64::NAN);
        (figure.worst, figure.likely, figure.kind) = (Pair::ANY, Pair::ANY, Pair::ANY.reversed());
        for input in inputs {
            figure.take_over(input, f64::INFINITY);
        }
        figure
    }
}

impl<E> Explorer<'_, E> {
    /// The figure with one input at a value and the others nominal.
    fn alone(&mut self, index: usize, value: f64) -> Result<f64, E> {
        let mut values = self.nominals.clone();
        if let Some(own) = values.get_mut(index) {
            *own = value;
        }
        let found = (self.formula)(&values)?;
        self.least = self.least.min(found);
        self.most = self.most.max(found);
        Ok(found)
    }

    fn course(&mut self, index: usize) -> Result<Course, E> {
        let still = Course { least: Place::Nominal, most: Place::Nominal, swing: 0.0 };
        let Some(input) = self.inputs.get(index) else { return Ok(still) };
        let (pair, nominal) = (input.worst, input.nominal);
        if pair.width() <= 0.0 {
            return Ok(still);
        }
        let mut places = vec![(Place::Nominal, self.nominal)];
        for (place, end) in [(Place::Low, pair.low()), (Place::High, pair.high())] {
            if end == nominal {
                places.push((place, self.nominal));
                continue;
            }
            places.push((place, self.alone(index, end)?));
            if pair.low() > 0.0 && pair.high() / pair.low() > WIDE {
                let between = (end * nominal).sqrt();
                places.push((Place::At(between), self.alone(index, between)?));
            }
        }
        let by_figure = |one: &&(Place, f64), other: &&(Place, f64)| one.1.total_cmp(&other.1);
        // Of equal places the end counts, so that what a flat course would do beyond it is still asked.
        let least = places.iter().rev().min_by(by_figure).copied();
        let most = places.iter().max_by(by_figure).copied();
        let (Some((least, low)), Some((most, high))) = (least, most) else { return Ok(still) };
        let swing = high - low;
        if swing <= STILL * self.nominal.abs() { Ok(still) } else { Ok(Course { least, most, swing }) }
    }

    fn values(&self, pick: Pick, low: bool) -> Vec<f64> {
        let each = self.inputs.iter().zip(&self.courses).zip(&self.nominals);
        each.map(|((input, course), nominal)| {
            let place = if low { course.least } else { course.most };
            place.of(pick(input), *nominal)
        })
        .collect()
    }

    fn joint(&mut self, pick: Pick, low: bool) -> Result<f64, E> {
        let values = self.values(pick, low);
        if values == self.nominals { Ok(self.nominal) } else { (self.formula)(&values) }
    }

    /// The joint end, with each of the inputs that matter most tried the other way.
    fn again(&mut self, joint: f64, low: bool) -> Result<f64, E> {
        let mut order: Vec<(usize, f64)> =
            self.courses.iter().map(|course| course.swing).enumerate().filter(|(_, swing)| *swing > 0.0).collect();
        if order.len() < 2 {
            return Ok(joint);
        }
        order.sort_by(|one, other| other.1.total_cmp(&one.1));
        let mut values = self.values(Quantity::worst, low);
        let mut best = joint;
        for (index, _) in order.into_iter().take(TRIED_AGAIN) {
            let (Some(input), Some(own)) = (self.inputs.get(index), values.get(index).copied()) else { continue };
            let other = if own == input.worst.low() { input.worst.high() } else { input.worst.low() };
            let mut set = |value: f64| {
                if let Some(place) = values.get_mut(index) {
                    *place = value;
                }
            };
            set(other);
            let found = (self.formula)(&values)?;
            if (low && found < best) || (!low && found > best) {
                best = found;
            } else if let Some(place) = values.get_mut(index) {
                *place = own;
            }
        }
        Ok(best)
    }

    /// The reversed bounds.
    fn kind(&mut self) -> Result<Pair, E> {
        let moved = |input: &Quantity, course: &Course| course.swing > 0.0 && !input.guesses.is_empty();
        let open = self.inputs.iter().zip(&self.courses).any(|(input, course)| {
            let finite = input.kind.low().is_finite() && input.kind.high().is_finite();
            let at_end = |place: Place| matches!(place, Place::Low | Place::High);
            moved(input, course) && !(finite && at_end(course.least) && at_end(course.most))
        });
        if open {
            return Ok(Pair::ANY.reversed());
        }
        Ok(Pair::kind(self.joint(Quantity::kind, true)?, self.joint(Quantity::kind, false)?))
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::quantity::{Evidence, Grade, Range};
    use proptest::prelude::*;
    use std::convert::Infallible;

    fn input(grade: Grade, range: (f64, f64, f64), limits: Pair, what: &str) -> Quantity {
        let range = Range::clamped(range.0, range.1, range.2);
        Quantity::given(Dimension::VOLTAGE, range, limits, Evidence::new(grade, what, "test"))
    }

    fn explored(inputs: &[&Quantity], formula: impl Fn(&[f64]) -> f64) -> Quantity {
        let found = Quantity::explored(Dimension::VOLTAGE, inputs, |values| Ok::<f64, Infallible>(formula(values)));
        found.unwrap_or_else(|never| match never {})
    }

    #[test]
    fn a_peak_inside_a_wide_range_is_found() {
        let esr = input(Grade::Declared, (0.01, 1.0, 100.0), Pair::NOT_NEGATIVE, "esr");
        // Largest at one, least at both ends.
        let figure = explored(&[&esr], |v| match v {
            [esr] => -esr.ln().abs(),
            _ => f64::NAN,
        });
        assert_eq!(figure.worst().high(), 0.0);
        assert!((figure.worst().low() + 100_f64.ln()).abs() < 1e-12);
        assert_eq!(figure.kind(), figure.worst());
    }

    #[test]
    fn a_guess_without_limits_claims_nothing_and_one_that_does_not_matter_is_left_out() {
        let gain = input(Grade::Assumed, (20.0, 30.0, 50.0), Pair::NOT_NEGATIVE, "gain");
        let idle = input(Grade::Assumed, (1.0, 2.0, 3.0), Pair::NOT_NEGATIVE, "idle");
        let supply = input(Grade::Declared, (4.0, 5.0, 6.0), Pair::ANY, "supply");
        let figure = explored(&[&gain, &idle, &supply], |v| match v {
            [gain, _, supply] => supply - 1.0 / gain,
            _ => f64::NAN,
        });
        assert_eq!(figure.kind(), Pair::ANY.reversed());
        assert!((figure.likely().low() - (4.0 - 1.0 / 30.0)).abs() < 1e-12);
        let told: Vec<&str> = figure.evidence().map(|evidence| evidence.what.as_str()).collect();
        assert_eq!(told, ["gain", "supply"]);
        let moves: Vec<f64> = figure.guesses().map(|guess| guess.moves).collect();
        assert!(moves.len() == 1 && (moves[0] - 0.03).abs() < 1e-12);
    }

    #[test]
    fn an_error_of_the_formula_is_passed_on() {
        let one = input(Grade::Declared, (1.0, 2.0, 3.0), Pair::ANY, "one");
        let found = Quantity::explored(Dimension::VOLTAGE, &[&one], |v| match v {
            [value] if *value < 3.0 => Ok(*value),
            _ => Err("too much"),
        });
        assert_eq!(found, Err("too much"));
    }

    proptest! {
        /// Where a formula rises or falls with each input, the bounds are those of the exact rule.
        #[test]
        fn monotone_formulas_get_their_exact_bounds(
            a in (1.0..9.0f64, 0.0..2.0f64, 0.0..2.0f64), b in (1.0..9.0f64, 0.0..2.0f64, 0.0..2.0f64), guess: bool,
        ) {
            use crate::quantity::Slope;
            let grade = if guess { Grade::Assumed } else { Grade::Declared };
            let one = input(grade, (a.0, a.0 + a.1, a.0 + a.1 + a.2), Pair::new(0.5, 20.0), "a");
            let other = input(Grade::Drawn, (b.0, b.0 + b.1, b.0 + b.1 + b.2), Pair::ANY, "b");
            let formula = |v: &[f64]| match v {
                [a, b] => a / b,
                _ => f64::NAN,
            };
            let found = explored(&[&one, &other], formula);
            let exact =
                Quantity::monotone(Dimension::VOLTAGE, &[(&one, Slope::Rising), (&other, Slope::Falling)], formula);
            for (own, wanted) in [
                (found.worst(), exact.worst()), (found.likely(), exact.likely()),
            ] {
                prop_assert!((own.low() - wanted.low()).abs() < 1e-9 && (own.high() - wanted.high()).abs() < 1e-9);
            }
            // The reversed bounds claim no more than the exact ones.
            prop_assert!(found.kind().low() >= exact.kind().low().max(exact.likely().low()) - 1e-9);
            prop_assert!(found.kind().high() <= exact.kind().high().min(exact.likely().high()) + 1e-9);
        }
    }
}
