//! A solved circuit at rest.

use super::SolveError;
use super::circuit::{Circuit, DeviceId, Node};
use super::newton::solve_at_rest;
use super::system::System;

/// The voltages and currents of a circuit at rest.
#[derive(Debug, Clone, PartialEq)]
pub struct Solution {
    unknowns: Vec<f64>,
    branch_of: Vec<Option<usize>>,
}

impl Solution {
    pub(super) fn new(system: &System, unknowns: &[f64], devices: usize) -> Self {
        let branch_of = (0..devices).map(|device| system.branch_of(DeviceId::at(device))).collect();
        Self { unknowns: unknowns.to_vec(), branch_of }
    }

    pub(super) fn unknowns(&self) -> &[f64] {
        &self.unknowns
    }

    /// The voltage of a node against ground, in volts.
    #[must_use]
    pub fn voltage(&self, node: Node) -> f64 {
        let place = node.number().checked_sub(1);
        place.and_then(|place| self.unknowns.get(place)).copied().unwrap_or(0.0)
    }

    /// The current of a voltage source or inductor from its first node to its second, in amperes; none for a device
    /// whose current is no unknown.
    #[must_use]
    pub fn current(&self, device: DeviceId) -> Option<f64> {
        let place = self.branch_of.get(device.number()).copied().flatten()?;
        self.unknowns.get(place).copied()
    }
}

/// A solution at rest. A circuit may have several, see [`super::operating_points`]; one says nothing of the others.
///
/// # Errors
/// Where the circuit is too large, leaves an unknown undetermined, or no way arrives; the error names the worst node.
pub fn dc(circuit: &Circuit) -> Result<Solution, SolveError> {
    let system = System::new(circuit)?;
    let guess = system.zeros();
    solved(circuit, system, &guess)
}

/// The solution at rest beside one of a similar circuit, with the same nodes and devices.
///
/// # Errors
/// As [`dc`].
pub fn dc_near(circuit: &Circuit, near: &Solution) -> Result<Solution, SolveError> {
    let mut system = System::new(circuit)?;
    let mut guess = system.zeros();
    guess.iter_mut().zip(&near.unknowns).for_each(|(own, near)| *own = *near);
    system.adopt(&guess);
    solved(circuit, system, &guess)
}

/// The solution at rest beside voltages that are given for some nodes.
///
/// # Errors
/// As [`dc`].
pub fn dc_from(circuit: &Circuit, voltages: &[(Node, f64)]) -> Result<Solution, SolveError> {
    let system = System::new(circuit)?;
    let mut guess = system.zeros();
    for (node, voltage) in voltages {
        if let Some(own) = node.number().checked_sub(1).and_then(|place| guess.get_mut(place)) {
            *own = *voltage;
        }
    }
    solved(circuit, system, &guess)
}

fn solved(circuit: &Circuit, mut system: System, guess: &[f64]) -> Result<Solution, SolveError> {
    let unknowns = solve_at_rest(&mut system, guess)?;
    Ok(Solution::new(&system, &unknowns, circuit.devices().len()))
}
