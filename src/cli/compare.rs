//! `railworthy compare`

use std::collections::BTreeMap;
use std::ffi::OsStr;
use std::path::{Path, PathBuf};

use super::args::{Compare, CompareFormat, Input};
use super::boards::{self, How};
use super::input::{Rules, is_standard_input};
use super::settings::Terminal;
use super::{Status, Streams, day, folders as project, output};
use crate::report::compare::{self, ComparedBoards};
use crate::report::{BoardResult, TextOptions};
use crate::review::compare::{Comparison, Side};

pub(super) fn run(typed: &Compare, terminal: Terminal, to: &mut Streams<'_>) -> Status {
    let folders = typed.old.is_dir() && typed.new.is_dir();
    if let Some(why) = refusal(typed, folders) {
        return to.broken(&why);
    }
    let rules = Rules::load(&typed.input.rules);
    let today = day::today();
    let of_old = Input {
        board: typed.old_board.as_ref().or(typed.input.board.as_ref()).cloned(),
        rules: typed.input.rules.clone(),
    };
    let mut judge = |path: &PathBuf, input: &Input| {
        let how = How { input, rules: &rules, today: &today, jobs: typed.jobs, quiet: typed.quiet };
        boards::judge(std::slice::from_ref(path), &how, to)
    };
    let (old, new) = (judge(&typed.old, &of_old), judge(&typed.new, &typed.input));
    let pairs = if folders { by_path(typed, &old, &new) } else { vec![(old.first(), new.first())] };
    let compared: Vec<ComparedBoards<'_>> = pairs.into_iter().map(|(old, new)| beside(old, new)).collect();
    let look = if typed.output.is_some() { terminal.file() } else { terminal.out };
    let options = TextOptions { look, quiet: typed.quiet };
    let text = match typed.format {
        CompareFormat::Text => compare::text(&compared, options),
        CompareFormat::Line => compare::line(&compared),
        CompareFormat::Markdown => compare::markdown(&compared),
        CompareFormat::Json => compare::json(&compared),
        CompareFormat::Sarif => compare::sarif(&compared, &project::folders()),
        CompareFormat::Junit => compare::junit(&compared, &|level| typed.fail_on.fails(level)),
    };
    let written = match &typed.output {
        None => to.result(&text),
        Some(path) => {
            let read = output::read_for(&old, of_old.board.as_deref()).into_iter();
            let read = read.chain(output::read_for(&new, typed.input.board.as_deref()));
            output::write(path, &text, &read.collect::<Vec<_>>(), &["toml"], to)
        }
    };
    compared.iter().map(|pair| status(pair, typed)).fold(written, Status::max)
}

/// Why two boards cannot be compared, before anything is read.
fn refusal(typed: &Compare, folders: bool) -> Option<String> {
    if is_standard_input(&typed.old) && is_standard_input(&typed.new) {
        return Some("standard input can be one of the two boards only; name a file for the other".to_owned());
    }
    let one_folder = typed.old.is_dir() != typed.new.is_dir();
    if one_folder && typed.old.exists() && typed.new.exists() {
        return Some("a folder and a file cannot be compared; name two netlists, or two folders".to_owned());
    }
    let board_file = typed.input.board.is_some() || typed.old_board.is_some();
    (folders && board_file)
        .then(|| "a board file is of one board; compare two netlists with it, not two folders".to_owned())
}

fn beside<'a>(old: Option<&'a BoardResult>, new: Option<&'a BoardResult>) -> ComparedBoards<'a> {
    let comparison = match (old, new) {
        (Some(old), Some(new)) => side(old).zip(side(new)).map(|(old, new)| Comparison::new(old, new)),
        (None, Some(new)) => new.examination.as_ref().map(Comparison::added),
        (Some(old), None) => old.examination.as_ref().map(Comparison::removed),
        (None, None) => None,
    };
    ComparedBoards { old, new, comparison }
}

fn side(board: &BoardResult) -> Option<Side<'_>> {
    board.examination.as_ref().map(|examination| Side { examination, knowledge: &board.knowledge })
}

/// The boards of two folders: those of one path below their folder, then those of one name, where no other has it. In
/// the order of the new folder; boards that are no more come last.
fn by_path<'a>(
    typed: &Compare,
    old: &'a [BoardResult],
    new: &'a [BoardResult],
) -> Vec<(Option<&'a BoardResult>, Option<&'a BoardResult>)> {
    let mut left: BTreeMap<PathBuf, &BoardResult> =
        old.iter().map(|board| (below(&board.netlist, &typed.old), board)).collect();
    let mut pairs: Vec<(Option<&BoardResult>, Option<&BoardResult>)> =
        new.iter().map(|board| (left.remove(&below(&board.netlist, &typed.new)), Some(board))).collect();
    let mut by_name: BTreeMap<&OsStr, Vec<&BoardResult>> = BTreeMap::new();
    for board in left.values() {
        by_name.entry(file_name(board)).or_default().push(board);
    }
    let mut open: BTreeMap<&OsStr, usize> = BTreeMap::new();
    for (_, board) in pairs.iter().filter(|(old, _)| old.is_none()) {
        *open.entry(board.map(file_name).unwrap_or_default()).or_default() += 1;
    }
    for (found, board) in pairs.iter_mut().filter(|(old, _)| old.is_none()) {
        let name = board.map(file_name).unwrap_or_default();
        if let (Some([only]), Some(1)) = (by_name.get(name).map(Vec::as_slice), open.get(name)) {
            left.remove(&below(&only.netlist, &typed.old));
            *found = Some(only);
        }
    }
    pairs.extend(left.into_values().map(|board| (Some(board), None)));
    pairs
}

/// A path below a folder; what was not found below it keeps its own.
fn below(netlist: &str, folder: &Path) -> PathBuf {
    let path = Path::new(netlist);
    // Paths in the folder of the run are told without the `./` that was typed.
    let plain = folder.strip_prefix(".").unwrap_or(folder);
    path.strip_prefix(folder).or_else(|_| path.strip_prefix(plain)).unwrap_or(path).to_owned()
}

fn file_name(board: &BoardResult) -> &OsStr {
    Path::new(&board.netlist).file_name().unwrap_or_default()
}

fn status(pair: &ComparedBoards<'_>, typed: &Compare) -> Status {
    if !pair.is_complete() {
        Status::Broken
    } else if pair.worst_news().is_some_and(|level| typed.fail_on.fails(level)) {
        Status::Findings
    } else {
        Status::Clean
    }
}
