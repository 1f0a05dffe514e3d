//! `railworthy vet`

use std::collections::BTreeMap;

use super::args::Vet;
use super::input::Rules;
use super::settings::Terminal;
use super::{Status, Streams, day};
use crate::board::{Board, Options};
use crate::checks::cases::{self, Case, FolderReport, Told};
use crate::knowledge::{Family, Knowledge};
use crate::recognize::{Overlap, overlaps};
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
    let known = if typed.folders.is_empty() { Vec::new() } else { Knowledge::shared().families.clone() };
    let families: Vec<&Family> = rules.knowledge.families.iter().filter(|family| !known.contains(family)).collect();
    let shared = shared_names(&rules.knowledge, &families);
    let wrong = rules.problems.iter().any(|problem| problem.severity() >= Severity::Error);
    let clean = !wrong && shared.is_empty() && reports.iter().all(|(_, report)| report.is_clean());
    let problems: Vec<Problem> = rules.problems.iter().cloned().chain(shared).collect();
    let mut text = report::vetted(&problems, &reports, terminal.out);
    if typed.lacks || !typed.folders.is_empty() {
        text.push_str(&report::catalog::lacking_figures(&families, &rules.checks, terminal.out));
    }
    let written = to.result(&text);
    written.max(match (wrong, clean) {
        (true, _) => Status::Broken,
        (false, true) => Status::Clean,
        (false, false) => Status::Findings,
    })
}

/// Names that families share without anything that says which is meant.
fn shared_names(knowledge: &Knowledge, families: &[&Family]) -> Vec<Problem> {
    let told = |overlap: &Overlap| {
        let families = overlap.families.iter().filter_map(|index| knowledge.families.get(*index));
        let names: Vec<String> = families.map(|family| format!("`{}` ({})", family.name, family.file)).collect();
        let maker = if overlap.maker.is_empty() { String::new() } else { format!(" of {}", overlap.maker) };
        let message = format!("`{}`{maker} fits {} alike", overlap.name, names.join(" and "));
        Problem::warning(message).help(
            "write a pattern that says more in one of them: of two that fit, one with a voltage code is meant, then the \
             one with more letters and digits; or tell with `version_of` and `maker_words` that one is a maker's own",
        )
    };
    overlaps(knowledge, families, []).iter().map(told).collect()
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
