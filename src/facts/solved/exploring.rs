//! Figures of a circuit over the ranges of what is not known of it.

use super::recipe::{Parameter, Recipe, Slot};
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range};
use crate::solve::SolveError;

/// Most parameters that are moved; those of the pass transistor and the amplifier come first, and the rest of so large a
/// circuit is held.
const MOST_MOVED: usize = 120;
/// After so many ends of guesses at which the circuit does not settle no further ones are tried: each takes long.
const MOST_UNSETTLED: usize = 12;

impl Recipe {
    /// A figure that the circuit gives, over the ranges of the parameters that are asked for; the others are held at
    /// their nominal values.
    ///
    /// # Errors
    /// Where the circuit cannot be solved somewhere in those ranges.
    pub(super) fn explore(
        &self,
        dimension: Dimension,
        moves: impl Fn(Slot, &Parameter) -> bool,
        mut formula: impl FnMut(&[f64]) -> Result<f64, SolveError>,
    ) -> Result<Quantity, SolveError> {
        let mut moved = 0;
        let mut held: Vec<Quantity> = Vec::with_capacity(self.parameters.len());
        for (slot, one) in self.slots() {
            let inexact = one.quantity.worst().width() > 0.0;
            let takes_part = moves(slot, one) && (!inexact || moved < MOST_MOVED);
            moved += usize::from(takes_part && inexact);
            held.push(match one.quantity.nominal() {
                Some(nominal) if !takes_part => Quantity::constant(one.quantity.dimension(), nominal),
                _ => one.quantity.clone(),
            });
        }
        let inputs: Vec<&Quantity> = held.iter().collect();
        let nominals = self.nominals();
        let middle = formula(&nominals)?;
        let mut unsettled = 0;
        let figure = Quantity::explored(dimension, &inputs, |values| {
            if values == nominals {
                return Ok(middle);
            }
            let far = self.is_far_guess(values, &nominals);
            if far && unsettled >= MOST_UNSETTLED {
                return Ok(middle);
            }
            match formula(values) {
                Err(_) if far => {
                    unsettled += 1;
                    Ok(middle)
                }
                found => found,
            }
        })?;
        let whole = unsettled == 0 && moved < MOST_MOVED;
        let ends = self.parameters.iter().take(2).map(|one| &one.quantity);
        let left_out = (!whole).then(|| self.left_out());
        let rests = self.rests.iter().chain(&left_out);
        let figure = rests.fold(figure, |figure, one| figure.also_resting_on(one));
        Ok(ends.fold(figure, |figure, one| figure.also_held_at(one)))
    }

    /// That some ends were not looked at, as a figure that the result rests on.
    fn left_out(&self) -> Quantity {
        let what = format!("ends of guesses at which the circuit of {} does not settle", self.name);
        let evidence = Evidence::new(Grade::Assumed, what, "left out");
        Quantity::given(Dimension::ONE, Range::exactly(0.0), Pair::ANY, evidence)
    }

    /// Whether among the values that are not nominal there is a guess without limits: such ends may lie where no circuit
    /// works, and say nothing of this one.
    fn is_far_guess(&self, values: &[f64], nominals: &[f64]) -> bool {
        let moved = self.parameters.iter().zip(values.iter().zip(nominals)).filter(|(_, (own, other))| own != other);
        moved
            .map(|(one, _)| &one.quantity)
            .any(|one| one.kind().low().is_infinite() && one.guesses().next().is_some())
    }
}
