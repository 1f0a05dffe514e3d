//! Which paths the name of a sheet may mean.

use std::path::PathBuf;

/// Most folders of a name that are looked at, the innermost.
const MOST_FOLDERS: usize = 8;
/// How the file of a sheet may end.
const ENDINGS: [&str; 2] = [".kicad_sch", ".sch"];

/// The paths below some folder that a name may mean, the longest first: a netlist names its schematic by a path of the
/// machine that it was exported on, of which only the end is the same here.
///
/// Each is made of plain names: whatever a netlist says, none leads upward, to the root or into a hidden folder.
pub(super) fn paths(name: &str) -> Vec<PathBuf> {
    let parts: Vec<&str> = name.split(['/', '\\']).filter(|part| !part.is_empty() && *part != ".").collect();
    if !parts.last().is_some_and(|file| ENDINGS.iter().any(|ending| file.ends_with(ending))) {
        return Vec::new();
    }
    let barred = parts.iter().rposition(|part| !is_plain(part)).map_or(0, |at| at + 1);
    let first = barred.max(parts.len().saturating_sub(MOST_FOLDERS + 1));
    (first..parts.len()).filter_map(|from| parts.get(from..)).map(|rest| rest.iter().collect()).collect()
}

/// Whether a part of a path names a file or folder and nothing else, on any system.
fn is_plain(part: &str) -> bool {
    !part.starts_with('.') && !part.contains(|sign: char| sign == ':' || sign.is_control())
}
