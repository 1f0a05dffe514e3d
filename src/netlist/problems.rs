//! The problems of one file, no more of them than a reader can use.

use super::limits::MAX_PROBLEMS;
use crate::source::{Problem, Severity};

/// Problems as they are met. Errors and others are limited apart, so that a flood of warnings hides no error.
#[derive(Debug, Default)]
pub(super) struct Problems {
    errors: Vec<Problem>,
    others: Vec<Problem>,
    more_errors: usize,
    more_others: usize,
}

impl Problems {
    /// Keeps a problem, or counts it where enough of its kind are kept.
    pub(super) fn push(&mut self, problem: Problem) {
        let (kept, more) = if problem.severity() == Severity::Error {
            (&mut self.errors, &mut self.more_errors)
        } else {
            (&mut self.others, &mut self.more_others)
        };
        if kept.len() < MAX_PROBLEMS { kept.push(problem) } else { *more += 1 }
    }

    /// Whether anything was lost.
    pub(super) fn has_error(&self) -> bool {
        !self.errors.is_empty()
    }

    /// The problems in order of the file, then how many were only counted.
    pub(super) fn settle(self) -> Vec<Problem> {
        let mut all = self.errors;
        all.extend(self.others);
        all.sort_by_key(|problem| problem.place().map_or(usize::MAX, |(_, span)| span.start()));
        if self.more_errors > 0 {
            all.push(Problem::error(format!("{} more errors are not listed", self.more_errors)));
        }
        if self.more_others > 0 {
            all.push(Problem::warning(format!("{} more warnings are not listed", self.more_others)));
        }
        all
    }
}
