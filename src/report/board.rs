//! A board as a report shows it.

use std::sync::Arc;

use crate::checks::{Checks, Level};
use crate::knowledge::Knowledge;
use crate::review::{Examination, Reviewed};
use crate::source::{Problem, Severity};

/// What came of one board.
#[derive(Debug)]
pub struct BoardResult {
    /// The netlist as its reader was given it; `<stdin>` for standard input.
    pub netlist: String,
    /// The board's own file, as it was found or named.
    pub board_file: Option<String>,
    /// The house file above it.
    pub house_file: Option<String>,
    /// What it was judged with.
    pub knowledge: Arc<Knowledge>,
    /// The checks that it was judged by, with their settings as their files have them.
    pub checks: Arc<Checks>,
    /// What is wrong or odd in its rules.
    pub rule_problems: Arc<[Problem]>,
    /// What was lost or odd in its files, in the order of reading.
    pub problems: Vec<Problem>,
    /// What was found; `None` where nothing could be judged.
    pub examination: Option<Examination>,
}

impl BoardResult {
    /// Whether the whole board was judged under all that was declared.
    #[must_use]
    pub fn is_complete(&self) -> bool {
        self.examination.is_some() && self.all_problems().all(|problem| problem.severity() < Severity::Error)
    }

    /// What is wrong in its rules, then in its files.
    pub fn all_problems(&self) -> impl Iterator<Item = &Problem> {
        self.rule_problems.iter().chain(&self.problems)
    }

    /// Every finding, accepted ones too.
    pub fn findings(&self) -> impl Iterator<Item = &Reviewed> {
        self.examination.iter().flat_map(|examination| &examination.findings)
    }

    /// The level of the worst finding that nobody has accepted.
    #[must_use]
    pub fn worst_level(&self) -> Option<Level> {
        self.findings().filter(|found| found.accepted.is_none()).map(|found| found.finding.level).min()
    }
}
