//! `railworthy declare`

use std::fs;
use std::path::{Path, PathBuf};

use super::args::Declare;
use super::input::{self, Rules};
use super::settings::Terminal;
use super::{Status, Streams, day, output, streams};
use crate::board::find_own;
use crate::report::{self, BoardResult};

pub(super) fn run(typed: &Declare, terminal: Terminal, to: &mut Streams<'_>) -> Status {
    let rules = Rules::load(&typed.input.rules);
    let board = input::board(&typed.netlist, &typed.input, &rules, &day::today());
    to.tell(&report::problems(board.all_problems(), terminal.err));
    let status = if board.is_complete() { Status::Clean } else { Status::Broken };
    let text = match report::declare(&board) {
        Ok(text) => text,
        Err(why) => return to.broken(&why),
    };
    let written = match &typed.output {
        None => to.result(&text),
        Some(path) if !typed.replace && is_file(path) => to.broken(&format!(
            "{} exists and was left as it is; `--replace` puts the new text in its place{}",
            path.display(),
            if is_own(path, &board) { ", which keeps all that it declares" } else { "" }
        )),
        Some(path) => output::write(path, &text, &kept(typed, &board), &[], to),
    };
    written.max(status)
}

/// The files that the text does not hold: all that were named or lie there, but the board file that it continues.
fn kept(typed: &Declare, board: &BoardResult) -> Vec<PathBuf> {
    let mut files = vec![typed.netlist.clone()];
    files.extend(board.house_file.as_ref().map(PathBuf::from));
    if board.board_file.is_none() {
        files.extend(typed.input.board.clone());
        files.extend(find_own(&typed.netlist));
    }
    files
}

/// Whether something lies there that could be lost: a file, or a link to anything.
fn is_file(path: &Path) -> bool {
    fs::symlink_metadata(path).is_ok_and(|found| found.is_file() || found.is_symlink())
}

/// Whether it is the board file that was read.
fn is_own(path: &Path, board: &BoardResult) -> bool {
    streams::replaced(path, board.board_file.iter().map(Path::new)).is_some()
}
