//! `railworthy accept`

use std::path::{Path, PathBuf};

use super::args::{Accept, Least};
use super::input::{self, Rules};
use super::settings::Terminal;
use super::{Status, Streams, day, streams};
use crate::board::{self, Board, LARGEST_FILE, Options};
use crate::checks::Level;
use crate::report::{self, Acceptance, BoardResult};
use crate::review::{Reviewed, review_check};
use crate::source::{Severity, Source};

/// Fewest characters of a reason; less tells nobody anything.
const SHORTEST_REASON: usize = 8;

pub(super) fn run(typed: &Accept, terminal: Terminal, to: &mut Streams<'_>) -> Status {
    let today = day::today();
    if let Err(why) = sensible(typed, &today) {
        return to.broken(&why);
    }
    let rules = Rules::load(&typed.input.rules);
    let board = input::board(&typed.netlist, &typed.input, &rules, &today);
    to.tell(&report::problems(board.all_problems(), terminal.err));
    let status = if board.is_complete() { Status::Clean } else { Status::Broken };
    let chosen: Vec<&Reviewed> = requirements(&board).filter(|found| is_chosen(found, typed)).collect();
    tell_of_the_review(&board, to);
    if chosen.is_empty() {
        to.tell(&format!("nothing to accept: no open finding at {} or above fits\n", typed.least.level()));
        return status;
    }
    let until = typed.until.map(|until| until.to_string());
    let of =
        Acceptance { netlist: &board.netlist, reason: typed.reason.trim(), until: until.as_deref(), today: &today };
    let entries = report::acceptances(&chosen, of);
    if !typed.write {
        return to.result(&entries).max(status);
    }
    if status == Status::Broken {
        return to.broken("the board was not judged wholly, so that nothing is written");
    }
    match append(&board, typed, &entries) {
        Err(why) => to.broken(&why),
        Ok(file) => {
            let (count, file) = (chosen.len(), file.display().to_string());
            let plural = if count == 1 { "" } else { "s" };
            to.tell(&format!("{count} finding{plural} accepted in {}\n", report::inert(&file)));
            Status::Clean
        }
    }
}

fn sensible(typed: &Accept, today: &str) -> Result<(), String> {
    if typed.reason.trim().chars().count() < SHORTEST_REASON {
        return Err("the reason is too short; say who looked at it, or what was measured or decided".to_owned());
    }
    match typed.until {
        Some(until) if until.to_string().as_str() < today => {
            Err(format!("{until} has gone by; name the last day on which the findings are accepted"))
        }
        _ => Ok(()),
    }
}

/// Every open finding about the design, those that another tells too.
fn requirements(board: &BoardResult) -> impl Iterator<Item = &Reviewed> {
    let open = board.findings().filter(|found| found.accepted.is_none());
    let design = open.filter(|found| review_check(&found.finding.check).is_none());
    design.flat_map(|found| std::iter::once(found).chain(&found.merged))
}

fn is_chosen(found: &Reviewed, typed: &Accept) -> bool {
    let named = |list: &[String], name: &str| list.is_empty() || list.iter().any(|each| each == name);
    found.finding.level <= typed.least.level()
        && named(&typed.check, &found.finding.check)
        && (typed.part.is_empty() || found.parts.iter().any(|part| typed.part.contains(part)))
}

/// Findings of the review are to be put right: they are about the run, and none of the board's.
fn tell_of_the_review(board: &BoardResult, to: &mut Streams<'_>) {
    let open = board.findings().filter(|found| found.accepted.is_none());
    for found in open.filter(|found| review_check(&found.finding.check).is_some()) {
        let (message, check) = (report::inert(&found.finding.message), report::inert(&found.finding.check));
        to.tell(&format!("not accepted: {message} ({check})\n"));
    }
}

/// Adds entries to the board's own file, whole or not at all; one that is not there yet is made.
fn append(board: &BoardResult, typed: &Accept, entries: &str) -> Result<PathBuf, String> {
    let path = match (&board.board_file, board::own_file(&typed.netlist)) {
        (Some(file), _) => PathBuf::from(file),
        (None, Some(path)) if !input::is_standard_input(&typed.netlist) => path,
        (None, _) => {
            return Err("a netlist from standard input has no board file; name one with `--board`".to_owned());
        }
    };
    let text = joined(standing(board), entries);
    if text.len() as u64 > LARGEST_FILE {
        return Err(format!("{} would have more than the {LARGEST_FILE} bytes that are read", path.display()));
    }
    let (_, problems) = Board::read(&Source::new(path.display().to_string(), text.as_str()), Options::default());
    if let Some(problem) = problems.iter().find(|problem| problem.severity() >= Severity::Error) {
        let message = problem.message();
        return Err(format!("the entries cannot stand behind what is in {}: {message}", path.display()));
    }
    write(&path, &text)?;
    Ok(path)
}

fn write(path: &Path, text: &str) -> Result<(), String> {
    streams::write_file(path, text).map_err(|error| format!("{} cannot be written: {error}", path.display()))
}

/// What stands in the board's own file.
fn standing(board: &BoardResult) -> &str {
    let sources = board.examination.iter().flat_map(|examination| &examination.board.sources);
    let own = |source: &&Source| board.board_file.as_deref() == Some(source.name());
    sources.rev().find(own).map_or("", Source::text)
}

/// Entries behind a text, with its line ends.
fn joined(text: &str, entries: &str) -> String {
    let gap = match text {
        "" => "",
        _ if text.ends_with('\n') => "\n",
        _ => "\n\n",
    };
    let added = format!("{gap}{entries}");
    let added = if text.contains("\r\n") { added.replace('\n', "\r\n") } else { added };
    format!("{text}{added}")
}

impl Least {
    fn level(self) -> Level {
        match self {
            Self::Error => Level::Error,
            Self::Warning => Level::Warning,
            Self::Note => Level::Note,
        }
    }
}
