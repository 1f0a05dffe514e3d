//! `railworthy explain`

use super::args::Explain;
use super::input::{self, Rules};
use super::settings::Terminal;
use super::{Status, Streams, day};
use crate::report;
use crate::review::{REVIEW_CHECKS, review_check};
use crate::source::toml::nearest;

pub(super) fn run(typed: &Explain, terminal: Terminal, to: &mut Streams<'_>) -> Status {
    let rules = Rules::load(&typed.input.rules);
    match &typed.part {
        Some(part) => explain_part(typed, part, &rules, terminal, to),
        None => explain_check(&typed.what.to_string_lossy(), &rules, terminal, to),
    }
}

fn explain_check(name: &str, rules: &Rules, terminal: Terminal, to: &mut Streams<'_>) -> Status {
    let status = rules.tell(terminal, to);
    match explained(name, rules, terminal) {
        Some(text) => to.result(&text).max(status),
        None => {
            let help = match nearest(name, check_names(rules)) {
                Some(near) => format!("did you mean `{near}`?"),
                None => "`railworthy catalog checks` lists them; name a part behind a netlist".to_owned(),
            };
            to.broken(&format!("there is no check `{name}`; {help}"))
        }
    }
}

/// A check of the rules or of the review, in full.
pub(super) fn explained(name: &str, rules: &Rules, terminal: Terminal) -> Option<String> {
    let check = rules.checks.get(name).map(|check| report::explain_check(check, terminal.out));
    check.or_else(|| review_check(name).map(|check| report::explain_review_check(check, terminal.out)))
}

/// The names of all checks, those of the review too.
pub(super) fn check_names(rules: &Rules) -> impl Iterator<Item = &str> {
    rules.checks.iter().map(|check| check.name.as_str()).chain(REVIEW_CHECKS.iter().map(|check| check.name))
}

fn explain_part(typed: &Explain, part: &str, rules: &Rules, terminal: Terminal, to: &mut Streams<'_>) -> Status {
    let board = input::board(&typed.what, &typed.input, rules, &day::today());
    let status = if board.is_complete() { Status::Clean } else { Status::Broken };
    if let Some(text) = report::explain_part(&board, part, terminal.out) {
        return to.result(&text).max(status);
    }
    to.tell(&report::problems(board.all_problems(), terminal.err));
    let names = report::part_names(&board);
    let help = match nearest(part, names.iter().map(String::as_str)) {
        Some(near) => format!("did you mean `{near}`?"),
        None => "`railworthy rails` lists the regulators and references".to_owned(),
    };
    to.broken(&format!("no part of the board is called `{part}`; {help}"))
}
