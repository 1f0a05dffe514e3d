//! One finding for what the same missing figures leave unknown.

use std::collections::BTreeMap;

use super::finding::Finding;
use super::language::Figures;
use super::verdict::Verdict;
use crate::quantity::Key;

/// The first of the findings that the same missing figures leave unknown tells the others.
pub(super) fn merge(findings: Vec<Finding>, figures: &dyn Figures) -> Vec<Finding> {
    let groups = told_together(findings.iter());
    let mut rest: Vec<Option<Finding>> = findings.into_iter().map(Some).collect();
    let mut kept = Vec::new();
    for group in groups {
        let mut members = group.into_iter().filter_map(|index| rest.get_mut(index).and_then(Option::take));
        let Some(mut first) = members.next() else { continue };
        let others: Vec<Finding> = members.collect();
        tell(&mut first, others.iter(), figures);
        kept.push(first);
    }
    kept
}

/// Which findings are told together, by their places in the list: the first of each group tells the others. Groups
/// stand in the order of their first.
pub fn told_together<'a>(findings: impl IntoIterator<Item = &'a Finding>) -> Vec<Vec<usize>> {
    let mut groups: Vec<Vec<usize>> = Vec::new();
    let mut by_missing: BTreeMap<Vec<&Key>, usize> = BTreeMap::new();
    for (index, finding) in findings.into_iter().enumerate() {
        let mut key: Vec<&Key> = finding.missing.iter().collect();
        key.sort();
        key.dedup();
        let mergeable = finding.verdict == Verdict::Unknown && !key.is_empty();
        match by_missing.get(&key).filter(|_| mergeable).and_then(|group| groups.get_mut(*group)) {
            Some(group) => group.push(index),
            None => {
                if mergeable {
                    by_missing.insert(key, groups.len());
                }
                groups.push(vec![index]);
            }
        }
    }
    groups
}

/// Has a finding tell of others that the same missing figures leave unknown.
pub fn tell<'a>(finding: &mut Finding, others: impl IntoIterator<Item = &'a Finding>, figures: &dyn Figures) {
    let mut by_check: Vec<(&str, Vec<String>)> = Vec::new();
    for other in others {
        finding.merged.push((other.check.clone(), other.subject));
        let label = figures.label(other.subject);
        match by_check.iter_mut().find(|(known, _)| *known == other.check) {
            Some((_, labels)) => labels.push(label),
            None => by_check.push((&other.check, vec![label])),
        }
    }
    if by_check.is_empty() {
        return;
    }
    let told: Vec<String> =
        by_check.iter().map(|(check, labels)| format!("{check} of {}", labels.join(", "))).collect();
    finding.message.push_str(&format!("; nor can {}", told.join("; ")));
}
