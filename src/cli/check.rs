//! `railworthy check`

use super::args::{Check, CheckFormat, FailOn};
use super::boards::{self, How};
use super::input::Rules;
use super::settings::Terminal;
use super::{Status, Streams, day, folders, output};
use crate::report::{self, BoardResult, TextOptions};

pub(super) fn run(typed: &Check, terminal: Terminal, to: &mut Streams<'_>) -> Status {
    let rules = Rules::load(&typed.input.rules);
    let how = How { input: &typed.input, rules: &rules, today: &day::today(), jobs: typed.jobs, quiet: typed.quiet };
    let boards = boards::judge(&typed.boards, &how, to);
    let look = if typed.output.is_some() { terminal.file() } else { terminal.out };
    let text = writer(typed.format)(&boards, TextOptions { look, quiet: typed.quiet }, typed.fail_on);
    let written = match &typed.output {
        None => to.result(&text),
        Some(path) => {
            let read = output::read_for(&boards, typed.input.board.as_deref());
            output::write(path, &text, &read, &["toml"], to)
        }
    };
    if typed.format == CheckFormat::Line && !typed.quiet {
        to.tell(&report::line_summary(&boards));
    }
    boards.iter().map(|board| status(board, typed)).fold(written, Status::max)
}

/// What writes a result.
type Writer = fn(&[BoardResult], TextOptions, FailOn) -> String;

/// What writes each format: a line here and one in the list of formats is all that a further one needs.
fn writer(format: CheckFormat) -> Writer {
    match format {
        CheckFormat::Text => |boards, options, _| report::check_text(boards, options),
        CheckFormat::Line => |boards, _, _| report::lines(boards),
        CheckFormat::Markdown => |boards, _, _| report::markdown(boards),
        CheckFormat::Json => |boards, _, _| report::check_json(boards),
        CheckFormat::Sarif => |boards, _, _| report::check_sarif(boards, &folders::folders()),
        CheckFormat::Junit => |boards, _, fail_on| report::check_junit(boards, &|level| fail_on.fails(level)),
    }
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
