//! Phase and modulus margin of a loop.

#![allow(clippy::indexing_slicing, reason = "an index of three neighbours, which are there")]

use num_complex::Complex64;

use super::bank::Network;
use super::loop_gain::LoopGain;

/// The largest phase margin that there is, in degrees.
const ALL_PHASE: f64 = 180.0;

/// How far a loop is from oscillating.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Margins {
    /// Phase margin in degrees, −180 to 180: `180° + arg T` where `|T| = 1`, the least of all crossings; none where the
    /// gain crosses one nowhere.
    pub phase: Option<f64>,
    /// The frequency of that crossing in hertz.
    pub crossover: Option<f64>,
    /// Modulus margin: the least `|1 + T|`.
    pub modulus: f64,
    /// Where that is, in hertz.
    pub modulus_at: f64,
}

impl Margins {
    /// A loop that has all room there is.
    pub const BOUNDLESS: Self = Self { phase: None, crossover: None, modulus: f64::INFINITY, modulus_at: 0.0 };

    /// The phase margin in degrees; all the room there is, 180, where the gain crosses one nowhere.
    #[must_use]
    pub fn phase_or_all(&self) -> f64 {
        self.phase.unwrap_or(ALL_PHASE)
    }

    /// The worse of two, each margin for itself.
    #[must_use]
    pub fn worse(self, other: Self) -> Self {
        let (phase, crossover) = match (self.phase, other.phase) {
            (Some(own), Some(others)) if others < own => (other.phase, other.crossover),
            (None, Some(_)) => (other.phase, other.crossover),
            _ => (self.phase, self.crossover),
        };
        let (modulus, modulus_at) = if other.modulus < self.modulus {
            (other.modulus, other.modulus_at)
        } else {
            (self.modulus, self.modulus_at)
        };
        Self { phase, crossover, modulus, modulus_at }
    }

    fn crossing(&mut self, before: (f64, Complex64), after: (f64, Complex64)) {
        // Between two frequencies the gain is a straight line in logarithms, and so is the phase.
        let (first, second) = (before.1.norm().ln(), after.1.norm().ln());
        let share = if first == second { 0.0 } else { first / (first - second) };
        let phase = before.1.arg() + share * (after.1 / before.1).arg();
        let margin = wrapped(180.0 + phase.to_degrees());
        if self.phase.is_none_or(|least| margin < least) {
            self.phase = Some(margin);
            self.crossover = Some(before.0 * (after.0 / before.0).powf(share));
        }
    }
}

/// An angle in degrees, more than −180 and up to 180.
#[must_use]
pub fn wrapped(degrees: f64) -> f64 {
    let turned = (degrees + 180.0).rem_euclid(360.0) - 180.0;
    if turned == -180.0 { 180.0 } else { turned }
}

impl LoopGain {
    /// The margins with a network at the output.
    #[must_use]
    pub fn margins(&self, network: &Network) -> Margins {
        let gains = self.terms().iter().map(|term| {
            let (over, under) = term.with(network.admittance(term.hertz));
            (term.hertz, over, under)
        });
        margins(gains)
    }
}

/// The margins of a loop whose gain is given as numerator and denominator over rising frequencies in hertz.
pub fn margins(gains: impl Iterator<Item = (f64, Complex64, Complex64)>) -> Margins {
    let mut found = Margins::BOUNDLESS;
    let mut before: Option<(f64, Complex64, Complex64, bool)> = None;
    // The last three squares of |1 + T|, and where they are.
    let mut recent = [(0.0, f64::INFINITY); 3];
    let mut least = f64::INFINITY;
    for (hertz, over, under) in gains {
        let (size, square) = (over.norm_sqr(), under.norm_sqr());
        let above = size > square;
        if let Some((last_hertz, last_over, last_under, was_above)) = before
            && was_above != above
        {
            found.crossing((last_hertz, last_over / last_under), (hertz, over / under));
        }
        before = Some((hertz, over, under, above));
        recent = [recent[1], recent[2], (hertz, (over + under).norm_sqr() / square)];
        let middle = recent[1].1;
        if middle <= least && middle <= recent[0].1 && middle <= recent[2].1 {
            let (at, value) = vertex(recent);
            least = middle;
            (found.modulus, found.modulus_at) = (value.max(0.0).sqrt(), at);
        }
    }
    // The ends have no neighbours beyond.
    if recent[2].1 < least {
        (found.modulus, found.modulus_at) = (recent[2].1.sqrt(), recent[2].0);
    }
    found
}

/// The least of a parabola through three points, over the logarithm of frequency.
fn vertex(points: [(f64, f64); 3]) -> (f64, f64) {
    let [(low, first), (middle, second), (_, third)] = points;
    let bend = first - 2.0 * second + third;
    if !first.is_finite() || bend <= 0.0 {
        return (middle, second);
    }
    let share = 0.5 * (first - third) / bend;
    (middle * (middle / low).powf(share), second - 0.25 * (first - third) * share)
}
