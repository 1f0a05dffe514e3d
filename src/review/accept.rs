//! Findings that someone has looked at and accepted in the board file.

use std::collections::BTreeMap;

use super::Reviewed;
use crate::board::{Accept, Place};
use crate::checks::Finding;
use crate::quantity::{Dimension, print_amount};

/// The acceptance of a finding.
#[derive(Debug, Clone)]
pub struct Accepted {
    /// Why, as the board file says.
    pub reason: String,
    /// The last day, as written.
    pub until: Option<String>,
    /// The entry of the board file.
    pub place: Place,
}

/// A finding that was accepted when it was better than it is now.
#[derive(Debug, Clone)]
pub struct Reopened {
    /// The slack with which it was accepted.
    pub was: (f64, Dimension),
    /// The entry of the board file.
    pub place: Place,
}

/// How far a slack may worsen, as a part of what it was, before that counts: rounding of what was written down.
const ROUNDING: f64 = 1e-3;

/// What an entry is to a finding that it is about.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) enum Standing {
    /// It accepts it.
    Accepts,
    /// Its last day has gone by.
    RanOut,
    /// The finding was better when it was accepted.
    Worse { was: (f64, Dimension) },
}

/// What an entry names its finding by: the fingerprint decides where there is one, then the part, then the net.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
enum Key<'a> {
    Fingerprint(&'a str),
    Part(&'a str),
    Net(&'a str),
}

/// The acceptances of a board, looked up by what they name.
#[derive(Debug)]
pub(super) struct Entries<'a> {
    entries: &'a [Accept],
    by_key: BTreeMap<(&'a str, Key<'a>), Vec<usize>>,
    today: &'a str,
}

impl<'a> Entries<'a> {
    /// The entries on a day (`YYYY-MM-DD`).
    pub(super) fn new(entries: &'a [Accept], today: &'a str) -> Self {
        let mut by_key: BTreeMap<(&str, Key<'_>), Vec<usize>> = BTreeMap::new();
        for (index, entry) in entries.iter().enumerate() {
            let fingerprint = entry.finding.as_ref().map(|finding| Key::Fingerprint(&finding.value));
            let part = entry.part.as_ref().map(|part| Key::Part(&part.value));
            let net = entry.net.as_ref().map(|net| Key::Net(&net.value));
            if let Some(key) = fingerprint.or(part).or(net) {
                by_key.entry((&entry.check.value, key)).or_default().push(index);
            }
        }
        Self { entries, by_key, today }
    }

    /// The entries with their places in the list, the house file's first.
    pub(super) fn iter(&self) -> impl Iterator<Item = (usize, &'a Accept)> {
        self.entries.iter().enumerate()
    }

    /// The entries that are about a finding, in the order of the files, with what each is to it.
    pub(super) fn about(&self, reviewed: &Reviewed) -> Vec<(usize, &'a Accept, Standing)> {
        let check = reviewed.finding.check.as_str();
        let parts = reviewed.parts.iter().map(|part| Key::Part(part));
        let nets = reviewed.nets.iter().map(|net| Key::Net(net));
        let keys = std::iter::once(Key::Fingerprint(&reviewed.fingerprint)).chain(parts).chain(nets);
        let mut found: Vec<usize> =
            keys.filter_map(|key| self.by_key.get(&(check, key))).flatten().copied().collect();
        found.sort_unstable();
        found.dedup();
        let entries = found.into_iter().filter_map(|index| Some((index, self.entries.get(index)?)));
        entries
            .filter(|(_, entry)| is_about(entry, reviewed))
            .map(|(index, entry)| (index, entry, standing(entry, &reviewed.finding, self.today)))
            .collect()
    }

    /// Marks a finding as accepted, or as open again, where an entry says so.
    pub(super) fn apply(&self, reviewed: &mut Reviewed) {
        let about = self.about(reviewed);
        if let Some((_, entry, _)) = about.iter().find(|(_, _, standing)| *standing == Standing::Accepts) {
            reviewed.accepted = Some(Accepted {
                reason: entry.reason.value.clone(),
                until: entry.until.as_ref().map(|until| until.value.to_string()),
                place: entry.check.place.clone(),
            });
            return;
        }
        let worse = about.into_iter().find_map(|(_, entry, standing)| match standing {
            Standing::Worse { was } => Some((entry, was)),
            Standing::Accepts | Standing::RanOut => None,
        });
        if let Some((entry, was)) = worse {
            let hint = worse_than_accepted(entry, was, reviewed.finding.slack);
            reviewed.finding.hints.push(hint);
            reviewed.reopened = Some(Reopened { was, place: entry.check.place.clone() });
        }
    }
}

/// Where both a part and a net stand, and no fingerprint, both must fit.
fn is_about(entry: &Accept, reviewed: &Reviewed) -> bool {
    if let Some(wanted) = &entry.finding {
        return wanted.value == reviewed.fingerprint;
    }
    let part = entry.part.as_ref().is_none_or(|part| reviewed.parts.contains(&part.value));
    let net = entry.net.as_ref().is_none_or(|net| reviewed.nets.contains(&net.value));
    part && net
}

fn standing(entry: &Accept, finding: &Finding, today: &str) -> Standing {
    if entry.until.as_ref().is_some_and(|until| until.value.to_string().as_str() < today) {
        return Standing::RanOut;
    }
    let Some(slack) = entry.slack.as_ref().map(|slack| slack.value) else { return Standing::Accepts };
    // A slack in another unit, or none at all, belongs to another requirement than the one that was looked at.
    let is_no_worse = finding.slack.is_some_and(|(now, dimension)| {
        dimension == slack.dimension && now >= slack.value - slack.value.abs() * ROUNDING
    });
    if is_no_worse { Standing::Accepts } else { Standing::Worse { was: (slack.value, slack.dimension) } }
}

fn worse_than_accepted(entry: &Accept, was: (f64, Dimension), now: Option<(f64, Dimension)>) -> String {
    let shown = |(value, dimension): (f64, Dimension)| print_amount(value, dimension);
    let now = now.map_or_else(|| "without one".to_owned(), |now| format!("at {}", shown(now)));
    format!(
        "it was accepted at a slack of {} ({}) and is now {now}: look at it again, then change the board or write the \
         new slack there",
        shown(was),
        entry.check.place.shown()
    )
}
