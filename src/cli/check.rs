//! `railworthy check`

use super::args::{Check, CheckFormat};
use super::input::{self, Rules};
use super::settings::Terminal;
use super::{Status, Streams, day, streams};
use crate::report::{self, BoardResult, TextOptions};
use crate::source::Severity;

pub(super) fn run(typed: &Check, terminal: Terminal, to: &mut Streams<'_>) -> Status {
    let rules = Rules::load(&typed.input.rules);
    let today = day::today();
    let mut boards = Vec::new();
    for path in &typed.boards {
        let (mut board, _) = input::board(path, &typed.input, &rules, &today);
        // Rules that were left out leave every board judged in part.
        if board.problems.is_empty() && boards.is_empty() {
            board.problems.splice(0..0, rules.problems.iter().cloned());
        }
        boards.push(board);
    }
    let look = if typed.output.is_some() { terminal.file() } else { terminal.out };
    let text = match typed.format {
        CheckFormat::Text => report::check_text(&boards, TextOptions { look, quiet: typed.quiet }),
        CheckFormat::Json => report::check_json(&boards),
    };
    let written = match &typed.output {
        None => to.result(&text),
        Some(path) => match streams::write_file(path, &text) {
            Ok(()) => Status::Clean,
            Err(error) => to.broken(&format!("{} cannot be written: {error}", path.display())),
        },
    };
    let rules_broken = rules.problems.iter().any(|problem| problem.severity() >= Severity::Error);
    let rules_status = if rules_broken { Status::Broken } else { Status::Clean };
    boards.iter().map(|board| status(board, typed)).fold(written.max(rules_status), Status::max)
}

fn status(board: &BoardResult, typed: &Check) -> Status {
    if !board.is_complete() {
        Status::Broken
    } else if board.worst_level().is_some_and(|level| typed.fail_on.fails(level)) {
        Status::Findings
    } else {
        Status::Clean
    }
}
