//! The folder of shared test data, which does not belong to the project.

use std::path::PathBuf;

/// The folder that the environment variable `RAILWORTHY_SHARED` names; without it, says that a test skips.
pub(crate) fn shared_folder() -> Option<PathBuf> {
    let folder = std::env::var_os("RAILWORTHY_SHARED").map(PathBuf::from);
    if folder.is_none() {
        tell_skipped("RAILWORTHY_SHARED is not set");
    }
    folder
}

/// Says that a test skips, and why.
#[allow(clippy::print_stderr, reason = "a test that skips says so")]
pub(crate) fn tell_skipped(why: &str) {
    eprintln!("skipped: {why}");
}
