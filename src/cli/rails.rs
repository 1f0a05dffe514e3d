//! `railworthy rails`

use super::args::{Rails, RailsFormat};
use super::input::{self, Rules};
use super::settings::Terminal;
use super::{Status, Streams, day};
use crate::report;

pub(super) fn run(typed: &Rails, terminal: Terminal, to: &mut Streams<'_>) -> Status {
    let rules = Rules::load(&typed.input.rules);
    let board = input::board(&typed.netlist, &typed.input, &rules, &day::today());
    let text = match typed.format {
        RailsFormat::Text => report::rails_text(&board, terminal.out),
        RailsFormat::Json => report::rails_json(&board),
    };
    let written = to.result(&text);
    written.max(if board.is_complete() { Status::Clean } else { Status::Broken })
}
