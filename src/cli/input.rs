//! Reading what the arguments name: netlists, board files, rules.

use std::collections::BTreeMap;
use std::fs;
use std::io::{self, Read};
use std::path::{Path, PathBuf};
use std::sync::{Arc, Mutex, PoisonError};

use super::settings::Terminal;
use super::{Status, Streams, args};
use crate::board::{self, Board, FileError, Links, Options};
use crate::checks::{Checks, DefinedNames};
use crate::knowledge::Knowledge;
use crate::netlist::Netlist;
use crate::netlist::limits::{MAX_BYTES, MAX_PROBLEMS};
use crate::report::{self, BoardResult};
use crate::review::{examine_with_sheets, review_check};
use crate::sheet::Sheets;
use crate::source::{Problem, Severity};

/// What standard input is called in messages.
const STANDARD_INPUT: &str = "<stdin>";

/// Rules with what was wrong in them.
#[derive(Debug)]
pub(super) struct Rules {
    pub(super) knowledge: Arc<Knowledge>,
    pub(super) checks: Arc<Checks>,
    pub(super) problems: Arc<[Problem]>,
    /// Those of boards that name folders of their own, by all folders that count.
    own: Mutex<BTreeMap<Vec<PathBuf>, Arc<Rules>>>,
}

impl Rules {
    /// The built-in rules with those of some folders.
    pub(super) fn load(folders: &[PathBuf]) -> Self {
        let (knowledge, mut problems) = Knowledge::load(folders);
        let (checks, found) = Checks::load(&knowledge.checks, &DefinedNames);
        problems.extend(found);
        problems.extend(checks.iter().filter_map(|check| name_is_taken(&check.name)));
        Self {
            knowledge: Arc::new(knowledge),
            checks: Arc::new(checks),
            problems: problems.into(),
            own: Mutex::default(),
        }
    }

    /// The rules of a board that names folders of its own; loaded once, however many boards name the same.
    fn own(&self, board: &Board, typed: &[PathBuf]) -> Option<Arc<Self>> {
        if board.rule_folders.is_empty() {
            return None;
        }
        let named = board.rule_folders.iter().map(|folder| folder.value.clone());
        let folders: Vec<PathBuf> = named.chain(typed.iter().cloned()).collect();
        // Whoever panicked while it held the lock left nothing half done: what is loaded is inserted whole.
        let mut own = self.own.lock().unwrap_or_else(PoisonError::into_inner);
        let rules = own.entry(folders).or_insert_with_key(|folders| Arc::new(Self::load(folders)));
        Some(Arc::clone(rules))
    }
}

fn name_is_taken(name: &str) -> Option<Problem> {
    let problem = Problem::error(format!(
        "the check folder `{}` has the name of a check of the review",
        review_check(name)?.name
    ));
    Some(problem.help("give the folder and its check another name"))
}

impl Rules {
    /// Tells what is wrong with them beside a result that does not hold it.
    pub(super) fn tell(&self, terminal: Terminal, to: &mut Streams<'_>) -> Status {
        to.tell(&report::problems(self.problems.iter(), terminal.err));
        let wrong = self.problems.iter().any(|problem| problem.severity() >= Severity::Error);
        if wrong { Status::Broken } else { Status::Clean }
    }
}

/// A board file with the house file below it.
#[derive(Debug, Default)]
struct Declared {
    board: Board,
    house_file: Option<String>,
    own_file: Option<String>,
    problems: Vec<Problem>,
}

/// Reads and judges one board under the rules of the command line and of its board files.
pub(super) fn board(path: &Path, input: &args::Input, rules: &Rules, today: &str) -> BoardResult {
    let declared = declared(path, input.board.as_deref());
    let own_rules = rules.own(&declared.board, &input.rules);
    let rules = own_rules.as_deref().unwrap_or(rules);
    let mut result = BoardResult {
        netlist: name(path),
        board_file: declared.own_file,
        house_file: declared.house_file,
        knowledge: Arc::clone(&rules.knowledge),
        checks: Arc::clone(&rules.checks),
        rule_problems: Arc::clone(&rules.problems),
        problems: declared.problems,
        examination: None,
    };
    match netlist(path) {
        Err(problem) => result.problems.push(*problem),
        Ok(bytes) => match crate::netlist::read(&result.netlist, &bytes) {
            Err(problems) => result.problems.extend(problems),
            Ok(netlist) => {
                let sheets = sheets(path, &netlist);
                let (knowledge, checks) = (&rules.knowledge, &rules.checks);
                let mut examination = examine_with_sheets(netlist, &sheets, declared.board, knowledge, checks, today);
                result.problems.append(&mut examination.problems);
                result.examination = Some(examination);
            }
        },
    }
    result.problems = told(result.problems);
    result
}

/// The schematic sheets beside a netlist; there is nothing beside standard input.
fn sheets(path: &Path, netlist: &Netlist) -> Sheets {
    if is_standard_input(path) { Sheets::default() } else { Sheets::beside(path, netlist) }
}

/// Problems, no more errors and no more others than a reader can use; the rest is counted.
fn told(all: Vec<Problem>) -> Vec<Problem> {
    let (mut errors, mut others) = (0, 0);
    let mut kept = Vec::new();
    for problem in all {
        let count = if problem.severity() >= Severity::Error { &mut errors } else { &mut others };
        *count += 1;
        if *count <= MAX_PROBLEMS {
            kept.push(problem);
        }
    }
    let more = |count: usize| Some(count.saturating_sub(MAX_PROBLEMS)).filter(|more| *more > 0);
    kept.extend(more(errors).map(|more| Problem::error(format!("{more} more errors are not listed"))));
    kept.extend(more(others).map(|more| Problem::warning(format!("{more} more warnings are not listed"))));
    kept
}

/// What comes of something named that cannot be judged.
pub(super) fn not_judged(path: &Path, problem: Problem, rules: &Rules) -> BoardResult {
    BoardResult {
        netlist: name(path),
        board_file: None,
        house_file: None,
        knowledge: Arc::clone(&rules.knowledge),
        checks: Arc::clone(&rules.checks),
        rule_problems: Arc::clone(&rules.problems),
        problems: vec![problem],
        examination: None,
    }
}

fn name(path: &Path) -> String {
    if is_standard_input(path) { STANDARD_INPUT.to_owned() } else { path.display().to_string() }
}

pub(super) fn is_standard_input(path: &Path) -> bool {
    path.as_os_str() == "-"
}

fn declared(netlist: &Path, named: Option<&Path>) -> Declared {
    let mut declared = Declared::default();
    let (house, own) = if is_standard_input(netlist) { (None, None) } else { board::find(netlist) };
    let mut read = |path: &Path, links, options| match board::read_source(path, links) {
        Err(error) => {
            declared.problems.push(file_problem(&error));
            None
        }
        Ok(source) => {
            let (board, problems) = Board::read(&source, options);
            declared.problems.extend(problems);
            Some(board)
        }
    };
    let house_board =
        house.as_deref().and_then(|path| read(path, Links::Refuse, Options { shared: true, case: false }));
    let (own, links) = match named {
        Some(path) => (Some(path.to_owned()), Links::Follow),
        None => (own, Links::Refuse),
    };
    let own_board = own.as_deref().and_then(|path| read(path, links, Options::default()));
    declared.house_file = house_board.is_some().then(|| house.map(|path| path.display().to_string())).flatten();
    declared.own_file = own_board.is_some().then(|| own.map(|path| path.display().to_string())).flatten();
    declared.board = Board::merge(house_board.unwrap_or_default(), own_board.unwrap_or_default());
    declared
}

fn file_problem(error: &FileError) -> Problem {
    let problem = Problem::error(error.to_string());
    match error {
        FileError::Io(..) => problem.help("name a file that can be read"),
        FileError::NotPlain(..) => problem.help("put a plain file there, or name one with `--board`"),
        FileError::TooLarge(_) => problem.help("check that this is a board file"),
        FileError::NotText(..) => problem.help("save it as UTF-8"),
    }
}

/// The bytes of a netlist: of a plain file, or of standard input.
fn netlist(path: &Path) -> Result<Vec<u8>, Box<Problem>> {
    if is_standard_input(path) {
        return limited(&mut io::stdin().lock())
            .map_err(|error| Box::new(Problem::error(format!("standard input cannot be read: {error}"))));
    }
    let shown = path.display();
    let unreadable = |error: io::Error| {
        let problem = Problem::error(format!("{shown} cannot be read: {error}"));
        Box::new(problem.help("name a netlist export that can be read"))
    };
    // Asked before it is opened, for opening a pipe waits for its writer; and after, for it may be another by then.
    not_special(&fs::metadata(path).map_err(unreadable)?, path)?;
    let mut file = fs::File::open(path).map_err(unreadable)?;
    let found = file.metadata().map_err(unreadable)?;
    not_special(&found, path)?;
    if found.len() > MAX_BYTES as u64 {
        let message = format!("{shown} has {} bytes, more than the {MAX_BYTES} that are read", found.len());
        return Err(Box::new(Problem::error(message).help("check that this is the netlist of one board")));
    }
    limited(&mut file).map_err(unreadable)
}

/// All bytes, up to one more than are read: the reader then says that there are too many.
fn limited(from: &mut dyn Read) -> io::Result<Vec<u8>> {
    let mut bytes = Vec::new();
    from.take(MAX_BYTES as u64 + 1).read_to_end(&mut bytes)?;
    Ok(bytes)
}

fn not_special(found: &fs::Metadata, path: &Path) -> Result<(), Box<Problem>> {
    if found.is_file() {
        return Ok(());
    }
    let what = if found.is_dir() { "a folder" } else { "a device, pipe or socket" };
    let problem = Problem::error(format!("{} is {what}, not a plain file", path.display()));
    Err(Box::new(problem.help("name the netlist export itself, or `-` for standard input")))
}
