//! The report of `compare`: what a change brings and takes away.

mod changes;
mod json;
mod junit;
mod line;
mod markdown;
mod sarif;
mod text;

use std::sync::Arc;

use super::BoardResult;
use crate::checks::Level;
use crate::review::Reviewed;
use crate::review::compare::Comparison;
use crate::source::Problem;

pub(super) use json::SCHEMA;
pub use json::compare as json;
pub use junit::compare as junit;
pub use line::compare as line;
pub use markdown::compare as markdown;
pub use sarif::compare as sarif;
pub use text::compare as text;

/// A board beside what it was.
#[derive(Debug)]
pub struct ComparedBoards<'a> {
    /// What it was; `None` where it is new as a whole.
    pub old: Option<&'a BoardResult>,
    /// What it is; `None` where it is no more.
    pub new: Option<&'a BoardResult>,
    /// What changed; `None` where one of both could not be read.
    pub comparison: Option<Comparison<'a>>,
}

impl ComparedBoards<'_> {
    /// Whether all that there is of both was judged.
    #[must_use]
    pub fn is_complete(&self) -> bool {
        self.comparison.is_some() && self.old.into_iter().chain(self.new).all(BoardResult::is_complete)
    }

    /// The findings that the change brought or made worse, and that nobody has accepted. Where nothing could be compared,
    /// all that nobody has accepted.
    pub fn news(&self) -> impl Iterator<Item = &Reviewed> {
        let compared = self.comparison.iter().flat_map(|comparison| &comparison.findings);
        let news = compared.filter(|each| each.state.is_news()).map(|each| each.now);
        let all = self.new.filter(|_| self.comparison.is_none()).into_iter().flat_map(BoardResult::findings);
        news.chain(all).filter(|found| found.accepted.is_none())
    }

    /// The level of the worst of them.
    #[must_use]
    pub fn worst_news(&self) -> Option<Level> {
        self.news().map(|found| found.finding.level).min()
    }
}

/// The problems of all boards, old and new, each with its board; those of rules that boards share once.
fn all_problems<'a>(boards: &'a [ComparedBoards<'_>]) -> Vec<(&'a BoardResult, &'a Problem)> {
    let mut all = Vec::new();
    let mut last: Option<&BoardResult> = None;
    for board in boards.iter().flat_map(|pair| pair.old.into_iter().chain(pair.new)) {
        if last.is_none_or(|last| !Arc::ptr_eq(&last.rule_problems, &board.rule_problems)) {
            all.extend(board.rule_problems.iter().map(|problem| (board, problem)));
        }
        last = Some(board);
        all.extend(board.problems.iter().map(|problem| (board, problem)));
    }
    all
}
