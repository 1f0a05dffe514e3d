//! What a circuit does as a source rises from zero.

#![allow(clippy::indexing_slicing, reason = "all vectors are as long as the circuit has unknowns")]

use super::SolveError;
use super::circuit::{Circuit, DeviceId, Node};
use super::newton::{newton, solve_at_rest};
use super::sweep::source_level;
use super::system::{Setting, System};

/// Most iterations of one step of time.
const MOST_ITERATIONS: usize = 16;
/// Most steps of one ramp.
const MOST_STEPS: usize = 200_000;
/// How far a step may be off, of a voltage and at least in volts.
const ERROR_SHARE: f64 = 1e-4;
const ERROR_LEAST: f64 = 1e-6;
/// The first step, of the ramp's rise, and the largest, of the whole time.
const FIRST_STEP: f64 = 1e-5;
const LARGEST_STEP: f64 = 0.01;
/// The least step, of the whole time, before the ramp is given up.
const LEAST_STEP: f64 = 1e-15;
/// By how much a step may grow over the last one.
const LARGEST_GROWTH: f64 = 2.0;
/// What is kept back of the step that the error would allow.
const CAUTION: f64 = 0.8;

/// How a source rises: evenly from zero to its own level, and stays there.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Ramp {
    /// The source that rises.
    pub source: DeviceId,
    /// How long it takes, in seconds.
    pub rise: f64,
    /// Until when the circuit is followed, in seconds.
    pub until: f64,
}

/// The voltage of a node over time.
#[derive(Debug, Clone, PartialEq)]
pub struct Trace {
    /// Time in seconds and voltage in volts.
    pub points: Vec<(f64, f64)>,
}

impl Trace {
    /// The voltage at the end.
    #[must_use]
    pub fn end(&self) -> f64 {
        self.points.last().map_or(0.0, |(_, volts)| *volts)
    }

    /// The largest magnitude on the way.
    #[must_use]
    pub fn peak(&self) -> f64 {
        self.points.iter().map(|(_, volts)| volts.abs()).fold(0.0, f64::max)
    }

    /// When the magnitude first reaches that of a voltage, in seconds.
    #[must_use]
    pub fn reaches(&self, volts: f64) -> Option<f64> {
        let wanted = volts.abs();
        let mut before: Option<(f64, f64)> = None;
        for (time, volts) in &self.points {
            let volts = volts.abs();
            if volts >= wanted {
                let (earlier, lower) = before.unwrap_or((*time, volts));
                let share = if volts > lower { (wanted - lower) / (volts - lower) } else { 1.0 };
                return Some(earlier + share * (time - earlier));
            }
            before = Some((*time, volts));
        }
        None
    }
}

/// Follows a circuit while a source rises from zero, by backward differences of second order with steps that suit.
///
/// # Errors
/// As [`super::dc`]; also where the device is no independent source, or times are out of order.
pub fn ramp(circuit: &Circuit, ramp: &Ramp, watched: Node) -> Result<Trace, SolveError> {
    let level = source_level(circuit, ramp.source)?;
    if !(ramp.rise > 0.0 && ramp.until >= ramp.rise && ramp.until.is_finite()) {
        return Err(SolveError::Limits);
    }
    let mut run = Run::new(circuit, ramp, level)?;
    let watched = run.system.unknown_of(watched);
    let mut points = vec![(0.0, run.x[watched])];
    for _ in 0..MOST_STEPS {
        if run.time >= ramp.until {
            return Ok(Trace { points });
        }
        run.advance()?;
        points.push((run.time, run.x[watched]));
    }
    let (place, residual) = (run.system.name(watched), f64::NAN);
    Err(SolveError::NoConvergence { place, residual })
}

/// An earlier instant.
#[derive(Debug, Clone)]
struct Past {
    time: f64,
    x: Vec<f64>,
    charge: Vec<f64>,
}

struct Run<'a> {
    system: System,
    ramp: &'a Ramp,
    level: f64,
    time: f64,
    step: f64,
    x: Vec<f64>,
    /// The last instants, newest first, and how many of them hold since the last kink.
    past: [Past; 3],
    known: usize,
    history: Vec<f64>,
    guess: Vec<f64>,
}

impl<'a> Run<'a> {
    fn new(circuit: &Circuit, ramp: &'a Ramp, level: f64) -> Result<Self, SolveError> {
        let mut system = System::new(circuit)?;
        system.set_level(ramp.source, 0.0);
        let zeros = system.zeros();
        let x = solve_at_rest(&mut system, &zeros)?;
        system.evaluate(&x, &Setting { rate: Some((0.0, &zeros)), ..Setting::REST });
        let now = Past { time: 0.0, x: x.clone(), charge: system.charge.clone() };
        Ok(Self {
            past: [now.clone(), now.clone(), now],
            known: 1,
            history: zeros.clone(),
            guess: zeros,
            system,
            ramp,
            level,
            time: 0.0,
            step: FIRST_STEP * ramp.rise,
            x,
        })
    }

    /// The weights of the charges now, last and before for their rate of change.
    fn weights(&self, step: f64) -> [f64; 3] {
        if self.known < 2 {
            return [1.0 / step, -1.0 / step, 0.0];
        }
        // Backward differences of second order with unequal steps (Hairer, Nørsett, Wanner, Solving Ordinary
        // Differential Equations I, section III.5).
        let ratio = step / (self.past[0].time - self.past[1].time);
        [(1.0 + 2.0 * ratio) / (1.0 + ratio) / step, -(1.0 + ratio) / step, ratio * ratio / (1.0 + ratio) / step]
    }

    /// Extrapolates the last instants to a time into the guess.
    fn extrapolate(&mut self, time: f64) {
        let known = self.known.min(self.past.len());
        let weights: [f64; 3] = std::array::from_fn(|own| {
            if own >= known {
                return 0.0;
            }
            let others = (0..known).filter(|other| *other != own);
            let at = |place: usize| self.past[place].time;
            others.map(|other| (time - at(other)) / (at(own) - at(other))).product()
        });
        for (place, guess) in self.guess.iter_mut().enumerate() {
            *guess = weights.iter().zip(&self.past).map(|(weight, past)| weight * past.x[place]).sum();
        }
    }

    /// Takes one step of time.
    fn advance(&mut self) -> Result<(), SolveError> {
        loop {
            let is_rising = self.time < self.ramp.rise;
            let stop = if is_rising { self.ramp.rise } else { self.ramp.until };
            let left = stop - self.time;
            let lands = self.step >= left * 0.999;
            let step = if lands { left } else { self.step.min(0.5 * left.max(2.0 * self.step)) };
            let time = if lands { stop } else { self.time + step };
            self.system.set_level(self.ramp.source, self.level * f64::min(time / self.ramp.rise, 1.0));
            let [now, last, before] = self.weights(step);
            for (place, history) in self.history.iter_mut().enumerate() {
                *history = last * self.past[0].charge[place] + before * self.past[1].charge[place];
            }
            self.extrapolate(time);
            self.x.copy_from_slice(&self.guess);
            let setting = Setting { rate: Some((now, &self.history)), ..Setting::REST };
            let arrived = newton(&mut self.system, &mut self.x, &setting, MOST_ITERATIONS);
            let error = if arrived.is_ok() { self.error() } else { f64::INFINITY };
            // The orders of both formulas: 1 / (order + 1).
            let power = if self.known < 2 { 0.5 } else { 1.0 / 3.0 };
            let factor = CAUTION / error.max(1e-6).powf(power);
            if error <= 1.0 {
                self.keep(time);
                self.step = (step * factor.clamp(0.2, LARGEST_GROWTH)).min(LARGEST_STEP * self.ramp.until);
                if lands && is_rising {
                    // The kink at the end of the rise: what was before says nothing of what comes.
                    self.known = 1;
                    self.step = FIRST_STEP * self.ramp.rise;
                }
                return Ok(());
            }
            self.step = step * factor.clamp(0.1, 0.5);
            self.system.adopt(&self.past[0].x.clone());
            if self.step < LEAST_STEP * self.ramp.until {
                return Err(match arrived {
                    Err(stuck) => stuck.error(&self.system),
                    Ok(_) => SolveError::NoConvergence { place: self.system.name(0), residual: error },
                });
            }
        }
    }

    /// How far the step is off, by what was extrapolated, over what is allowed.
    fn error(&self) -> f64 {
        // The share of the difference that is the formula's own error, for equal steps.
        let share = if self.known < 2 { 0.5 } else { 2.0 / 11.0 };
        let off = |place: usize| {
            let allowed = ERROR_LEAST + ERROR_SHARE * self.x[place].abs();
            share * (self.x[place] - self.guess[place]).abs() / allowed
        };
        (0..self.system.count()).filter(|place| self.system.is_node(*place)).map(off).fold(0.0, f64::max)
    }

    fn keep(&mut self, time: f64) {
        self.past.rotate_right(1);
        self.past[0].time = time;
        self.past[0].x.copy_from_slice(&self.x);
        self.past[0].charge.copy_from_slice(&self.system.charge);
        self.time = time;
        self.known = (self.known + 1).min(self.past.len());
    }
}
