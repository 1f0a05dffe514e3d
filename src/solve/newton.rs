//! Newton's method on the equations of a circuit, and the ways to a first solution.

#![allow(clippy::indexing_slicing, reason = "all vectors are as long as the circuit has unknowns")]

use super::SolveError;
use super::system::{GMIN, Setting, System, Worst};

/// Most iterations of one attempt.
const MOST_ITERATIONS: usize = 100;
/// Most attempts while something is stepped.
const MOST_STEPS: usize = 400;
/// The largest conductance to ground where that is stepped, in siemens.
const LARGEST_SHUNT: f64 = 1.0;
/// The steps of the sources' share: the first, and the least that is tried.
const FIRST_SHARE: f64 = 0.05;
const LEAST_SHARE: f64 = 1e-7;

/// Why an attempt failed.
#[derive(Debug, Clone, Copy)]
pub(super) enum Stuck {
    /// The derivatives do not determine an unknown.
    Singular(usize),
    /// The iteration did not arrive.
    Far(Worst),
}

impl Stuck {
    pub(super) fn error(self, system: &System) -> SolveError {
        match self {
            Self::Singular(unknown) => SolveError::Singular { place: system.name(unknown) },
            Self::Far(worst) => {
                SolveError::NoConvergence { place: system.name(worst.unknown), residual: worst.residual }
            }
        }
    }
}

/// Goes from `x` to a solution beside it: converged where the currents of every node add up within their tolerance.
pub(super) fn newton(system: &mut System, x: &mut [f64], setting: &Setting<'_>, most: usize) -> Result<usize, Stuck> {
    let count = system.count();
    for iteration in 0..=most {
        system.evaluate(x, setting);
        let Some(worst) = system.unsolved() else { return Ok(iteration) };
        if iteration == most || !worst.residual.is_finite() {
            return Err(Stuck::Far(worst));
        }
        let System { lu, jacobian, residual, step, .. } = system;
        lu.factor(jacobian).map_err(Stuck::Singular)?;
        lu.solve(residual, step);
        for (own, step) in x.iter_mut().zip(step.iter()).take(count) {
            *own -= step;
        }
    }
    Err(Stuck::Far(Worst { unknown: 0, residual: f64::NAN, ratio: f64::NAN }))
}

/// A solution at rest, from a first guess: as it is, then by stepping conductances to ground, the sources, and time.
pub(super) fn solve_at_rest(system: &mut System, guess: &[f64]) -> Result<Vec<f64>, SolveError> {
    let mut x = guess.to_vec();
    let first = match newton(system, &mut x, &Setting::REST, MOST_ITERATIONS) {
        Ok(_) => return Ok(x),
        Err(stuck) => stuck,
    };
    for way in [step_sources, step_shunt, step_time] {
        x.copy_from_slice(guess);
        if way(system, &mut x).is_ok() {
            return Ok(x);
        }
    }
    Err(first.error(system))
}

/// Raises the sources from zero, in steps that suit.
fn step_sources(system: &mut System, x: &mut [f64]) -> Result<(), Stuck> {
    x.fill(0.0);
    let mut arrived = x.to_vec();
    let (mut share, mut step) = (0.0, FIRST_SHARE);
    let mut last = newton(system, x, &Setting { sources: 0.0, ..Setting::REST }, MOST_ITERATIONS).map(|_| ());
    for _ in 0..MOST_STEPS {
        last?;
        if share >= 1.0 {
            return Ok(());
        }
        let next = f64::min(share + step, 1.0);
        match newton(system, x, &Setting { sources: next, ..Setting::REST }, MOST_ITERATIONS / 4) {
            Ok(_) => {
                share = next;
                step *= 2.0;
                arrived.copy_from_slice(x);
            }
            Err(stuck) => {
                step /= 4.0;
                x.copy_from_slice(&arrived);
                last = if step < LEAST_SHARE { Err(stuck) } else { Ok(()) };
            }
        }
    }
    last
}

/// Lowers a conductance from every node to ground, in steps that suit.
fn step_shunt(system: &mut System, x: &mut [f64]) -> Result<(), Stuck> {
    let ground = system.zeros();
    let mut arrived = x.to_vec();
    let (mut shunt, mut factor) = (LARGEST_SHUNT, 0.1);
    let mut reached = None;
    let mut last = Ok(());
    for _ in 0..MOST_STEPS {
        last?;
        let setting = Setting { gmin: shunt.max(GMIN), anchor: Some((shunt, &ground)), ..Setting::REST };
        match newton(system, x, &setting, MOST_ITERATIONS / 2) {
            Ok(_) if shunt <= GMIN => return newton(system, x, &Setting::REST, MOST_ITERATIONS).map(|_| ()),
            Ok(_) => {
                reached = Some(shunt);
                arrived.copy_from_slice(x);
                factor = f64::max(factor * factor, 0.01);
            }
            Err(stuck) => {
                factor = factor.sqrt();
                x.copy_from_slice(&arrived);
                last = if factor > 0.999 || reached.is_none() { Err(stuck) } else { Ok(()) };
            }
        }
        shunt = reached.unwrap_or(shunt) * factor;
    }
    last
}

/// Lets a capacitor at every node charge, in steps of time that grow without bound.
fn step_time(system: &mut System, x: &mut [f64]) -> Result<(), Stuck> {
    let mut arrived = x.to_vec();
    let mut conductance = LARGEST_SHUNT;
    let mut last = Ok(());
    for _ in 0..MOST_STEPS {
        last?;
        let setting = Setting { anchor: Some((conductance, &arrived)), ..Setting::REST };
        match newton(system, x, &setting, MOST_ITERATIONS / 4) {
            Ok(_) if conductance < GMIN => return newton(system, x, &Setting::REST, MOST_ITERATIONS).map(|_| ()),
            Ok(_) => {
                arrived.copy_from_slice(x);
                conductance /= 3.0;
            }
            Err(stuck) => {
                conductance *= 8.0;
                x.copy_from_slice(&arrived);
                last = if conductance > 1e6 { Err(stuck) } else { Ok(()) };
            }
        }
    }
    last
}
