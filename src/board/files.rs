//! Where board files lie, and reading them.

use std::fs;
use std::io::Read;
use std::path::{Component, Path, PathBuf};

use crate::source::Source;

use thiserror::Error;

/// The largest board file that is read, in bytes.
pub const LARGEST_FILE: u64 = 1 << 20;

/// The name of the house file.
pub const HOUSE_FILE: &str = "railworthy.toml";

/// Whether a file may be reached through a symbolic link.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Links {
    /// For files that a user named.
    Follow,
    /// For files that were found.
    Refuse,
}

/// Why a board file cannot be read.
#[derive(Debug, Error)]
pub enum FileError {
    /// The system says why.
    #[error("the board file {0} cannot be read: {1}")]
    Io(String, std::io::Error),
    /// A folder, device, pipe or socket, or a link where none may be.
    #[error("the board file {0} is {1}, not a plain file")]
    NotPlain(String, &'static str),
    /// Larger than [`LARGEST_FILE`].
    #[error("the board file {0} has more than {LARGEST_FILE} bytes")]
    TooLarge(String),
    /// Not UTF-8; the byte at which it stops to be.
    #[error("the board file {0} is not UTF-8 text (byte {1})")]
    NotText(String, usize),
}

/// The house file and the board's own file for a netlist, each where it exists.
///
/// The house file is `railworthy.toml` in the netlist's folder or its nearest parent, up to and with the one that
/// holds `.git`; where no folder holds `.git`, up to the root. The own file is `STEM.railworthy.toml` beside the
/// netlist, STEM being the netlist's name without its last extension. Paths are relative where `netlist` is.
#[must_use]
pub fn find(netlist: &Path) -> (Option<PathBuf>, Option<PathBuf>) {
    let folder = netlist.parent().unwrap_or(Path::new(""));
    (find_house(folder), find_own(netlist))
}

/// The board's own file, where it exists.
#[must_use]
pub fn find_own(netlist: &Path) -> Option<PathBuf> {
    own_file(netlist).filter(|path| exists(path))
}

/// Where the board's own file lies, if it is there; `None` where the path names no file.
#[must_use]
pub fn own_file(netlist: &Path) -> Option<PathBuf> {
    let mut name = netlist.file_stem()?.to_owned();
    name.push(".");
    name.push(HOUSE_FILE);
    Some(netlist.with_file_name(name))
}

/// The house file of a folder, where it exists.
#[must_use]
pub fn find_house(folder: &Path) -> Option<PathBuf> {
    let mut folder = folder.to_owned();
    loop {
        let file = folder.join(HOUSE_FILE);
        if exists(&file) {
            return Some(file);
        }
        if exists(&folder.join(".git")) {
            return None;
        }
        folder = parent(&folder)?;
    }
}

/// Whether anything lies there, a dangling link too: what cannot be read must be told, not passed over.
pub(crate) fn exists(path: &Path) -> bool {
    fs::symlink_metadata(path).is_ok()
}

/// The folder above, spelled as near to `folder` as can be; `None` for the root.
pub(crate) fn parent(folder: &Path) -> Option<PathBuf> {
    match folder.components().next_back() {
        Some(Component::Normal(_)) => folder.parent().map(Path::to_owned),
        Some(Component::RootDir | Component::Prefix(_)) => None,
        Some(Component::CurDir) | None => above(Path::new("..")),
        Some(Component::ParentDir) => above(&folder.join("..")),
    }
}

/// `folder`, which goes upward from somewhere, unless it is the root again.
fn above(folder: &Path) -> Option<PathBuf> {
    let below = folder.parent().unwrap_or(Path::new(""));
    let below = if below.as_os_str().is_empty() { Path::new(".") } else { below };
    let (here, there) = (fs::canonicalize(below).ok()?, fs::canonicalize(folder).ok()?);
    (here != there).then(|| folder.to_owned())
}

/// Reads a board file: a plain file of at most [`LARGEST_FILE`] bytes of UTF-8.
///
/// # Errors
/// When it is not such a file or cannot be read.
pub fn read_source(path: &Path, links: Links) -> Result<Source, FileError> {
    let name = path.display().to_string();
    let failed = |error| FileError::Io(name.clone(), error);
    let found = match links {
        Links::Follow => fs::metadata(path),
        Links::Refuse => fs::symlink_metadata(path),
    };
    // Asked before it is opened, for opening a pipe waits for its writer.
    refuse_special(&found.map_err(failed)?, &name)?;
    let file = fs::File::open(path).map_err(failed)?;
    refuse_special(&file.metadata().map_err(failed)?, &name)?;
    let mut bytes = Vec::new();
    file.take(LARGEST_FILE + 1).read_to_end(&mut bytes).map_err(failed)?;
    if bytes.len() as u64 > LARGEST_FILE {
        return Err(FileError::TooLarge(name));
    }
    match String::from_utf8(bytes) {
        Ok(text) => Ok(Source::new(name, text)),
        Err(error) => Err(FileError::NotText(name, error.utf8_error().valid_up_to())),
    }
}

fn refuse_special(metadata: &fs::Metadata, name: &str) -> Result<(), FileError> {
    let kind = metadata.file_type();
    if kind.is_file() {
        return Ok(());
    }
    let what = match (kind.is_dir(), kind.is_symlink()) {
        (true, _) => "a folder",
        (_, true) => "a symbolic link",
        _ => "a device, pipe or socket",
    };
    Err(FileError::NotPlain(name.to_owned(), what))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn write(path: &Path) {
        fs::create_dir_all(path.parent().unwrap()).unwrap();
        fs::write(path, "").unwrap();
    }

    #[test]
    fn the_house_file_is_the_nearest_up_to_the_folder_of_the_repository() {
        let root = tempfile::tempdir().unwrap();
        let hw = root.path().join("repo/hw/psu");
        fs::create_dir_all(&hw).unwrap();
        fs::create_dir_all(root.path().join("repo/.git")).unwrap();
        let netlist = hw.join("gauge.net");
        write(&root.path().join(HOUSE_FILE));
        assert_eq!(find(&netlist), (None, None), "outside the repository");
        let house = root.path().join("repo").join(HOUSE_FILE);
        write(&house);
        assert_eq!(find(&netlist).0.as_ref(), Some(&house), "beside .git");
        let nearer = hw.join(HOUSE_FILE);
        write(&nearer);
        assert_eq!(find(&netlist).0.as_ref(), Some(&nearer));
    }

    #[test]
    fn the_own_file_has_the_netlists_whole_stem() {
        let root = tempfile::tempdir().unwrap();
        for (netlist, own) in [
            ("gauge.net", "gauge.railworthy.toml"),
            ("c2a+cer.net", "c2a+cer.railworthy.toml"),
            ("rev.2 b.xml", "rev.2 b.railworthy.toml"),
        ] {
            assert_eq!(find_own(&root.path().join(netlist)), None);
            write(&root.path().join(own));
            assert_eq!(find_own(&root.path().join(netlist)), Some(root.path().join(own)));
        }
    }

    #[test]
    fn a_parent_is_spelled_relative_where_the_folder_is() {
        assert_eq!(parent(Path::new("hw/psu")), Some(PathBuf::from("hw")));
        assert_eq!(parent(Path::new("hw")), Some(PathBuf::from("")));
        assert_eq!(parent(Path::new("")), Some(PathBuf::from("..")));
        assert_eq!(parent(Path::new(".")), Some(PathBuf::from("..")));
        assert_eq!(parent(Path::new("/")), None);
        let many: PathBuf = std::iter::repeat_n("..", 200).collect();
        assert_eq!(parent(&many), None, "the root's parent is the root");
    }

    #[test]
    fn a_file_that_is_no_plain_text_is_refused() {
        let root = tempfile::tempdir().unwrap();
        let path = root.path().join("x.toml");
        let told = |links| read_source(&path, links).unwrap_err().to_string();
        assert!(told(Links::Refuse).contains("cannot be read"));
        fs::write(&path, b"a = 1\n\xff").unwrap();
        assert!(told(Links::Refuse).ends_with("is not UTF-8 text (byte 6)"));
        let large = vec![b'#'; usize::try_from(LARGEST_FILE).unwrap() + 1];
        fs::write(&path, large).unwrap();
        assert!(told(Links::Refuse).ends_with("has more than 1048576 bytes"));
        fs::remove_file(&path).unwrap();
        fs::create_dir(&path).unwrap();
        assert!(told(Links::Follow).ends_with("is a folder, not a plain file"));
    }

    #[cfg(unix)]
    #[test]
    fn a_link_is_refused_where_it_was_found_and_followed_where_it_was_named() {
        let root = tempfile::tempdir().unwrap();
        let (file, link) = (root.path().join("a.toml"), root.path().join("b.toml"));
        fs::write(&file, "# text").unwrap();
        std::os::unix::fs::symlink(&file, &link).unwrap();
        assert!(read_source(&link, Links::Refuse).unwrap_err().to_string().contains("a symbolic link"));
        assert_eq!(read_source(&link, Links::Follow).unwrap().text(), "# text");
    }

    #[cfg(unix)]
    #[test]
    fn a_pipe_is_refused_without_waiting_for_its_writer() {
        let root = tempfile::tempdir().unwrap();
        let pipe = root.path().join("p.toml");
        let made = std::process::Command::new("mkfifo").arg(&pipe).status();
        #[allow(clippy::print_stderr)] // a skipped test says so
        if !made.is_ok_and(|status| status.success()) {
            eprintln!("skipped: mkfifo is not here");
            return;
        }
        assert!(read_source(&pipe, Links::Follow).unwrap_err().to_string().contains("a device, pipe or socket"));
    }
}
