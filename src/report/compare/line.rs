//! What a change brought or made worse, in one line each, as editors and build tools read them.

use super::{ComparedBoards, all_problems};
use crate::report::line::{of_finding, told};

/// The findings that are new or worse and that nobody has accepted, and all problems, one a line.
#[must_use]
pub fn compare(boards: &[ComparedBoards<'_>]) -> String {
    let mut text = String::new();
    for (board, problem) in all_problems(boards) {
        text.push_str(&told(problem, &board.netlist));
    }
    for found in boards.iter().flat_map(ComparedBoards::news) {
        text.push_str(&of_finding(found));
    }
    crate::report::guarded(&text)
}
