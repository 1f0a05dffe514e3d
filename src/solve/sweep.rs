//! Moving a source by small steps from a solution to the next, and what regulators are measured by that way.

use super::SolveError;
use super::circuit::{Circuit, DeviceId, Node};
use super::newton::{newton, solve_at_rest};
use super::solution::Solution;
use super::system::{Setting, System};

/// Most iterations from one level to the next.
const MOST_ITERATIONS: usize = 40;
/// The least share of a move that is still tried before the way is given up.
const LEAST_PART: f64 = 1e-4;
/// By how much the output falls where it is said to have dropped out.
pub const DROPOUT_FALL: f64 = 0.02;
/// How far the input moves both ways for the line change, of its nominal level (common practice: supplies vary by a tenth).
pub const LINE_STEP: f64 = 0.1;
/// The steps by which the input is lowered, of its nominal level.
const COARSE_STEP: f64 = 0.02;
/// How exactly the level of dropout is found, of the nominal level.
const DROPOUT_TOLERANCE: f64 = 1e-8;
/// Most halvings to find it.
const MOST_HALVINGS: usize = 60;

/// A system that follows one source.
#[derive(Debug)]
pub(super) struct Sweep {
    pub(super) system: System,
    pub(super) x: Vec<f64>,
    source: DeviceId,
    level: f64,
    devices: usize,
}

impl Sweep {
    /// Begins at the source's own level, at a known solution or at one that is found.
    pub(super) fn new(circuit: &Circuit, source: DeviceId, start: Option<&Solution>) -> Result<Self, SolveError> {
        let level = source_level(circuit, source)?;
        let mut system = System::new(circuit)?;
        let mut guess = system.zeros();
        if let Some(start) = start {
            guess.iter_mut().zip(start.unknowns()).for_each(|(own, start)| *own = *start);
            system.adopt(&guess);
        }
        let x = solve_at_rest(&mut system, &guess)?;
        Ok(Self { system, x, source, level, devices: circuit.devices().len() })
    }

    /// Follows the source to another level, in smaller steps where one is too large.
    pub(super) fn go(&mut self, level: f64) -> Result<(), SolveError> {
        let from = self.level;
        let (mut part, mut step) = (0.0, 1.0);
        let mut arrived = self.x.clone();
        while part < 1.0 {
            let next = f64::min(part + step, 1.0);
            self.system.set_level(self.source, from + (level - from) * next);
            match newton(&mut self.system, &mut self.x, &Setting::REST, MOST_ITERATIONS) {
                Ok(_) => {
                    part = next;
                    step *= 2.0;
                    arrived.copy_from_slice(&self.x);
                }
                Err(_) if step > LEAST_PART => {
                    step /= 4.0;
                    self.back_to(&arrived);
                }
                Err(_) => {
                    // The branch ends here, as where a regulator snaps off: what is beyond is found anew.
                    self.system.set_level(self.source, level);
                    self.x = solve_at_rest(&mut self.system, &arrived)?;
                    part = 1.0;
                }
            }
        }
        self.level = level;
        Ok(())
    }

    /// Takes up an earlier solution, at the level that the next move sets.
    pub(super) fn back_to(&mut self, x: &[f64]) {
        self.x.copy_from_slice(x);
        self.system.adopt(x);
    }

    pub(super) fn voltage(&self, node: Node) -> f64 {
        self.x.get(self.system.unknown_of(node)).copied().unwrap_or(0.0)
    }

    pub(super) fn solution(&self) -> Solution {
        Solution::new(&self.system, &self.x, self.devices)
    }
}

pub(super) fn source_level(circuit: &Circuit, source: DeviceId) -> Result<f64, SolveError> {
    circuit.level(source).ok_or_else(|| match circuit.devices().get(source.number()) {
        Some(placed) => SolveError::NoSource { device: placed.name.clone() },
        None => SolveError::UnknownDevice,
    })
}

/// The solutions at rest as a source moves from its own level through others, each beside the one before.
///
/// # Errors
/// As [`super::dc`]; also where the device is no independent source.
pub fn dc_sweep(
    circuit: &Circuit,
    source: DeviceId,
    levels: &[f64],
    start: Option<&Solution>,
) -> Result<Vec<Solution>, SolveError> {
    let mut sweep = Sweep::new(circuit, source, start)?;
    let mut found = Vec::with_capacity(levels.len());
    for level in levels {
        sweep.go(*level)?;
        found.push(sweep.solution());
    }
    Ok(found)
}

/// Where a regulator drops out.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Dropout {
    /// The input there, in volts.
    pub input: f64,
    /// The output there, in volts.
    pub output: f64,
    /// What lies across the regulator, in volts: the magnitude of the input less that of the output.
    pub across: f64,
}

/// The highest input below the source's level at which the output is 2 % under its value there.
///
/// # Errors
/// As [`super::dc`]; [`SolveError::NoDropout`] where the output never falls as far.
pub fn dropout(
    circuit: &Circuit,
    input: DeviceId,
    output: Node,
    start: Option<&Solution>,
) -> Result<Dropout, SolveError> {
    let nominal = source_level(circuit, input)?;
    let mut sweep = Sweep::new(circuit, input, start)?;
    let wanted = sweep.voltage(output).abs() * (1.0 - DROPOUT_FALL);
    let mut share = 1.0;
    let mut held = sweep.x.clone();
    let mut fallen = None;
    while share > 0.0 && fallen.is_none() {
        let next = f64::max(share - COARSE_STEP, 0.0);
        sweep.go(nominal * next)?;
        if sweep.voltage(output).abs() < wanted {
            fallen = Some(next);
        } else {
            share = next;
            held.copy_from_slice(&sweep.x);
        }
    }
    let mut low = fallen.ok_or(SolveError::NoDropout)?;
    for _ in 0..MOST_HALVINGS {
        if share - low <= DROPOUT_TOLERANCE {
            break;
        }
        let middle = 0.5 * (share + low);
        sweep.back_to(&held);
        sweep.level = nominal * share;
        sweep.go(nominal * middle)?;
        if sweep.voltage(output).abs() < wanted {
            low = middle;
        } else {
            share = middle;
            held.copy_from_slice(&sweep.x);
        }
    }
    sweep.back_to(&held);
    let (input, output) = (nominal * share, sweep.voltage(output));
    Ok(Dropout { input, output, across: input.abs() - output.abs() })
}

/// By how much the output rises as the input goes from 10 % under its level to 10 % over it, in volts.
///
/// # Errors
/// As [`super::dc`]; also where the device is no independent source.
pub fn line_change(
    circuit: &Circuit,
    input: DeviceId,
    output: Node,
    start: Option<&Solution>,
) -> Result<f64, SolveError> {
    let nominal = source_level(circuit, input)?;
    let mut sweep = Sweep::new(circuit, input, start)?;
    let at_nominal = sweep.x.clone();
    let mut ends = [0.0; 2];
    for (end, factor) in ends.iter_mut().zip([1.0 - LINE_STEP, 1.0 + LINE_STEP]) {
        sweep.back_to(&at_nominal);
        sweep.level = nominal;
        sweep.go(nominal * factor)?;
        *end = sweep.voltage(output);
    }
    let [low, high] = ends;
    Ok(high - low)
}
