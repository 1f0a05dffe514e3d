//! What stands behind a figure, shared between figures that rest on the same.

use std::cmp::Ordering;
use std::sync::Arc;

use super::Key;

/// Entries in order of their keys, each key once. Most figures are computed from one or two others and rest on what
/// these rest on: a copy shares the entries, and joining two of which one holds the other copies nothing.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Ledger<T>(Option<Arc<[(Key, T)]>>);

impl<T: Clone> Ledger<T> {
    /// Nothing.
    pub(super) const EMPTY: Self = Self(None);

    /// One entry.
    pub(super) fn of(key: Key, entry: T) -> Self {
        Self(Some(Arc::new([(key, entry)])))
    }

    /// Entries whose keys are in order, each once.
    fn of_sorted(entries: Vec<(Key, T)>) -> Self {
        Self((!entries.is_empty()).then(|| entries.into()))
    }

    /// The entries with their keys.
    pub(super) fn entries(&self) -> &[(Key, T)] {
        self.0.as_deref().unwrap_or(&[])
    }

    /// The entries in order of their keys.
    pub(super) fn values(&self) -> impl Iterator<Item = &T> {
        self.entries().iter().map(|(_, entry)| entry)
    }

    /// Whether there is no entry.
    pub(super) fn is_empty(&self) -> bool {
        self.0.is_none()
    }

    /// Whether both are the very same entries.
    fn is_same(&self, other: &Self) -> bool {
        match (&self.0, &other.0) {
            (Some(own), Some(other)) => Arc::ptr_eq(own, other),
            (None, None) => true,
            _ => false,
        }
    }

    /// Whether a key stands in both.
    pub(super) fn shares_a_key<U: Clone>(&self, other: &Ledger<U>) -> bool {
        let (mut own, mut others) = (self.entries(), other.entries());
        while let ([(left, _), own_rest @ ..], [(right, _), other_rest @ ..]) = (own, others) {
            match left.cmp(right) {
                Ordering::Less => own = own_rest,
                Ordering::Greater => others = other_rest,
                Ordering::Equal => return true,
            }
        }
        false
    }

    /// The same keys with entries made from these.
    pub(super) fn map(&self, change: impl Fn(&T) -> T) -> Self {
        Self(self.0.as_ref().map(|own| own.iter().map(|(key, entry)| (key.clone(), change(entry))).collect()))
    }

    /// All entries of both; under one key what `join` makes of the entry here and the other.
    pub(super) fn joined(&self, other: &Self, join: impl Fn(&T, &T) -> T) -> Self {
        let (mut own, mut others) = (self.entries(), other.entries());
        let mut all = Vec::with_capacity(own.len() + others.len());
        loop {
            match (own, others) {
                ([left, own_rest @ ..], [right, other_rest @ ..]) => match left.0.cmp(&right.0) {
                    Ordering::Less => {
                        all.push(left.clone());
                        own = own_rest;
                    }
                    Ordering::Greater => {
                        all.push(right.clone());
                        others = other_rest;
                    }
                    Ordering::Equal => {
                        all.push((left.0.clone(), join(&left.1, &right.1)));
                        (own, others) = (own_rest, other_rest);
                    }
                },
                (rest, []) | ([], rest) => {
                    all.extend_from_slice(rest);
                    return Self::of_sorted(all);
                }
            }
        }
    }

    /// Takes over the entries of another; under a key that both have the other's counts.
    pub(super) fn take_over(&mut self, other: &Self, same: impl Fn(&T, &T) -> bool) {
        if other.is_empty() || self.is_same(other) {
            return;
        }
        if self.within(other, |_, _| true) {
            *self = other.clone();
        } else if !other.within(self, same) {
            *self = self.joined(other, |_, theirs| theirs.clone());
        }
    }

    /// Whether every key here stands in `other` too, with an entry that is the same.
    fn within(&self, other: &Self, same: impl Fn(&T, &T) -> bool) -> bool {
        let (own, others) = (self.entries(), other.entries());
        let mut others = others.iter();
        own.len() <= others.len()
            && own.iter().all(|(key, entry)| {
                others
                    .find(|(theirs, _)| theirs >= key)
                    .is_some_and(|(theirs, found)| theirs == key && same(entry, found))
            })
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;
    use std::collections::BTreeMap;

    fn ledger(entries: &BTreeMap<String, u8>) -> Ledger<u8> {
        Ledger::of_sorted(entries.iter().map(|(key, entry)| (Key::new(key.as_str()), *entry)).collect())
    }

    fn entries() -> impl Strategy<Value = BTreeMap<String, u8>> {
        prop::collection::btree_map("[a-d]{0,2}", 0..3_u8, 0..8)
    }

    proptest! {
        #[test]
        fn a_ledger_takes_over_what_a_map_would(one in entries(), other in entries()) {
            let mut taken = ledger(&one);
            taken.take_over(&ledger(&other), |own, theirs| own == theirs);
            let mut expected = one.clone();
            expected.extend(other.clone());
            prop_assert_eq!(taken, ledger(&expected));
            let shares = one.keys().any(|key| other.contains_key(key));
            prop_assert_eq!(ledger(&one).shares_a_key(&ledger(&other)), shares);
        }

        #[test]
        fn what_two_ledgers_have_in_common_is_joined_from_both(one in entries(), other in entries()) {
            let joined = ledger(&one).joined(&ledger(&other), |own, theirs| own * 10 + theirs);
            let mut expected = one.clone();
            for (key, entry) in &other {
                expected.entry(key.clone()).and_modify(|own| *own = *own * 10 + entry).or_insert(*entry);
            }
            prop_assert_eq!(joined, ledger(&expected));
        }
    }

    #[test]
    fn taking_over_what_is_known_shares_it() {
        let all = ledger(&BTreeMap::from([("a".to_owned(), 1), ("b".to_owned(), 2)]));
        let mut few = ledger(&BTreeMap::from([("b".to_owned(), 2)]));
        few.take_over(&all, |own, theirs| own == theirs);
        assert!(few.is_same(&all));
        let mut kept = all.clone();
        kept.take_over(&ledger(&BTreeMap::from([("a".to_owned(), 1)])), |own, theirs| own == theirs);
        assert!(kept.is_same(&all));
    }
}
