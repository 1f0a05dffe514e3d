//! What a change brings and takes away: two boards beside each other, their parts and nets matched whatever they are
//! called and in which order they stand.

mod colours;
mod figures;
mod findings;
mod graph;
mod matcher;
mod matching;
mod pairs;
mod regulators;
mod votes;

use super::Examination;
use crate::facts::{Facts, Subject};
use crate::knowledge::Knowledge;
use crate::recognize::{Regulator, RegulatorId};
use matching::Matching;

pub use figures::Shown;
pub use findings::{Compared, Gone, State, Why};
pub use regulators::Moved;

/// A board that was judged, with what it was judged with.
#[derive(Debug, Clone, Copy)]
pub struct Side<'a> {
    /// What was found.
    pub examination: &'a Examination,
    /// What is known.
    pub knowledge: &'a Knowledge,
}

/// Something that is not what it was.
#[derive(Debug, Clone, PartialEq)]
pub struct Change<T> {
    /// Its name.
    pub name: &'static str,
    /// What it was; `None` where it did not apply.
    pub was: Option<T>,
    /// What it is.
    pub is: Option<T>,
}

/// What a change did to a regulator.
#[derive(Debug)]
pub struct RegulatorChange<'a> {
    /// What it was; `None` where it was added.
    pub was: Option<&'a Regulator>,
    /// What it is; `None` where it was removed.
    pub is: Option<&'a Regulator>,
    /// What it is now: value, family, kind and such.
    pub identity: Vec<Change<String>>,
    /// Pins that lie elsewhere.
    pub moved: Vec<Moved>,
    /// Figures that changed.
    pub figures: Vec<Change<Shown>>,
}

/// What a change brought and took away.
#[derive(Debug, Default)]
pub struct Comparison<'a> {
    /// The findings of the new board, in its order.
    pub findings: Vec<Compared<'a>>,
    /// The findings that only the old board has, in its order.
    pub gone: Vec<Gone<'a>>,
    /// The regulators that changed, were added or removed: those of the new board in its order, then the others.
    pub regulators: Vec<RegulatorChange<'a>>,
}

impl<'a> Comparison<'a> {
    /// Compares a board with what it was.
    #[must_use]
    pub fn new(old: Side<'a>, new: Side<'a>) -> Self {
        let facts = |side: Side<'a>| Facts::new(&side.examination.design, &side.examination.board, side.knowledge);
        let (was, is) = (facts(old), facts(new));
        let matching = Matching::new(old.examination, new.examination);
        let (findings, gone) = findings::compare(old.examination, new.examination, &matching, &is);
        Self { findings, gone, regulators: regulator_changes(&matching, &was, &is) }
    }

    /// A board that is new as a whole.
    #[must_use]
    pub fn added(new: &'a Examination) -> Self {
        let findings =
            new.findings.iter().map(|now| Compared { now, was: None, behind: None, state: State::New }).collect();
        let each = new.design.regulators.iter();
        Self { findings, gone: Vec::new(), regulators: each.map(|is| one_sided(None, Some(is))).collect() }
    }

    /// A board that is no more.
    #[must_use]
    pub fn removed(old: &'a Examination) -> Self {
        let gone = old.findings.iter().map(|was| Gone { was, why: Why::Removed }).collect();
        let each = old.design.regulators.iter();
        Self { findings: Vec::new(), gone, regulators: each.map(|was| one_sided(Some(was), None)).collect() }
    }

    /// Whether nothing differs.
    #[must_use]
    pub fn is_empty(&self) -> bool {
        self.gone.is_empty()
            && self.regulators.is_empty()
            && self.findings.iter().all(|compared| compared.state == State::Same)
    }

    /// How many findings of the new board are in a state.
    #[must_use]
    pub fn count(&self, state: State) -> usize {
        self.findings.iter().filter(|compared| compared.state == state).count()
    }
}

fn one_sided<'a>(was: Option<&'a Regulator>, is: Option<&'a Regulator>) -> RegulatorChange<'a> {
    RegulatorChange { was, is, identity: Vec::new(), moved: Vec::new(), figures: Vec::new() }
}

fn regulator_changes<'a>(matching: &Matching<'_>, old: &Facts<'a>, new: &Facts<'a>) -> Vec<RegulatorChange<'a>> {
    let mut all = Vec::new();
    for (at, (id, is)) in new.regulators().enumerate() {
        let Some(place) = matching.regulators.old_of(at) else {
            all.push(one_sided(None, Some(is)));
            continue;
        };
        let Some(was) = old.design().regulators.get(place) else { continue };
        let change = RegulatorChange {
            was: Some(was),
            is: Some(is),
            identity: regulators::identity(old, new, was, is),
            moved: regulators::moved(&matching.matcher, was, is),
            figures: figures::changed(old, new, Subject::Regulator(RegulatorId(place)), Subject::Regulator(id)),
        };
        if !(change.identity.is_empty() && change.moved.is_empty() && change.figures.is_empty()) {
            all.push(change);
        }
    }
    let gone = matching.regulators.left_old().filter_map(|place| old.design().regulators.get(place));
    all.extend(gone.map(|was| one_sided(Some(was), None)));
    all
}
