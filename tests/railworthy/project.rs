//! The files of the project itself, for tests that read them.

use std::path::{Path, PathBuf};

/// What lies in a clone beside the project: history and what builds leave.
const BESIDE: [&str; 2] = [".git", "target"];

/// The folder of the project.
pub(crate) fn root() -> &'static Path {
    Path::new(env!("CARGO_MANIFEST_DIR"))
}

/// Every file below a folder of the project, as a path from the project's folder, sorted.
pub(crate) fn files(below: &str) -> Vec<String> {
    let mut found = Vec::new();
    let mut folders: Vec<PathBuf> = vec![root().join(below)];
    while let Some(folder) = folders.pop() {
        for entry in std::fs::read_dir(&folder).unwrap().map(Result::unwrap) {
            let path = entry.path();
            let name = path.strip_prefix(root()).unwrap().to_str().unwrap().replace('\\', "/");
            if BESIDE.contains(&name.as_str()) {
                continue;
            }
            if entry.file_type().unwrap().is_dir() {
                folders.push(path);
            } else {
                found.push(name);
            }
        }
    }
    found.sort();
    found
}

/// The text of a file of the project.
pub(crate) fn text(file: &str) -> String {
    std::fs::read_to_string(root().join(file)).unwrap_or_else(|error| panic!("{file}: {error}"))
}

/// The rooms of the library in the order of the flow.
pub(crate) fn rooms() -> Vec<String> {
    let rooms: Vec<String> = text("src/lib.rs")
        .lines()
        .filter_map(|line| line.strip_prefix("pub mod ")?.strip_suffix(';').map(str::to_owned))
        .collect();
    assert!(rooms.len() >= 10, "{rooms:?}");
    rooms
}
