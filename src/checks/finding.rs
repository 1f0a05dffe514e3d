//! What a run found, as typed facts; how it looks is the reports' matter.

use super::verdict::{Level, Verdict};
use crate::facts::Subject;
use crate::quantity::{Dimension, Key, Quantity, Settle};

/// Something that a finding points at.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Point {
    /// A subject.
    Subject(Subject),
    /// A net or part by its name.
    Named {
        /// What it is to the subject: `input_net`.
        role: String,
        /// Its name.
        name: String,
    },
}

/// A requirement that does not hold, or cannot be judged.
#[derive(Debug, Clone, PartialEq)]
pub struct Finding {
    /// The check.
    pub check: String,
    /// What it came to.
    pub verdict: Verdict,
    /// How much that matters.
    pub level: Level,
    /// What it is about.
    pub subject: Subject,
    /// The one of a group of the subject that is meant.
    pub member: Option<Subject>,
    /// Which of the check's requirements decided, from 0.
    pub requirement: usize,
    /// What is wrong, in one line.
    pub message: String,
    /// What to do, in order of the file; lines whose figures are not known are left out.
    pub hints: Vec<String>,
    /// How far from the edge at worst, in SI units; negative where it breaks.
    pub slack: Option<(f64, Dimension)>,
    /// The figures that decided, in order of appearance, then those that the message prints.
    pub quantities: Vec<(String, Quantity)>,
    /// What would settle it, the most decisive first.
    pub settle: Vec<Settle>,
    /// What is missing, for what is unknown.
    pub missing: Vec<Key>,
    /// What is underlined.
    pub primary: Vec<Point>,
    /// What is marked besides.
    pub also: Vec<Point>,
    /// Requirements that the same missing figures leave unknown, told by this finding: check and subject.
    pub merged: Vec<(String, Subject)>,
    /// Checks of the same subject whose findings this one makes superfluous.
    pub suppresses: Vec<String>,
}

/// A requirement that was asked, with what it came to.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Outcome {
    /// The check.
    pub check: String,
    /// The subject.
    pub subject: Subject,
    /// What it came to.
    pub verdict: Verdict,
    /// The check whose finding makes this one superfluous: then it is neither told nor counted.
    pub suppressed_by: Option<String>,
}

/// How many requirements came to what. A check asked of one subject is one requirement.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
#[allow(missing_docs)] // each field is the verdict's name
pub struct Counts {
    /// Requirements asked, without those suppressed.
    pub requirements: usize,
    pub fails: usize,
    pub doubtful: usize,
    pub tight: usize,
    pub unknown: usize,
    pub holds: usize,
}

/// What a run found.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Judgement {
    /// Findings: errors first, then by check, then by subject in natural order.
    pub findings: Vec<Finding>,
    /// Findings that others make superfluous: neither told nor counted.
    pub suppressed: Vec<Finding>,
    /// Every requirement asked, by check, then by subject in natural order.
    pub outcomes: Vec<Outcome>,
    /// The counts of the outcomes.
    pub counts: Counts,
}

impl Counts {
    /// Counts outcomes.
    #[must_use]
    pub fn of(outcomes: &[Outcome]) -> Self {
        let mut counts = Self::default();
        for outcome in outcomes.iter().filter(|outcome| outcome.suppressed_by.is_none()) {
            counts.requirements += 1;
            *match outcome.verdict {
                Verdict::Fails => &mut counts.fails,
                Verdict::Doubtful => &mut counts.doubtful,
                Verdict::Tight => &mut counts.tight,
                Verdict::Unknown => &mut counts.unknown,
                Verdict::Holds => &mut counts.holds,
            } += 1;
        }
        counts
    }

    /// These and others together.
    #[must_use]
    pub fn and(self, other: Self) -> Self {
        Self {
            requirements: self.requirements + other.requirements,
            fails: self.fails + other.fails,
            doubtful: self.doubtful + other.doubtful,
            tight: self.tight + other.tight,
            unknown: self.unknown + other.unknown,
            holds: self.holds + other.holds,
        }
    }
}
