//! Findings of two boards: which are new, which stayed and how, which are gone and why.

use std::collections::{BTreeMap, BTreeSet};

use super::Matching;
use super::figures::is_same_value;
use crate::checks::{Figures, Finding, Verdict};
use crate::facts::{Facts, Subject};
use crate::review::{Examination, Reviewed};

/// What became of a finding.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum State {
    /// It was not there.
    New,
    /// It was milder, or accepted.
    Worse,
    /// It was worse, or it is accepted now.
    Better,
    /// It came to the same, by other figures.
    Changed,
    /// It was there just so.
    Same,
}

impl State {
    /// Every state, what matters most first.
    pub const ALL: [Self; 5] = [Self::New, Self::Worse, Self::Better, Self::Changed, Self::Same];

    /// Its name in results.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::New => "new",
            Self::Worse => "worse",
            Self::Better => "better",
            Self::Changed => "changed",
            Self::Same => "same",
        }
    }

    /// Whether the change brought it, or made it worse.
    #[must_use]
    pub fn is_news(self) -> bool {
        self <= Self::Worse
    }
}

/// A finding of the new board beside the one that it was.
#[derive(Debug, Clone, Copy)]
pub struct Compared<'a> {
    /// The finding.
    pub now: &'a Reviewed,
    /// What it was.
    pub was: Option<&'a Reviewed>,
    /// Of a new one: the finding of the old board that made it superfluous, so that it may have been there untold.
    pub behind: Option<&'a Reviewed>,
    /// What became of it.
    pub state: State,
}

/// Why a finding is gone.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Why {
    /// What it was about is not on the new board.
    Removed,
    /// Another finding of the new board makes it superfluous.
    Covered,
    /// The requirement holds now.
    Holds,
    /// The requirement is asked no more: what it was about changed, or the rules did.
    NotAsked,
}

impl Why {
    /// Every reason.
    pub const ALL: [Self; 4] = [Self::Removed, Self::Covered, Self::Holds, Self::NotAsked];

    /// Its name in results.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Removed => "removed",
            Self::Covered => "covered",
            Self::Holds => "holds",
            Self::NotAsked => "not-asked",
        }
    }
}

/// A finding of the old board that the new one has not.
#[derive(Debug, Clone, Copy)]
pub struct Gone<'a> {
    /// The finding.
    pub was: &'a Reviewed,
    /// Why it is gone.
    pub why: Why,
}

/// What a finding is about, in terms of the new board where that has it.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord)]
enum About {
    New(Subject),
    OnlyOld(Subject),
    /// The board as a whole: parts and nets by name, and the how manieth of these.
    Board(Vec<String>, Vec<String>, usize),
}

type Key<'a> = (&'a str, About);

/// The findings of the new board with what they were, and those of the old that are gone.
pub(super) fn compare<'a>(
    old: &'a Examination,
    new: &'a Examination,
    matching: &Matching<'_>,
    facts: &Facts<'_>,
) -> (Vec<Compared<'a>>, Vec<Gone<'a>>) {
    let to_new = |subject| matching.subject(subject).map_or(About::OnlyOld(subject), About::New);
    let of_old = keys(&old.findings, to_new, |names| matching.names(names));
    let of_new = keys(&new.findings, About::New, <[String]>::to_vec);
    let before: BTreeMap<&Key<'_>, &'a Reviewed> =
        of_old.iter().flatten().map(|(key, found)| (key, *found)).collect();
    let covered_before = covered(&old.findings, to_new);
    let covered_now = covered(&new.findings, About::New);
    let is_there: BTreeSet<&Key<'_>> = of_new.iter().flatten().map(|(key, _)| key).collect();
    let compared = new.findings.iter().zip(&of_new).map(|(now, keys)| {
        let was = keys.iter().find_map(|(key, _)| before.get(key)).copied();
        let behind = keys.first().and_then(|(key, _)| covered_before.get(key)).copied();
        Compared {
            now,
            was,
            behind: behind.filter(|_| was.is_none()),
            state: was.map_or(State::New, |was| state(was, now)),
        }
    });
    let compared = compared.collect();
    let holding = holding(new);
    let why = |key: &Key<'_>| match key {
        (_, About::OnlyOld(_)) => Why::Removed,
        key if covered_now.contains_key(key) => Why::Covered,
        (check, About::New(subject)) if holding.contains(&(*check, facts.label(*subject).as_str())) => Why::Holds,
        _ => Why::NotAsked,
    };
    let gone =
        old.findings.iter().zip(&of_old).filter(|(_, keys)| !keys.iter().any(|(key, _)| is_there.contains(key)));
    let gone = gone.map(|(was, keys)| Gone { was, why: keys.first().map_or(Why::NotAsked, |(key, _)| why(key)) });
    (compared, gone.collect())
}

/// What each finding is about: its own check and subject, then those of the findings that it tells besides.
fn keys<'a>(
    findings: &'a [Reviewed],
    about: impl Fn(Subject) -> About,
    names: impl Fn(&[String]) -> Vec<String>,
) -> Vec<Vec<(Key<'a>, &'a Reviewed)>> {
    let mut alike: BTreeMap<(&str, Vec<String>, Vec<String>), usize> = BTreeMap::new();
    let mut key = |found: &'a Reviewed| {
        let check = found.finding.check.as_str();
        let about = match found.finding.subject {
            Subject::Board => {
                let (parts, nets) = (names(&found.parts), names(&found.nets));
                let count = alike.entry((check, parts.clone(), nets.clone())).or_default();
                *count += 1;
                About::Board(parts, nets, *count)
            }
            subject => about(subject),
        };
        ((check, about), found)
    };
    findings.iter().map(|found| std::iter::once(found).chain(&found.merged).map(&mut key).collect()).collect()
}

/// What findings make superfluous, each with the finding that does.
fn covered<'a>(findings: &'a [Reviewed], about: impl Fn(Subject) -> About) -> BTreeMap<Key<'a>, &'a Reviewed> {
    let mut all = BTreeMap::new();
    for found in findings {
        for check in &found.finding.suppresses {
            all.entry((check.as_str(), about(found.finding.subject))).or_insert(found);
        }
    }
    all
}

fn state(was: &Reviewed, now: &Reviewed) -> State {
    let (one, other) = (&was.finding, &now.finding);
    match (was.accepted.is_some(), now.accepted.is_some()) {
        (true, false) => State::Worse,
        (false, true) => State::Better,
        _ if other.verdict < one.verdict => State::Worse,
        _ if other.verdict > one.verdict => State::Better,
        _ if is_same(one, other) => State::Same,
        _ => State::Changed,
    }
}

fn is_same(one: &Finding, other: &Finding) -> bool {
    let slack = match (one.slack, other.slack) {
        (Some((was, of)), Some((is, in_))) => of == in_ && is_same_value(was, is, of),
        (None, None) => true,
        _ => false,
    };
    slack && one.requirement == other.requirement
}

/// The requirements of a board that hold, by check and by the name of their subject.
fn holding(board: &Examination) -> BTreeSet<(&str, &str)> {
    let holding = board.told.iter().filter(|told| told.verdict == Verdict::Holds);
    holding.map(|told| (told.check.as_str(), told.subject.as_str())).collect()
}
