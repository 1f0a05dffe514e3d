//! Where the program runs, and where the project lies that it checks.

use std::path::PathBuf;

use crate::report::Folders;

/// The folder that the program runs in, and the nearest one above it that holds `.git`, or else itself.
pub(super) fn folders() -> Folders {
    // A folder that is gone has no name; what is in it is then named as it was typed.
    let working = std::env::current_dir().unwrap_or_else(|_| PathBuf::from("/"));
    let project = working.ancestors().find(|folder| folder.join(".git").exists()).unwrap_or(&working).to_owned();
    Folders::new(working, project)
}
