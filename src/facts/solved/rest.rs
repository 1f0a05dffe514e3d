//! The circuit at rest: its output, its dropout, how it follows its input.

use super::recipe::{Change, INPUT, LOAD, Made, Parameter, Recipe, Slot, View};
use crate::quantity::{Dimension, Quantity};
use crate::solve::{Search, Solution, SolveError, dc_from, dc_near, dropout, operating_points};

/// The share of what the output should be below which it is taken as not up.
pub(super) const UP: f64 = 0.5;
/// How far below zero and above its input a node is searched for operating points, as a share of the input.
const BELOW: f64 = 1e-7;
const ABOVE: f64 = 1.05;

impl Recipe {
    /// The voltage in volts from which the output counts as up, with an input.
    pub(super) fn up(&self, input: f64) -> f64 {
        let wanted = if self.wanted.is_finite() { self.wanted.min(input.abs()) } else { input.abs() };
        UP * wanted
    }

    /// The solution of a circuit in which the output is up, where there is one; else the highest there is. Circuits that
    /// feed themselves have others.
    pub(super) fn live(&self, made: &Made, values: &[f64], near: Option<&Solution>) -> Result<Solution, SolveError> {
        let input = Self::of(values, INPUT);
        let is_up = |solution: &Solution| solution.voltage(made.output).abs() >= self.up(input);
        let sign = if self.negative { -1.0 } else { 1.0 };
        let found = match near {
            Some(near) => dc_near(&made.circuit, near),
            None => dc_from(&made.circuit, &[(made.output, sign * self.wanted)]),
        };
        match found {
            Ok(solution) if is_up(&solution) => return Ok(solution),
            _ => {}
        }
        let points = operating_points(&made.circuit, &self.search(made, input))?;
        let stable = points.points.into_iter().filter(crate::solve::OperatingPoint::is_stable);
        let level = |solution: &Solution| solution.voltage(made.output).abs();
        let highest = stable.map(|point| point.solution).max_by(|a, b| level(a).total_cmp(&level(b)));
        highest.map_or_else(|| dc_from(&made.circuit, &[(made.output, sign * self.wanted)]), Ok)
    }

    /// Where operating points are looked for: at the reference, else at the output.
    pub(super) fn search(&self, made: &Made, input: f64) -> Search {
        let node = self.reference.and_then(|place| made.nodes.get(place).copied()).unwrap_or(made.output);
        let (low, high) = (-BELOW * input, ABOVE * input);
        Search { node, from: low.min(high), to: low.max(high) }
    }

    /// The solution for a set of values, beside the one at nominal values.
    pub(super) fn solution(&self, values: &[f64]) -> Result<Solution, SolveError> {
        // Capacitances and bandwidths say nothing of it.
        let still: Vec<f64> = self
            .slots()
            .zip(values)
            .map(|((_, one), value)| if one.dynamic { one.quantity.nominal().unwrap_or(*value) } else { *value })
            .collect();
        self.memory.rest.once(&still, || {
            let made = self.make(&still, View::Bare, &Change::default())?;
            self.live(&made, &still, Some(&self.middle()?))
        })
    }

    /// The output in volts, signed.
    fn output(&self, values: &[f64]) -> Result<f64, SolveError> {
        let made = self.make(values, View::Bare, &Change::default())?;
        Ok(self.solution(values)?.voltage(made.output))
    }

    /// The solution at nominal values, beside which others lie.
    pub(super) fn middle(&self) -> Result<Solution, SolveError> {
        let find = || {
            let values = self.nominals();
            self.live(&self.make(&values, View::Bare, &Change::default())?, &values, None)
        };
        self.memory.middle.get_or_init(find).clone()
    }

    /// The output at nominal input and load.
    pub(super) fn output_voltage(&self) -> Result<Quantity, SolveError> {
        self.explore(Dimension::VOLTAGE, at_rest, |values| self.output(values))
    }

    /// The dropout at a load in amperes, or at the load that the values tell.
    pub(super) fn dropout(&self, load: Option<f64>) -> Result<Quantity, SolveError> {
        let moves = |slot, one: &Parameter| at_rest(slot, one) || (slot == LOAD && load.is_none());
        self.explore(Dimension::VOLTAGE, moves, |values| {
            let values = load.map_or_else(|| values.to_vec(), |load| Self::with(values, LOAD, load));
            let made = self.make(&values, View::Bare, &Change::default())?;
            let start = self.solution(&values)?;
            Ok(dropout(&made.circuit, made.input, made.output, Some(&start))?.across.max(0.0))
        })
    }

    /// By how much the output moves while the input goes from one voltage to another, both in volts.
    pub(super) fn change_between(&self, low: f64, high: f64) -> Result<Quantity, SolveError> {
        self.explore(Dimension::VOLTAGE, at_rest, |values| {
            let at = |volts: f64| self.output(&Self::with(values, INPUT, volts));
            Ok((at(high)? - at(low)?).abs())
        })
    }
}

/// Whether a parameter moves a figure at rest, at a given input and load.
pub(super) fn at_rest(slot: Slot, parameter: &Parameter) -> bool {
    !parameter.dynamic && slot != INPUT && slot != LOAD
}
