//! What of one board is what of the other.

/// Things of the old board and of the new one that are alike.
pub(super) type Group = (Vec<usize>, Vec<usize>);

/// Pairs of things that are known by their places, each in one pair at most.
#[derive(Debug)]
pub(super) struct Pairs {
    forth: Vec<Option<usize>>,
    back: Vec<Option<usize>>,
}

impl Pairs {
    pub(super) fn new(old: usize, new: usize) -> Self {
        Self { forth: vec![None; old], back: vec![None; new] }
    }

    /// Joins two things, where neither is in a pair.
    pub(super) fn join(&mut self, old: usize, new: usize) -> bool {
        match (self.forth.get_mut(old), self.back.get_mut(new)) {
            (Some(forth @ None), Some(back @ None)) => {
                *forth = Some(new);
                *back = Some(old);
                true
            }
            _ => false,
        }
    }

    /// The thing of the new board that this one of the old became.
    pub(super) fn new_of(&self, old: usize) -> Option<usize> {
        self.forth.get(old).copied().flatten()
    }

    /// The thing of the old board that became this one of the new.
    pub(super) fn old_of(&self, new: usize) -> Option<usize> {
        self.back.get(new).copied().flatten()
    }

    /// Things of the old board that are in no pair, in order.
    pub(super) fn left_old(&self) -> impl Iterator<Item = usize> + '_ {
        self.forth.iter().enumerate().filter(|(_, other)| other.is_none()).map(|(place, _)| place)
    }

    /// Things of the new board that are in no pair, in order.
    pub(super) fn left_new(&self) -> impl Iterator<Item = usize> + '_ {
        self.back.iter().enumerate().filter(|(_, other)| other.is_none()).map(|(place, _)| place)
    }

    /// Whether something is left on both boards.
    pub(super) fn is_open(&self) -> bool {
        self.left_old().next().is_some() && self.left_new().next().is_some()
    }
}
