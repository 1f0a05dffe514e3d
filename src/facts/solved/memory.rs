//! What was solved for a set of values: one figure after the other looks at the same ends.

use std::cell::{OnceCell, RefCell};
use std::collections::HashMap;
use std::rc::Rc;

use crate::solve::{LoopGain, Solution, SolveError};

/// Most sets of values that are remembered of a circuit.
const MOST: usize = 2000;

/// Values by their bits.
type Key = Vec<u64>;

/// Results by the values that they are for. Never gone through in order: only looked up.
#[derive(Debug)]
pub(super) struct Known<T>(RefCell<HashMap<Key, Result<T, SolveError>>>);

impl<T> Default for Known<T> {
    fn default() -> Self {
        Self(RefCell::new(HashMap::new()))
    }
}

impl<T: Clone> Known<T> {
    /// The result for these values, found once.
    pub(super) fn once(&self, values: &[f64], find: impl FnOnce() -> Result<T, SolveError>) -> Result<T, SolveError> {
        let key: Key = values.iter().map(|value| value.to_bits()).collect();
        if let Some(known) = self.0.borrow().get(&key) {
            return known.clone();
        }
        let found = find();
        let mut known = self.0.borrow_mut();
        if known.len() < MOST {
            known.insert(key, found.clone());
        }
        found
    }
}

/// What is known of a circuit.
#[derive(Debug, Default)]
pub(super) struct Memory {
    /// The solution at nominal values.
    pub(super) middle: OnceCell<Result<Solution, SolveError>>,
    /// Solutions at rest.
    pub(super) rest: Known<Solution>,
    /// Loops, one for each share of the load.
    pub(super) loops: Known<Rc<[LoopGain]>>,
}
