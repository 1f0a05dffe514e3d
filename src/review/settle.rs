//! Which declarations decide most.

use std::collections::BTreeMap;

use super::Reviewed;
use crate::quantity::Settle;

/// A declaration with how many findings hang on it.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Decisive {
    /// The declaration.
    pub settle: Settle,
    /// How many requirements name it as the first thing to settle.
    pub decides: usize,
}

/// The declarations that findings name first, those of most findings first; ties in the order of tables and names.
#[must_use]
pub fn declare_first(findings: &[Reviewed]) -> Vec<Decisive> {
    let mut counts: BTreeMap<&Settle, usize> = BTreeMap::new();
    for reviewed in findings.iter().filter(|reviewed| reviewed.accepted.is_none()) {
        if let Some(first) = reviewed.finding.settle.first() {
            *counts.entry(first).or_default() += 1 + reviewed.finding.merged.len();
        }
    }
    let mut decisive: Vec<Decisive> =
        counts.into_iter().map(|(settle, decides)| Decisive { settle: settle.clone(), decides }).collect();
    decisive.sort_by(|one, other| other.decides.cmp(&one.decides).then_with(|| one.settle.cmp(&other.settle)));
    decisive
}
