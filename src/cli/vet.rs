//! `railworthy vet`

use std::collections::BTreeMap;

use super::args::Vet;
use super::input::Rules;
use super::settings::Terminal;
use super::{Status, Streams, day};
use crate::board::{Board, Options};
use crate::checks::cases::{self, Case, FolderReport, Told};
use crate::report;
use crate::review::examine;
use crate::source::{Problem, Severity};

pub(super) fn run(typed: &Vet, terminal: Terminal, to: &mut Streams<'_>) -> Status {
    let rules = Rules::load(&typed.folders);
    // Of folders that are named only their own checks are run; without any, the built-in ones.
    let built_in = if typed.folders.is_empty() { BTreeMap::new() } else { Rules::load(&[]).knowledge.checks.clone() };
    let replaced = |name: &str| rules.knowledge.replaced.iter().any(|(what, _)| *what == format!("checks/{name}"));
    let own = rules.knowledge.checks.iter().filter(|(name, _)| !built_in.contains_key(*name) || replaced(name));
    let reports: Vec<(String, FolderReport)> =
        own.map(|(name, files)| (name.clone(), cases::run(name, files, |case| judge(case, &rules)))).collect();
    let wrong = rules.problems.iter().any(|problem| problem.severity() >= Severity::Error);
    let clean = !wrong && reports.iter().all(|(_, report)| report.is_clean());
    let written = to.result(&report::vetted(&rules.problems, &reports, terminal.out));
    written.max(match (wrong, clean) {
        (true, _) => Status::Broken,
        (false, true) => Status::Clean,
        (false, false) => Status::Findings,
    })
}

/// Reads and judges the board of a case.
fn judge(case: &Case, rules: &Rules) -> Result<Vec<Told>, Vec<Problem>> {
    let (board, problems) = match &case.board {
        Some(source) => Board::read(source, Options { shared: false, case: true }),
        None => (Board::default(), Vec::new()),
    };
    refuse_errors(problems)?;
    let bytes = case.netlist.text().as_bytes();
    let name = case.netlist.name();
    let examination = examine(name, bytes, board, &rules.knowledge, &rules.checks, &day::today())?;
    refuse_errors(examination.problems)?;
    Ok(examination.told)
}

fn refuse_errors(problems: Vec<Problem>) -> Result<(), Vec<Problem>> {
    if problems.iter().any(|problem| problem.severity() >= Severity::Error) { Err(problems) } else { Ok(()) }
}
