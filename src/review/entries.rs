//! Acceptances that have run out, or that accept nothing.

use std::collections::{BTreeMap, BTreeSet};

use super::Reviewed;
use super::accept::Standing;
use super::notice::{Notice, ReviewCheck, Round, review_check};
use crate::board::{Accept, Declared, Place};
use crate::source::{Location, Source, Span};

/// Whether the last day of an acceptance has gone by while its finding is still there.
pub(super) const EXPIRED: ReviewCheck = ReviewCheck {
    name: "accept-expired",
    group: "review",
    asks: "Is the last day of each acceptance still to come?",
    grounds: "An `[[accept]]` entry whose `until` has gone by accepts nothing any more: its finding is open again. Asked \
              of each entry whose finding is on this board. A day counts to its end, by the clock of UTC.",
    may_be_accepted: false,
    find: expired,
};

/// Whether an acceptance accepts anything.
pub(super) const UNUSED: ReviewCheck = ReviewCheck {
    name: "accept-unused",
    group: "review",
    asks: "Is there still a finding for each acceptance of the board's own file?",
    grounds: "An `[[accept]]` entry without a finding would accept the next one that fits it, which nobody has looked \
              at. Asked of the entries of the board's own file whose check was asked of something on this board, where \
              the whole netlist was read; an entry of the house file is written for other boards too.",
    may_be_accepted: false,
    find: unused,
};

fn expired(round: &Round<'_>) -> Vec<Notice> {
    let mut first: BTreeMap<usize, (&Accept, &Reviewed)> = BTreeMap::new();
    for found in round.findings.iter().chain(round.notices) {
        for (index, entry, standing) in round.entries.about(found) {
            if standing == Standing::RanOut {
                first.entry(index).or_insert((entry, found));
            }
        }
    }
    first.into_values().filter_map(|(entry, found)| run_out(entry, found)).collect()
}

fn run_out(entry: &Accept, found: &Reviewed) -> Option<Notice> {
    let until = entry.until.as_ref()?;
    let now = if found.accepted.is_some() { "accepted by another entry" } else { "open again" };
    Some(Notice {
        message: format!("the acceptance of {} ran out on {}; its finding is {now}", shown(entry), until.value),
        hints: vec!["look at the finding again, then set a later day or take the entry out".to_owned()],
        place: location(&until.place),
        about: "the last day".to_owned(),
        subject: found.subject.clone(),
        parts: found.parts.clone(),
        nets: found.nets.clone(),
        identity: identity(entry),
    })
}

fn unused(round: &Round<'_>) -> Vec<Notice> {
    if !round.whole {
        // Its finding may be in the part that was lost.
        return Vec::new();
    }
    let asked: BTreeSet<&str> = round.outcomes.iter().map(|outcome| outcome.check.as_str()).collect();
    let all = round.findings.iter().chain(round.suppressed).chain(round.notices);
    let used: BTreeSet<usize> = all.flat_map(|found| round.entries.about(found)).map(|(index, ..)| index).collect();
    let entries = round.entries.iter().filter(|(index, _)| !used.contains(index));
    entries.filter_map(|(_, entry)| without_finding(entry, &asked)).collect()
}

fn without_finding(entry: &Accept, asked: &BTreeSet<&str>) -> Option<Notice> {
    let check = entry.check.value.as_str();
    let ran = asked.contains(check) || review_check(check).is_some_and(|check| check.may_be_accepted);
    if !ran || entry.check.place.is_shared() {
        return None;
    }
    let named = |name: &Option<Declared<String>>| name.iter().map(|name| name.value.clone()).collect::<Vec<_>>();
    let (parts, nets) = (named(&entry.part), named(&entry.net));
    let key = [&entry.finding, &entry.part, &entry.net].into_iter().flatten().next();
    Some(Notice {
        message: format!("the acceptance of {} accepts nothing: the board has no such finding", shown(entry)),
        hints: vec!["take the entry out; or name the finding that it is meant for".to_owned()],
        place: location(key.map_or(&entry.check.place, |key| &key.place)),
        about: "not found".to_owned(),
        subject: parts.iter().chain(&nets).next().cloned().unwrap_or_default(),
        parts,
        nets,
        identity: identity(entry),
    })
}

/// What an entry accepts, in a few words: `headroom of U3`.
fn shown(entry: &Accept) -> String {
    let mut words = entry.check.value.clone();
    if let Some(part) = &entry.part {
        words.push_str(&format!(" of {}", part.value));
    }
    if let Some(net) = &entry.net {
        words.push_str(&format!(" on {}", net.value));
    }
    if let (None, None, Some(finding)) = (&entry.part, &entry.net, &entry.finding) {
        words.push_str(&format!(", finding {},", finding.value));
    }
    words
}

/// An entry by what it names; the fingerprint alone where there is one, for the rest is for the reader.
fn identity(entry: &Accept) -> Vec<String> {
    let text = |name: &Option<Declared<String>>| name.as_ref().map(|name| name.value.clone()).unwrap_or_default();
    let mut words = vec![entry.check.value.clone(), text(&entry.finding)];
    if entry.finding.is_none() {
        words.extend([text(&entry.part), text(&entry.net)]);
    }
    words
}

fn location(place: &Place) -> Location {
    match place {
        Place::File { source, span, .. } => Location::new(source, *span),
        // Acceptances stand in files; a field could only come from a caller that made one up.
        Place::Field { field, .. } => Location::new(&Source::new(&**field, ""), Span::default()),
    }
}
