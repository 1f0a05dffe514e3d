//! What a change brings as JUnit XML: what is new or worse fails, everything else is told beside it.

use std::collections::BTreeSet;
use std::ptr;

use super::ComparedBoards;
use crate::checks::Level;
use crate::report::junit::{READING, Suite, document, reading, suite};
use crate::review::Reviewed;

/// The result of some boards beside what they were; `fails` tells whether a finding of a level fails the run. A board
/// that is no more has its reading alone.
#[must_use]
pub fn compare(boards: &[ComparedBoards<'_>], fails: &dyn Fn(Level) -> bool) -> String {
    document(&boards.iter().filter_map(|pair| one(pair, fails)).collect::<Vec<_>>())
}

fn one(pair: &ComparedBoards<'_>, fails: &dyn Fn(Level) -> bool) -> Option<Suite> {
    let mut cases = Vec::new();
    cases.extend(pair.new.map(|board| reading(READING.to_owned(), board)));
    cases.extend(pair.old.map(|board| reading(format!("{READING} of what it was"), board)));
    let Some(board) = pair.new else {
        return pair.old.map(|board| Suite { name: board.netlist.clone(), cases });
    };
    // Only looked up: the same findings are gone through again.
    let news: BTreeSet<*const Reviewed> = pair.news().map(ptr::from_ref).collect();
    Some(suite(board, cases, &|found| news.contains(&ptr::from_ref(found)) && fails(found.finding.level)))
}
