//! Packaged series parts inside a circuit: references, and regulators whose current a transistor takes over.

use super::place::Draft;
use super::recipe::{INPUT, Recipe, Slot};
use crate::quantity::{Dimension, Quantity};
use crate::recognize::Regulator;
use crate::solve::{Bipolar, Circuit, Node, OpAmp, Polarity, Resistor, SolveError, VoltageSource};

/// What the transistor inside drops at 0.1 A, with what its drive comes short of the room it is given, in volts.
const INNER_DROP: f64 = 0.69;
/// How far the supply of the amplifier inside lies beyond the part's input, in volts, so that any dropout can be had.
const BEYOND: f64 = 1.0;
/// The own current of a packaged regulator that no family tells, in amperes (common practice).
const OWN_CURRENT: (f64, f64, f64) = (0.1e-3, 4e-3, 8e-3);
/// The least own current, in amperes.
const LEAST_CURRENT: f64 = 1e-9;

/// The figures of a packaged series part.
#[derive(Debug, Clone, Copy)]
pub(super) struct SeriesSlots {
    /// What it holds, volts, signed.
    pub(super) volts: Slot,
    /// The least voltage across it, volts; without it that of a follower on its own input.
    pub(super) dropout: Option<Slot>,
    /// Its own current, amperes.
    pub(super) own: Option<Slot>,
}

impl SeriesSlots {
    /// Adds an amplifier between input and ground that drives a transistor, whose current the input carries too.
    pub(super) fn add_to(
        &self,
        circuit: &mut Circuit,
        name: &str,
        ends: &[Node],
        values: &[f64],
    ) -> Result<(), SolveError> {
        let [input, ground, output] = ends else { return Err(SolveError::UnknownNode) };
        let volts = Recipe::of(values, self.volts);
        let positive = volts >= 0.0;
        let held = circuit.node(&format!("the reference inside {name}"));
        let gate = circuit.node(&format!("the drive inside {name}"));
        circuit.add(&format!("the reference of {name}"), &[held, *ground], VoltageSource { volts })?;
        let mut supply = *input;
        let mut room = 0.0;
        if let Some(dropout) = self.dropout {
            supply = circuit.node(&format!("the supply inside {name}"));
            let volts = if positive { BEYOND } else { -BEYOND };
            circuit.add(&format!("the supply of {name}"), &[supply, *input], VoltageSource { volts })?;
            room = (BEYOND + Recipe::of(values, dropout) - INNER_DROP).max(0.0);
        }
        if let Some(own) = self.own {
            let amperes = Recipe::of(values, own).max(LEAST_CURRENT);
            let ohms = Recipe::of(values, INPUT).abs() / amperes;
            circuit.add(&format!("the own current of {name}"), &[*input, *ground], Resistor { ohms })?;
        }
        let amplifier = OpAmp { gain: 1e4, bandwidth: 1e5, slew_rate: 1e5, ..OpAmp::default() };
        let (upper, lower, polarity, amplifier) = if positive {
            (supply, *ground, Polarity::N, OpAmp { top: room, ..amplifier })
        } else {
            (*ground, supply, Polarity::P, OpAmp { bottom: room, ..amplifier })
        };
        circuit.add(name, &[held, *output, upper, lower, gate], amplifier)?;
        let transistor = Bipolar { saturation_current: 1e-12, forward_gain: 1e3, ..Bipolar::new(polarity) };
        circuit.add(&format!("the transistor of {name}"), &[*input, gate, *output], transistor)?;
        Ok(())
    }
}

impl Draft<'_, '_> {
    /// The figures of a packaged part that holds so many volts; those of a regulator with an outboard transistor count
    /// with its dropout and its own current, since both lie in the base circuit.
    pub(super) fn series_slots(&mut self, packaged: &Regulator, volts: Quantity) -> SeriesSlots {
        let volts = self.recipe.slot(volts, false);
        if !self.built.outboard {
            return SeriesSlots { volts, dropout: None, own: None };
        }
        let dropout = self.facts.light_packaged_dropout(packaged);
        let own = self.facts.own_current(packaged);
        let own = own.unwrap_or_else(|| self.usual(packaged, "own current", Dimension::CURRENT, OWN_CURRENT));
        let dropout = (!dropout.is_missing()).then(|| self.recipe.slot(dropout, false));
        SeriesSlots { volts, dropout, own: Some(self.recipe.slot(own, false)) }
    }
}
