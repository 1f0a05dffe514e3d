//! The report of `compare`: what a change brings and takes away.

mod json;
mod text;

use super::BoardResult;
use crate::checks::Level;
use crate::review::compare::Comparison;

pub use json::compare as json;
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

    /// The level of the worst finding that the change brought or made worse, and that nobody has accepted. Where nothing
    /// could be compared, that of the worst finding there is.
    #[must_use]
    pub fn worst_news(&self) -> Option<Level> {
        let Some(comparison) = &self.comparison else { return self.new.and_then(BoardResult::worst_level) };
        let news = comparison.findings.iter().filter(|each| each.state.is_news() && each.now.accepted.is_none());
        news.map(|each| each.now.finding.level).min()
    }
}
