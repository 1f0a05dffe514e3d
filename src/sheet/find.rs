//! The folders in which sheets may lie, and reading them.

use std::fs;
use std::io::Read;
use std::path::{Path, PathBuf};
use std::time::{Duration, SystemTime};

use super::sheets::{Sheets, Text};
use crate::board::{exists, parent};
use crate::netlist::Netlist;
use crate::source::Source;

/// The largest sheet that is read, in bytes: some fifty times one with two hundred parts.
pub const LARGEST_SHEET: u64 = 64 << 20;
/// Most bytes of all sheets of a netlist.
pub const MOST_BYTES: u64 = 256 << 20;
/// Most folders above the netlist's own that are looked in.
const MOST_PARENTS: usize = 16;
/// How far the time of a sheet must lie behind that of the netlist to count: a clone or an unpacked archive writes both
/// within seconds, in any order.
const MARGIN: Duration = Duration::from_secs(60);

impl Sheets {
    /// The sheets that a netlist names, where they lie beside it: in its folder, in a folder inside that, or in one
    /// above it and below, up to the one that holds `.git`; where none does, in its own folder alone.
    ///
    /// A netlist may name any path, so none is opened as it stands: only its end is looked for, in these folders, and
    /// only a plain file is read that lies in them by its real path, too. What cannot be read is not there.
    #[must_use]
    pub fn beside(path: &Path, netlist: &Netlist) -> Self {
        let folders = folders(path);
        let outermost = folders.last().map_or(Path::new(""), PathBuf::as_path);
        let outermost = if outermost.as_os_str().is_empty() { Path::new(".") } else { outermost };
        let Ok(within) = fs::canonicalize(outermost) else { return Self::default() };
        let written = fs::metadata(path).and_then(|found| found.modified()).ok();
        let mut left = MOST_BYTES;
        Self::gather(netlist, &folders, &mut |path| open(path, &within, written, &mut left))
    }
}

/// The netlist's folder, then those above it up to the one that holds `.git`.
fn folders(netlist: &Path) -> Vec<PathBuf> {
    let mut folder = netlist.parent().unwrap_or(Path::new("")).to_owned();
    let mut all = vec![folder.clone()];
    while !exists(&folder.join(".git")) {
        match parent(&folder).filter(|_| all.len() <= MOST_PARENTS) {
            Some(above) => folder = above,
            // No repository: nothing says how far the project reaches.
            None => {
                all.truncate(1);
                return all;
            }
        }
        all.push(folder.clone());
    }
    all
}

/// The text of a plain file that lies within a folder.
fn open(path: &Path, within: &Path, written: Option<SystemTime>, left: &mut u64) -> Option<Text> {
    // Asked before it is opened, for opening a pipe waits for its writer.
    if !fs::symlink_metadata(path).ok()?.is_file() {
        return None;
    }
    let real = fs::canonicalize(path).ok().filter(|real| real.starts_with(within))?;
    let file = fs::File::open(real).ok()?;
    let found = file.metadata().ok()?;
    let most = LARGEST_SHEET.min(*left);
    if !found.is_file() || found.len() > most {
        return None;
    }
    let mut bytes = Vec::new();
    file.take(most + 1).read_to_end(&mut bytes).ok()?;
    *left = left.checked_sub(bytes.len() as u64)?;
    let text = String::from_utf8(bytes).ok()?;
    let newer = match (written, found.modified().ok()) {
        (Some(netlist), Some(sheet)) => sheet.duration_since(netlist).is_ok_and(|behind| behind > MARGIN),
        _ => false,
    };
    Some(Text { source: Source::new(path.display().to_string(), text), newer })
}
