//! The equations of a circuit (modified nodal analysis: Ho, Ruehli, Brennan, IEEE CAS-22, 1975), assembled at a point.
//!
//! Unknowns are the node voltages, then each device's inner nodes and branch currents; the equation of a node is the
//! sum of the currents out of it. Ground is the unknown past the last one, which is always zero.

#![allow(clippy::indexing_slicing, reason = "every index is the place of an unknown, given out when it was built")]

use std::sync::Arc;

use super::SolveError;
use super::circuit::{Circuit, Device, DeviceId, Node};
use super::matrix::{LARGEST, Lu, Matrix};
use super::stamps::{At, MOST_LOCAL, Stamps};

/// Keeps a node determined that nothing but capacitors hold, in siemens: far below any current of interest.
const HOLD: f64 = 1e-15;
/// The conductance across junctions, in siemens; SPICE's default.
pub(super) const GMIN: f64 = 1e-12;
/// How exactly the currents of a node must add up, in amperes.
const CURRENT_TOLERANCE: f64 = 1e-12;
/// The same, of the devices' own currents.
const CURRENT_SHARE: f64 = 1e-9;
/// How exactly a source's own equation must hold, in volts.
const VOLTAGE_TOLERANCE: f64 = 1e-10;
/// What rounding leaves of a sum, of its terms.
const ROUNDING: f64 = 1e-14;

/// One device with the places of its unknowns.
#[derive(Debug, Clone)]
struct Place {
    device: Arc<dyn Device>,
    unknowns: Vec<usize>,
    memory: usize,
}

/// A source's part in an equation.
#[derive(Debug, Clone, Copy)]
struct Drive {
    row: usize,
    factor: f64,
    device: usize,
}

/// How the equations are set up.
#[derive(Debug, Clone, Copy)]
pub(super) struct Setting<'a> {
    /// Conductance across junctions, in siemens.
    pub(super) gmin: f64,
    /// The share of the independent sources' levels.
    pub(super) sources: f64,
    /// A conductance from every node to a voltage of its own, in siemens.
    pub(super) anchor: Option<(f64, &'a [f64])>,
    /// The rate of change of charges: a factor of the charges now, per second, and what comes from earlier ones.
    pub(super) rate: Option<(f64, &'a [f64])>,
    /// Whether junction voltages are limited.
    pub(super) limits: bool,
}

impl Setting<'_> {
    /// The circuit as it is, at rest.
    pub(super) const REST: Setting<'static> =
        Setting { gmin: GMIN, sources: 1.0, anchor: None, rate: None, limits: true };
}

/// The equation that holds least, by its tolerance.
#[derive(Debug, Clone, Copy)]
pub(super) struct Worst {
    pub(super) unknown: usize,
    pub(super) residual: f64,
    pub(super) ratio: f64,
}

/// A circuit ready to be solved, with all its work space.
#[derive(Debug, Clone)]
pub(super) struct System {
    nonlinear: Vec<Place>,
    drives: Vec<Drive>,
    levels: Vec<f64>,
    branch_of: Vec<Option<usize>>,
    names: Vec<String>,
    is_node: Vec<bool>,
    static_part: Matrix<f64>,
    dynamic_part: Matrix<f64>,
    memory: Vec<f64>,
    stamps: Work,
    pub(super) jacobian: Matrix<f64>,
    pub(super) lu: Lu<f64>,
    pub(super) residual: Vec<f64>,
    pub(super) charge: Vec<f64>,
    pub(super) step: Vec<f64>,
    tolerance: Vec<f64>,
    limited: bool,
}

/// Room for one device's stamps, which a copy does not need.
#[derive(Debug, Default)]
struct Work(Stamps);

impl Clone for Work {
    fn clone(&self) -> Self {
        Self::default()
    }
}

impl System {
    /// The equations of a circuit.
    ///
    /// # Errors
    /// Where it has more unknowns than the solver is made for.
    pub(super) fn new(circuit: &Circuit) -> Result<Self, SolveError> {
        let mut count = circuit.node_count() - 1;
        let mut names: Vec<String> = (1..=count).map(|node| circuit.node_name(Node::at(node)).to_owned()).collect();
        let mut is_node = vec![true; count];
        let mut places = Vec::new();
        let mut branch_of = Vec::new();
        let mut junctions = 0;
        for placed in circuit.devices() {
            let device = &placed.device;
            let own = count..count + device.inner_nodes() + device.branches();
            branch_of.push((device.branches() > 0).then(|| own.start + device.inner_nodes()));
            for inner in 0..device.inner_nodes() {
                names.push(format!("{}, inner node {}", placed.name, inner + 1));
                is_node.push(true);
            }
            for _ in 0..device.branches() {
                names.push(format!("the current of {}", placed.name));
                is_node.push(false);
            }
            count = own.end;
            let terminals = placed.nodes.iter().map(|node| node.number().wrapping_sub(1));
            places.push(Place {
                device: Arc::clone(device),
                unknowns: terminals.chain(own).collect(),
                memory: junctions,
            });
            junctions += device.junctions();
        }
        if count > LARGEST {
            return Err(SolveError::TooLarge { count });
        }
        for place in &mut places {
            // Ground, which is node 0, became a number too large for an unknown.
            place.unknowns.iter_mut().for_each(|unknown| *unknown = (*unknown).min(count));
        }
        Ok(Self::assembled(places, names, is_node, branch_of, junctions))
    }

    fn assembled(
        places: Vec<Place>,
        names: Vec<String>,
        is_node: Vec<bool>,
        branch_of: Vec<Option<usize>>,
        junctions: usize,
    ) -> Self {
        let count = names.len();
        let mut system = Self {
            nonlinear: Vec::new(),
            drives: Vec::new(),
            levels: places.iter().map(|place| place.device.level().unwrap_or(0.0)).collect(),
            branch_of,
            names,
            is_node,
            static_part: Matrix::new(count),
            dynamic_part: Matrix::new(count),
            memory: vec![0.0; junctions],
            stamps: Work::default(),
            jacobian: Matrix::new(count),
            lu: Lu::new(count),
            residual: vec![0.0; count + 1],
            charge: vec![0.0; count + 1],
            step: vec![0.0; count + 1],
            tolerance: vec![0.0; count + 1],
            limited: false,
        };
        for row in 0..count {
            system.static_part.add(row, row, if system.is_node[row] { HOLD } else { 0.0 });
        }
        for (number, place) in places.into_iter().enumerate() {
            if place.device.is_linear() {
                system.place_linear(number, &place);
            } else {
                system.nonlinear.push(place);
            }
        }
        system
    }

    fn place_linear(&mut self, number: usize, place: &Place) {
        let stamps = &mut self.stamps.0;
        stamps.clear();
        let unknowns = [0.0; MOST_LOCAL];
        place
            .device
            .stamp(&mut At { unknowns: &unknowns, last: &mut [], gmin: GMIN, limits: false, moves: true }, stamps);
        for entry in &stamps.slopes {
            self.static_part.add(place.unknowns[entry.row], place.unknowns[entry.column], entry.value);
        }
        for entry in &stamps.capacitances {
            self.dynamic_part.add(place.unknowns[entry.row], place.unknowns[entry.column], entry.value);
        }
        for (row, factor) in &stamps.drives {
            self.drives.push(Drive { row: place.unknowns[*row], factor: *factor, device: number });
        }
    }

    /// The number of unknowns.
    pub(super) fn count(&self) -> usize {
        self.names.len()
    }

    /// A vector for the unknowns, ground's zero last.
    pub(super) fn zeros(&self) -> Vec<f64> {
        vec![0.0; self.count() + 1]
    }

    /// What an unknown is called.
    pub(super) fn name(&self, unknown: usize) -> String {
        self.names.get(unknown).cloned().unwrap_or_default()
    }

    /// Whether an unknown is a node's voltage.
    pub(super) fn is_node(&self, unknown: usize) -> bool {
        self.is_node.get(unknown).copied().unwrap_or(false)
    }

    /// The place of a node's voltage.
    pub(super) fn unknown_of(&self, node: Node) -> usize {
        node.number().wrapping_sub(1).min(self.count())
    }

    /// The place of a device's branch current.
    pub(super) fn branch_of(&self, device: DeviceId) -> Option<usize> {
        self.branch_of.get(device.number()).copied().flatten()
    }

    /// Sets the level of an independent source.
    pub(super) fn set_level(&mut self, device: DeviceId, level: f64) {
        if let Some(own) = self.levels.get_mut(device.number()) {
            *own = level;
        }
    }

    /// Evaluates the equations at a point: residuals, their tolerances, and their derivatives.
    pub(super) fn evaluate(&mut self, x: &[f64], setting: &Setting<'_>) {
        self.evaluate_linear(x, setting);
        self.limited = false;
        for place in &self.nonlinear {
            let mut unknowns = [0.0; MOST_LOCAL];
            for (own, unknown) in unknowns.iter_mut().zip(&place.unknowns) {
                *own = x[*unknown];
            }
            let stamps = &mut self.stamps.0;
            stamps.clear();
            let last = &mut self.memory[place.memory..place.memory + place.device.junctions()];
            let Setting { gmin, limits, .. } = *setting;
            let mut at = At { unknowns: &unknowns, last, gmin, limits, moves: setting.rate.is_some() };
            place.device.stamp(&mut at, stamps);
            self.limited |= stamps.limited;
            for (row, current) in &stamps.currents {
                let row = place.unknowns[*row];
                self.residual[row] += current;
                self.tolerance[row] += CURRENT_SHARE * current.abs();
            }
            for entry in &stamps.slopes {
                self.jacobian.add(place.unknowns[entry.row], place.unknowns[entry.column], entry.value);
            }
            if let Some((factor, _)) = setting.rate {
                for (row, charge) in &stamps.charges {
                    let row = place.unknowns[*row];
                    self.charge[row] += charge;
                    self.residual[row] += factor * charge;
                }
                for entry in &stamps.capacitances {
                    let (row, column) = (place.unknowns[entry.row], place.unknowns[entry.column]);
                    self.jacobian.add(row, column, factor * entry.value);
                }
            }
        }
        if let Some((factor, history)) = setting.rate {
            self.allow_for_rates(factor, history);
        }
    }

    /// Allows for the currents that charges make, once all of them are known.
    fn allow_for_rates(&mut self, factor: f64, history: &[f64]) {
        for (row, before) in history.iter().enumerate().take(self.names.len()) {
            let now = factor * self.charge[row];
            self.tolerance[row] += ROUNDING * (now.abs() + before.abs()) + CURRENT_SHARE * (now + before).abs();
        }
    }

    fn evaluate_linear(&mut self, x: &[f64], setting: &Setting<'_>) {
        let count = self.names.len();
        self.jacobian.copy_from(&self.static_part);
        for row in 0..count {
            let (mut sum, mut size) = (0.0, 0.0);
            for (column, value) in self.static_part.row(row) {
                let term = value * x[column];
                sum += term;
                size += term.abs();
            }
            self.residual[row] = sum;
            let least = if self.is_node[row] { CURRENT_TOLERANCE } else { VOLTAGE_TOLERANCE };
            self.tolerance[row] = least + ROUNDING * size;
        }
        for drive in &self.drives {
            self.residual[drive.row] += drive.factor * self.levels[drive.device] * setting.sources;
        }
        if let Some((conductance, anchor)) = setting.anchor {
            for row in (0..count).filter(|row| self.is_node[*row]) {
                self.residual[row] += conductance * (x[row] - anchor[row]);
                self.jacobian.add(row, row, conductance);
            }
        }
        if let Some((factor, history)) = setting.rate {
            for (row, before) in history.iter().enumerate().take(count) {
                let charge: f64 = self.dynamic_part.row(row).map(|(column, value)| value * x[column]).sum();
                self.charge[row] = charge;
                self.residual[row] += factor * charge + before;
            }
            self.jacobian.add_scaled(&self.dynamic_part, factor);
        }
    }

    /// Takes a point over as it is: junctions are limited against it from here on.
    pub(super) fn adopt(&mut self, x: &[f64]) {
        self.evaluate(x, &Setting { limits: false, ..Setting::REST });
    }

    /// The equation that holds least, after an evaluation; none where all hold and no junction was limited.
    pub(super) fn unsolved(&self) -> Option<Worst> {
        let mut worst = Worst { unknown: 0, residual: 0.0, ratio: 0.0 };
        for row in 0..self.names.len() {
            let residual = self.residual[row];
            let ratio = residual.abs() / self.tolerance[row];
            // What is no number is as bad as can be.
            if ratio > worst.ratio || !ratio.is_finite() {
                worst = Worst { unknown: row, residual, ratio };
            }
        }
        let holds = worst.ratio <= 1.0 && !self.limited;
        (!holds).then_some(worst)
    }

    /// The conductances and capacitances of small signals at a point.
    pub(super) fn small_signals(&mut self, x: &[f64]) -> (Matrix<f64>, Matrix<f64>) {
        self.adopt(x);
        let conductance = self.jacobian.clone();
        let nothing = self.zeros();
        // The derivative of all charges is what a rate of one adds.
        self.evaluate(x, &Setting { rate: Some((1.0, &nothing)), ..Setting::REST });
        let mut capacitance = self.jacobian.clone();
        capacitance.add_scaled(&conductance, -1.0);
        (conductance, capacitance)
    }
}
