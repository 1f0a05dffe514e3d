//! Writing: to streams, whose other end may go away, and to files, whole or not at all.

use std::fs;
use std::io::{self, ErrorKind, Write};
use std::path::{Path, PathBuf};

/// How many names are tried for the file that is written before it takes its place.
const MOST_NAMES: u32 = 100;

/// Writes a text. A reader that has gone away has seen what it wanted.
///
/// # Errors
/// What else the system says.
pub(super) fn write(to: &mut dyn Write, text: &str) -> io::Result<()> {
    match to.write_all(text.as_bytes()).and_then(|()| to.flush()) {
        Err(error) if error.kind() == ErrorKind::BrokenPipe => Ok(()),
        other => other,
    }
}

/// Writes a file whole or not at all: into a new file beside it, which then takes its place.
///
/// # Errors
/// What the system says; the file is then as it was.
pub(super) fn write_file(path: &Path, text: &str) -> io::Result<()> {
    // Devices and pipes cannot be replaced; they are written to as they are.
    if fs::metadata(path).is_ok_and(|found| !found.is_file() && !found.is_dir()) {
        return fs::OpenOptions::new().write(true).open(path)?.write_all(text.as_bytes());
    }
    // A link keeps pointing where it did: what it points at is replaced.
    let path = &fs::canonicalize(path).unwrap_or_else(|_| path.to_owned());
    let (beside, mut file) = create_beside(path)?;
    let written = file.write_all(text.as_bytes()).and_then(|()| file.sync_all());
    drop(file);
    let moved = written.and_then(|()| fs::rename(&beside, path));
    if moved.is_err() {
        // What is left behind would only be in the way; that it cannot be removed is no further error.
        let _ = fs::remove_file(&beside);
    }
    moved
}

/// The one of some files that were read which writing to `path` would replace, under whatever name.
pub(super) fn replaced<'a>(path: &Path, mut read: impl Iterator<Item = &'a Path>) -> Option<&'a Path> {
    let target = fs::canonicalize(path).ok()?;
    read.find(|file| fs::canonicalize(file).is_ok_and(|file| file == target))
}

fn create_beside(path: &Path) -> io::Result<(PathBuf, fs::File)> {
    let name = path.file_name().ok_or_else(|| io::Error::new(ErrorKind::InvalidInput, "it names no file"))?;
    let mut number = 0;
    loop {
        let mut beside = std::ffi::OsString::from(".");
        beside.push(name);
        beside.push(format!(".{}-{number}.part", std::process::id()));
        let beside = path.with_file_name(beside);
        match fs::OpenOptions::new().write(true).create_new(true).open(&beside) {
            Ok(file) => return Ok((beside, file)),
            Err(error) if error.kind() == ErrorKind::AlreadyExists && number < MOST_NAMES => number += 1,
            Err(error) => return Err(error),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_file_is_replaced_whole_and_nothing_is_left_beside_it() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("result.json");
        fs::write(&path, "old").unwrap();
        write_file(&path, "new").unwrap();
        assert_eq!(fs::read_to_string(&path).unwrap(), "new");
        assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 1);
    }

    #[test]
    fn a_file_in_a_folder_that_is_not_there_is_an_error() {
        let folder = tempfile::tempdir().unwrap();
        assert!(write_file(&folder.path().join("no/result.json"), "x").is_err());
        assert!(write_file(folder.path(), "x").is_err());
        assert!(write_file(Path::new(".."), "x").is_err());
        assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 0);
    }

    #[test]
    fn a_file_that_was_read_is_known_under_any_name() {
        let folder = tempfile::tempdir().unwrap();
        let (board, other) = (folder.path().join("a.net"), folder.path().join("b.json"));
        fs::write(&board, "").unwrap();
        let read = || [Path::new("no-such"), board.as_path()].into_iter();
        let roundabout = folder.path().join("..").join(folder.path().file_name().unwrap()).join("a.net");
        assert_eq!(replaced(&roundabout, read()), Some(board.as_path()));
        assert_eq!(replaced(&other, read()), None, "what is not there replaces nothing");
        fs::write(&other, "").unwrap();
        assert_eq!(replaced(&other, read()), None);
    }

    struct Gone(ErrorKind);

    impl Write for Gone {
        fn write(&mut self, _: &[u8]) -> io::Result<usize> {
            Err(self.0.into())
        }

        fn flush(&mut self) -> io::Result<()> {
            Ok(())
        }
    }

    #[test]
    fn a_reader_that_went_away_is_no_error_and_a_full_disk_is() {
        assert!(write(&mut Gone(ErrorKind::BrokenPipe), "x").is_ok());
        assert!(write(&mut Gone(ErrorKind::StorageFull), "x").is_err());
    }
}
