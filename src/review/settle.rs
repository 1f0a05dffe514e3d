//! Which declarations decide most.

use std::cmp::Reverse;
use std::collections::BTreeMap;

use super::Reviewed;
use crate::checks::Verdict;
use crate::facts::{Facts, RailOrigin};
use crate::quantity::{Settle, Table};

/// What a requirement that names a declaration first counts for; named as the second it counts for half of this, as
/// the third for a third.
const FIRST: usize = 12;

/// A declaration with how many findings hang on it.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Decisive {
    /// The declaration.
    pub settle: Settle,
    /// How many requirements name it as the first thing to settle.
    pub decides: usize,
    /// How many requirements name it at all.
    pub concerns: usize,
    /// How much it decides, weighed by verdict and place; the larger the sooner it is worth making.
    pub weight: usize,
}

/// The declarations that findings name, the most decisive first: by the requirements that name it, a doubtful one
/// before one that cannot be judged before a tight one, and by how early they name it. Among equals comes first what
/// people know first: where power enters, loads, rails, parts, then the voltage of a net that another feeds.
#[must_use]
pub fn declare_first(facts: &Facts<'_>, findings: &[Reviewed]) -> Vec<Decisive> {
    let mut found: BTreeMap<&Settle, Decisive> = BTreeMap::new();
    for reviewed in findings.iter().filter(|reviewed| reviewed.accepted.is_none()) {
        let finding = &reviewed.finding;
        let requirements = 1 + reviewed.merged.len();
        let each = weight(finding.verdict) * requirements;
        for (place, settle) in finding.settle.iter().enumerate() {
            let entry = found.entry(settle).or_insert_with(|| Decisive {
                settle: settle.clone(),
                decides: 0,
                concerns: 0,
                weight: 0,
            });
            entry.decides += if place == 0 { requirements } else { 0 };
            entry.concerns += requirements;
            entry.weight += each * FIRST / (place + 1);
        }
    }
    let mut decisive: Vec<Decisive> = found.into_values().collect();
    // Stable: among equals the order of tables and names stays.
    decisive.sort_by_cached_key(|each| (Reverse(each.weight), rank(facts, &each.settle)));
    decisive
}

/// What a verdict counts for: a warning fails a run, and what cannot be judged may hide anything.
fn weight(verdict: Verdict) -> usize {
    match verdict {
        Verdict::Doubtful => 3,
        Verdict::Unknown => 2,
        Verdict::Tight => 1,
        Verdict::Fails | Verdict::Holds => 0,
    }
}

/// The place of a declaration among those that decide as much.
pub(super) fn rank(facts: &Facts<'_>, settle: &Settle) -> usize {
    match settle.table {
        Table::Supply if is_fed(facts, &settle.target) => 5,
        Table::Supply => 0,
        Table::Load => 1,
        Table::Rail => 2,
        Table::Board => 3,
        Table::Part => 4,
    }
}

/// Whether a net gets its voltage from another one.
fn is_fed(facts: &Facts<'_>, net: &str) -> bool {
    facts
        .circuit()
        .net_named(net)
        .is_some_and(|net| matches!(facts.rail(net).origin, RailOrigin::Through { .. } | RailOrigin::Regulator(_)))
}
