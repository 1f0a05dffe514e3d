//! The loop: its margins, and the ESR with which it has enough of them.

use std::rc::Rc;

use super::recipe::{Change, INPUT, LOAD, Parameter, Recipe, Slot, View};
use crate::quantity::{Dimension, Quantity};
use crate::solve::{
    Bank, Frequencies, Goal, LOAD_SHARES, LoopGain, Margins, Network, SolveError, Window, esr_grid, window,
    worst_margins,
};

/// The values of ESR that are looked at, in ohms, and how many.
const ESR: (f64, f64, u32) = (1e-3, 30.0, 24);

impl Recipe {
    /// Whether there is a loop.
    pub(super) fn has_loop(&self) -> bool {
        self.elements.iter().any(|element| matches!(element.kind, super::recipe::Kind::Break))
    }

    /// The loops at each share of the load, without the output's capacitors.
    fn loops(&self, values: &[f64]) -> Result<Rc<[LoopGain]>, SolveError> {
        // What lies at the output beside the load does not belong to them.
        let bank: Vec<Slot> = self.bank.iter().flat_map(|one| [one.farads, one.ohms]).collect();
        let mut own = values.to_vec();
        bank.iter().for_each(|slot| own = Self::with(&own, *slot, 0.0));
        self.memory.loops.once(&own, || {
            let frequencies = Frequencies::default();
            let peak = Self::of(values, LOAD);
            let found = LOAD_SHARES.map(|share| {
                let values = Self::with(&own, LOAD, peak * share);
                let made = self.make(&values, View::Bare, &Change::default())?;
                let solution = self.solution(&values)?;
                let at_break = made.at_break.ok_or(SolveError::UnknownDevice)?;
                LoopGain::new(&made.circuit, &solution, at_break, made.output, &frequencies)
            });
            found.into_iter().collect()
        })
    }

    /// The worst margins of all loads.
    fn margins(&self, values: &[f64]) -> Result<Margins, SolveError> {
        let network = self.bank(values).map_or_else(Network::default, |(bank, ohms)| bank.with_esr(ohms));
        Ok(worst_margins(&self.loops(values)?, &network))
    }

    /// The least phase margin in degrees.
    pub(super) fn phase_margin(&self) -> Result<Option<Quantity>, SolveError> {
        let found = self.explore(Dimension::ANGLE, in_motion, |values| Ok(self.margins(values)?.phase_or_all()));
        found.map(Some)
    }

    /// The least modulus margin.
    pub(super) fn modulus_margin(&self) -> Result<Option<Quantity>, SolveError> {
        self.explore(Dimension::ONE, in_motion, |values| Ok(self.margins(values)?.modulus)).map(Some)
    }

    /// Where the gain crosses one, at the load of the least phase margin; `None` where it does not.
    pub(super) fn crossover(&self) -> Result<Option<Quantity>, SolveError> {
        if self.margins(&self.nominals())?.crossover.is_none() {
            return Ok(None);
        }
        let found = self
            .explore(Dimension::FREQUENCY, in_motion, |values| Ok(self.margins(values)?.crossover.unwrap_or(0.0)));
        found.map(Some)
    }

    fn window_at(&self, values: &[f64], bank: &Bank, goal: &Goal) -> Result<Window, SolveError> {
        let (least, most, count) = ESR;
        Ok(window(&self.loops(values)?, bank, &esr_grid(least, most, count), goal))
    }

    /// The window of the bulk capacitor's ESR at nominal values; `None` without an output capacitor.
    pub(super) fn window(&self, goal: &Goal) -> Result<Option<Window>, SolveError> {
        let values = self.nominals();
        let Some((bank, _)) = self.bank(&values) else { return Ok(None) };
        Ok(Some(self.window_at(&values, &bank, goal)?))
    }

    /// An edge of the window in ohms over what is not known.
    pub(super) fn window_edge(&self, goal: &Goal, edge: fn(&Window) -> f64) -> Result<Quantity, SolveError> {
        let esr: Vec<Slot> = self.bank.iter().filter(|one| one.bulk).map(|one| one.ohms).collect();
        let moves = |slot, one: &Parameter| in_motion(slot, one) && !esr.contains(&slot);
        self.explore(Dimension::RESISTANCE, moves, |values| {
            let Some((bank, _)) = self.bank(values) else { return Ok(f64::NAN) };
            Ok(edge(&self.window_at(values, &bank, goal)?))
        })
    }
}

/// Whether a parameter moves a loop, at a given input and load.
fn in_motion(slot: Slot, _: &Parameter) -> bool {
    slot != INPUT && slot != LOAD
}
