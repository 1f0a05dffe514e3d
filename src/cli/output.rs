//! Results into files: never in place of what was read.

use std::path::{Path, PathBuf};

use super::walk::first_bytes;
use super::{Status, Streams, streams};
use crate::netlist::begins_export;
use crate::report::BoardResult;

/// Writes a result into a file, whole or not at all, unless that would replace one that was read for it, another
/// netlist export, or one of the endings in `kept`.
pub(super) fn write(path: &Path, text: &str, read: &[PathBuf], kept: &[&str], to: &mut Streams<'_>) -> Status {
    let shown = path.display();
    let is_kept = || kept.iter().any(|known| path.extension().is_some_and(|is| is == *known));
    let refused = if streams::replaced(path, read.iter().map(PathBuf::as_path)).is_some() {
        Some("it was read for this result")
    } else if first_bytes(path).is_ok_and(|bytes| begins_export(&bytes)) {
        Some("it is a netlist export")
    } else if path.is_file() && is_kept() {
        Some("it may be a board file or a rule")
    } else {
        None
    };
    if let Some(why) = refused {
        return to.broken(&format!("{shown} is not replaced, for {why}; name another file with `--output`"));
    }
    match streams::write_file(path, text) {
        Ok(()) => Status::Clean,
        Err(error) => to.broken(&format!("{shown} cannot be written: {error}")),
    }
}

/// The files that were read for some boards, as far as results name them.
pub(super) fn read_for<'a>(boards: impl IntoIterator<Item = &'a BoardResult>, named: Option<&Path>) -> Vec<PathBuf> {
    let names = |board: &'a BoardResult| {
        let files = [Some(&board.netlist), board.board_file.as_ref(), board.house_file.as_ref()];
        files.into_iter().flatten().map(PathBuf::from)
    };
    boards.into_iter().flat_map(names).chain(named.map(Path::to_owned)).collect()
}
