//! Which boards are meant: files as they are named, and every netlist export below a folder that is named.

use std::collections::BTreeSet;
use std::ffi::OsStr;
use std::fs;
use std::io::{self, Read};
use std::path::{Path, PathBuf};

use super::input::is_standard_input;
use crate::netlist::{FIRST_BYTES, begins_export};
use crate::source::Problem;

/// Deepest folder that is entered, counted from the one that is named.
pub const DEEPEST_FOLDER: usize = 64;
/// Most files and folders that are looked at below one that is named.
pub const MOST_ENTRIES: usize = 1_000_000;
/// Most boards of one run.
pub const MOST_BOARDS: usize = 20_000;

/// The endings of netlist exports; other tools use them too.
const ENDINGS: [&str; 2] = ["net", "xml"];
/// Most files that are named where they are passed over.
const MOST_NAMED: usize = 3;

/// Something that was named, or found below a folder.
#[derive(Debug)]
pub(super) enum Item {
    /// A board.
    Board(PathBuf),
    /// What cannot be looked through, and why.
    Refused(PathBuf, Problem),
}

/// What is meant.
#[derive(Debug, Default)]
pub(super) struct Meant {
    /// In the order of the arguments; of one folder, in that of their paths. No board stands here twice.
    pub(super) items: Vec<Item>,
    /// What was passed over, in a sentence for each folder.
    pub(super) notes: Vec<String>,
}

/// How far a walk may go, so that tests can meet small limits.
#[derive(Debug, Clone, Copy)]
struct Limits {
    depth: usize,
    entries: usize,
    boards: usize,
}

impl Default for Limits {
    fn default() -> Self {
        Self { depth: DEEPEST_FOLDER, entries: MOST_ENTRIES, boards: MOST_BOARDS }
    }
}

/// The boards that some arguments mean.
pub(super) fn meant(named: &[PathBuf]) -> Meant {
    meant_within(named, Limits::default())
}

fn meant_within(named: &[PathBuf], limits: Limits) -> Meant {
    let mut meant = Meant::default();
    let mut known = BTreeSet::new();
    for path in named {
        if is_standard_input(path) || !path.is_dir() {
            add(path.clone(), &mut meant.items, &mut known);
            continue;
        }
        match Below::of(path, limits) {
            Err(problem) => meant.items.push(Item::Refused(path.clone(), *problem)),
            Ok(below) => {
                meant.notes.extend(below.note(path));
                for (path, unreadable) in below.found {
                    match unreadable {
                        None => add(path, &mut meant.items, &mut known),
                        Some(problem) => meant.items.push(Item::Refused(path, problem)),
                    }
                }
            }
        }
    }
    meant
}

/// Adds a board that is not there yet under any name.
fn add(path: PathBuf, items: &mut Vec<Item>, known: &mut BTreeSet<PathBuf>) {
    let real = if is_standard_input(&path) { None } else { fs::canonicalize(&path).ok() };
    if known.insert(real.unwrap_or_else(|| path.clone())) {
        items.push(Item::Board(path));
    }
}

/// What lies below a folder.
#[derive(Debug, Default)]
struct Below {
    /// Netlist exports, and folders that cannot be read.
    found: Vec<(PathBuf, Option<Problem>)>,
    /// Files of these endings that are something else.
    others: Vec<PathBuf>,
    /// Symbolic links, devices and pipes of these endings.
    not_plain: usize,
    entries: usize,
    boards: usize,
}

impl Below {
    fn of(top: &Path, limits: Limits) -> Result<Self, Box<Problem>> {
        let mut below = Self::default();
        let mut folders = vec![(top.to_owned(), 0)];
        while let Some((folder, depth)) = folders.pop() {
            if depth > limits.depth {
                let message = format!("the folders below {} nest more than {} deep", top.display(), limits.depth);
                return Err(Box::new(Problem::error(message).help("name folders further down")));
            }
            let list = match fs::read_dir(&folder) {
                Ok(list) => list,
                Err(error) => {
                    below.unreadable(folder, &error);
                    continue;
                }
            };
            for entry in list {
                match entry.and_then(|entry| Ok((entry.path(), entry.file_type()?))) {
                    Ok((path, kind)) => below.look(&path, kind, depth, &mut folders),
                    Err(error) => below.unreadable(folder.clone(), &error),
                }
                below.hold(top, limits)?;
            }
        }
        below.found.sort_by(|(one, _), (other, _)| one.cmp(other));
        below.others.sort();
        if below.boards == 0 { Err(Box::new(below.nothing(top))) } else { Ok(below) }
    }

    /// Looks at one entry of a folder.
    fn look(&mut self, path: &Path, kind: fs::FileType, depth: usize, folders: &mut Vec<(PathBuf, usize)>) {
        self.entries += 1;
        if kind.is_dir() {
            if !is_hidden(path) {
                folders.push((path.to_owned(), depth + 1));
            }
        } else if has_ending(path) {
            // What cannot be opened is told when it is to be judged.
            match kind.is_file() {
                true if first_bytes(path).is_ok_and(|bytes| !begins_export(&bytes)) => {
                    self.others.push(plainly(path));
                }
                true => {
                    self.boards += 1;
                    self.found.push((plainly(path), None));
                }
                false => self.not_plain += 1,
            }
        }
    }

    fn hold(&self, top: &Path, limits: Limits) -> Result<(), Box<Problem>> {
        let top = top.display();
        let message = if self.entries > limits.entries {
            format!("more than {} files and folders lie below {top}", limits.entries)
        } else if self.boards > limits.boards {
            format!("more than {} netlist exports lie below {top}", limits.boards)
        } else {
            return Ok(());
        };
        Err(Box::new(Problem::error(message).help("name folders further down, in several runs")))
    }

    fn unreadable(&mut self, folder: PathBuf, error: &io::Error) {
        let folder = plainly(&folder);
        let problem = Problem::error(format!("the folder {} cannot be read: {error}", folder.display()));
        self.found
            .push((folder, Some(problem.help("boards below it are not judged; let it be read, or name others"))));
    }

    /// That no board lies below a folder, and what was looked for.
    fn nothing(&self, top: &Path) -> Problem {
        let mut message = format!("no netlist export lies below {}", top.display());
        if let Some(others) = self.passed_over() {
            message.push_str(&format!(" ({others})"));
        }
        if let Some((_, Some(problem))) = self.found.first() {
            message.push_str(&format!("; {}", problem.message()));
        }
        Problem::error(message).help(
            "files were looked for that end in .net or .xml and begin as an export of the schematic editor does, not \
             in hidden folders, and not behind symbolic links",
        )
    }

    fn note(&self, top: &Path) -> Option<String> {
        self.passed_over().map(|others| format!("below {}: {others}", top.display()))
    }

    /// What of these endings was passed over.
    fn passed_over(&self) -> Option<String> {
        let mut told = Vec::new();
        if let Some(first) = self.others.first() {
            let names: Vec<String> =
                self.others.iter().take(MOST_NAMED).map(|path| path.display().to_string()).collect();
            let more = self.others.len() - names.len();
            let more = if more > 0 { format!(" and {more} more") } else { String::new() };
            told.push(match self.others.len() {
                1 => format!("{} is no netlist export and was passed over", first.display()),
                _ => format!("{}{more} are no netlist exports and were passed over", names.join(", ")),
            });
        }
        match self.not_plain {
            0 => {}
            1 => told.push("1 link or device was not followed".to_owned()),
            count => told.push(format!("{count} links or devices were not followed")),
        }
        (!told.is_empty()).then(|| told.join("; "))
    }
}

/// `./hw/a.net` as `hw/a.net`.
fn plainly(path: &Path) -> PathBuf {
    let short = path.strip_prefix(".").ok().filter(|short| !short.as_os_str().is_empty());
    short.unwrap_or(path).to_owned()
}

fn is_hidden(path: &Path) -> bool {
    path.file_name().is_some_and(|name| name.as_encoded_bytes().starts_with(b"."))
}

fn has_ending(path: &Path) -> bool {
    path.extension()
        .and_then(OsStr::to_str)
        .is_some_and(|is| ENDINGS.iter().any(|known| is.eq_ignore_ascii_case(known)))
}

/// The first bytes of a plain file; none of a device or pipe, which may wait.
pub(super) fn first_bytes(path: &Path) -> io::Result<Vec<u8>> {
    let mut bytes = Vec::new();
    if !fs::metadata(path)?.is_file() {
        return Ok(bytes);
    }
    fs::File::open(path)?.take(FIRST_BYTES as u64).read_to_end(&mut bytes)?;
    Ok(bytes)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn messages(meant: &Meant) -> Vec<String> {
        let told = |item: &Item| match item {
            Item::Board(_) => None,
            Item::Refused(_, problem) => Some(problem.message().to_owned()),
        };
        meant.items.iter().filter_map(told).collect()
    }

    #[test]
    fn past_a_limit_a_folder_is_refused_whole() {
        let folder = tempfile::tempdir().unwrap();
        fs::create_dir_all(folder.path().join("a/b")).unwrap();
        for name in ["a/b/1.net", "a/2.net", "3.net"] {
            fs::write(folder.path().join(name), "(export)").unwrap();
        }
        let all = Limits { depth: 2, entries: 5, boards: 3 };
        let named = [folder.path().to_owned()];
        assert_eq!(meant_within(&named, all).items.len(), 3);
        for (limits, told) in [
            (Limits { depth: 1, ..all }, "nest more than 1 deep"),
            (Limits { entries: 4, ..all }, "more than 4 files and folders lie below"),
            (Limits { boards: 2, ..all }, "more than 2 netlist exports lie below"),
        ] {
            let meant = meant_within(&named, limits);
            assert_eq!(meant.items.len(), 1);
            assert!(messages(&meant)[0].contains(told), "{:?}", messages(&meant));
        }
    }

    #[test]
    fn what_is_no_folder_is_left_to_the_reader() {
        let named = ["no-such.net", "-", "no-such.net"].map(PathBuf::from);
        let meant = meant(&named);
        let boards = meant.items.iter().map(|item| matches!(item, Item::Board(_)));
        assert_eq!(boards.collect::<Vec<_>>(), [true, true]);
    }
}
