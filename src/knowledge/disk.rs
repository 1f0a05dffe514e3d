//! Reading rule folders: plain files of limited size and number. A folder may be named by a file of a stranger, so
//! links in it are not followed, and nothing that waits is opened.

use std::ffi::OsStr;
use std::fs;
use std::io::{self, Read};
use std::path::{Path, PathBuf};

use crate::source::{Problem, Source};

/// Largest file of a rule folder in bytes.
pub const LARGEST_RULE_FILE: u64 = 4 << 20;
/// Most bytes of all files of all rule folders that a board is judged under.
pub const LARGEST_RULES: u64 = 64 << 20;
/// Most entries of one rule folder.
pub const MOST_RULE_FILES: usize = 4096;

/// The endings of files that are read: rules, and the boards of their cases.
const ENDINGS: [&str; 3] = ["toml", "net", "xml"];

/// What may still be read.
#[derive(Debug)]
pub(super) struct Disk {
    left: u64,
    /// Whether it was told that no more is read.
    told: bool,
}

impl Default for Disk {
    fn default() -> Self {
        Self { left: LARGEST_RULES, told: false }
    }
}

impl Disk {
    /// The text files of a folder with their names; what cannot be read is reported.
    pub(super) fn files(&mut self, folder: &Path, problems: &mut Vec<Problem>) -> Vec<(String, Source)> {
        let mut files = Vec::new();
        for path in entries(folder, problems) {
            let Some(name) = path.file_name().and_then(OsStr::to_str) else { continue };
            if !ENDINGS.iter().any(|known| path.extension().is_some_and(|is| is == *known)) {
                continue;
            }
            match self.text(&path) {
                Ok(Some(text)) => files.push((name.to_owned(), Source::new(path.display().to_string(), text))),
                // Told once already.
                Ok(None) => {}
                Err(problem) => problems.push(*problem),
            }
        }
        files
    }

    /// The text of a file; none where no more is read.
    fn text(&mut self, path: &Path) -> Result<Option<String>, Box<Problem>> {
        let shown = path.display();
        let unreadable =
            |error: io::Error| Box::new(Problem::error(format!("the file `{shown}` cannot be read: {error}")));
        let is_plain = |kind: fs::FileType| match kind.is_file() {
            true => Ok(()),
            false => Err(not_plain(path, "file", kind)),
        };
        // Asked before it is opened, for opening a pipe waits for its writer.
        let kind = fs::symlink_metadata(path).map_err(unreadable)?.file_type();
        if kind.is_dir() {
            return Ok(None);
        }
        is_plain(kind)?;
        let file = fs::File::open(path).map_err(unreadable)?;
        is_plain(file.metadata().map_err(unreadable)?.file_type())?;
        let mut text = String::new();
        file.take(LARGEST_RULE_FILE + 1).read_to_string(&mut text).map_err(unreadable)?;
        let length = text.len() as u64;
        if length > LARGEST_RULE_FILE {
            let message = format!("the file `{shown}` is larger than {} MiB", LARGEST_RULE_FILE >> 20);
            return Err(Box::new(Problem::error(message).help("split it")));
        }
        match self.left.checked_sub(length) {
            Some(left) => {
                self.left = left;
                Ok(Some(text))
            }
            None if std::mem::replace(&mut self.told, true) => Ok(None),
            None => {
                let message = format!(
                    "the rule folders hold more than {} MiB; `{shown}` and what is behind it is not read",
                    LARGEST_RULES >> 20
                );
                Err(Box::new(Problem::error(message).help("name folders that hold rules alone")))
            }
        }
    }
}

/// The entries of a folder in the order of their names.
pub(super) fn entries(folder: &Path, problems: &mut Vec<Problem>) -> Vec<PathBuf> {
    let mut paths: Vec<_> = match fs::read_dir(folder) {
        Ok(list) => list.take(MOST_RULE_FILES + 1).filter_map(|entry| Some(entry.ok()?.path())).collect(),
        Err(error) => {
            let message = format!("the folder `{}` cannot be read: {error}", folder.display());
            problems.push(Problem::error(message));
            Vec::new()
        }
    };
    if paths.len() > MOST_RULE_FILES {
        // Which of them the system names first is chance: none is better than some.
        let message = format!("the folder `{}` has more than {MOST_RULE_FILES} entries", folder.display());
        problems.push(Problem::error(message).help("split it"));
        return Vec::new();
    }
    paths.sort();
    paths
}

/// Whether a folder lies there; a link in its place is reported.
pub(super) fn is_folder(path: &Path, problems: &mut Vec<Problem>) -> bool {
    match fs::symlink_metadata(path).map(|found| found.file_type()) {
        Ok(kind) if kind.is_symlink() && path.is_dir() => {
            problems.push(*not_plain(path, "folder", kind));
            false
        }
        Ok(kind) => kind.is_dir(),
        Err(_) => false,
    }
}

fn not_plain(path: &Path, wanted: &str, kind: fs::FileType) -> Box<Problem> {
    let what = if kind.is_symlink() { "a symbolic link" } else { "a device, pipe or socket" };
    let message = format!("`{}` is {what}, not a plain {wanted}", path.display());
    Box::new(Problem::error(message).help("put the rules themselves there, or name their folder"))
}
