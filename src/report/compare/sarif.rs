//! What a change brings and takes away as SARIF 2.1.0: all findings, each with what it is beside the old board.

use super::ComparedBoards;
use crate::report::BoardResult;
use crate::report::sarif::{Folders, Told, written};
use crate::review::compare::State;

/// The result of some boards beside what they were; files are named from the folders.
///
/// The standard wants a state on all results of a run or on none: where a board could not be compared there is none, and
/// what is gone is not told.
#[must_use]
pub fn compare(boards: &[ComparedBoards<'_>], folders: &Folders) -> String {
    let all: Vec<&BoardResult> = boards.iter().flat_map(|pair| pair.old.into_iter().chain(pair.new)).collect();
    let compared = boards.iter().all(|pair| pair.comparison.is_some());
    let told = boards.iter().flat_map(|pair| if compared { with_states(pair) } else { without(pair) }).collect();
    written(&all, told, folders)
}

fn with_states<'a>(pair: &'a ComparedBoards<'_>) -> Vec<Told<'a>> {
    let mut told = Vec::new();
    let Some(comparison) = &pair.comparison else { return told };
    if let Some(board) = pair.new {
        told.extend(comparison.findings.iter().map(|each| Told {
            board,
            found: each.now,
            state: Some(state(each.state)),
        }));
    }
    if let Some(board) = pair.old {
        told.extend(comparison.gone.iter().map(|gone| Told { board, found: gone.was, state: Some("absent") }));
    }
    told
}

fn without<'a>(pair: &'a ComparedBoards<'_>) -> Vec<Told<'a>> {
    let Some(board) = pair.new else { return Vec::new() };
    board.findings().map(|found| Told { board, found, state: None }).collect()
}

/// The standard's word for a state.
fn state(state: State) -> &'static str {
    match state {
        State::New => "new",
        State::Worse | State::Better | State::Changed => "updated",
        State::Same => "unchanged",
    }
}
