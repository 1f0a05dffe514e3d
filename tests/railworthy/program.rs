//! Running the program as a user does.

use std::io::Write;
use std::path::{Path, PathBuf};
use std::process::{Command, Output, Stdio};

/// The folder of the demo boards.
pub(crate) fn examples() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("examples")
}

/// The program in a folder, on a fixed day, without what the surroundings say about colours.
pub(crate) fn program(folder: &Path) -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_railworthy"));
    command.current_dir(folder).env("SOURCE_DATE_EPOCH", "1796083200");
    for name in ["NO_COLOR", "CLICOLOR_FORCE", "TERM", "COLUMNS"] {
        command.env_remove(name);
    }
    command
}

/// What a run came to.
pub(crate) struct Run {
    pub(crate) status: Option<i32>,
    pub(crate) out: String,
    pub(crate) err: String,
}

/// Runs the program in a folder.
pub(crate) fn run(folder: &Path, arguments: &[&str]) -> Run {
    finished(program(folder).args(arguments).stdin(Stdio::null()).output().unwrap())
}

/// Runs the program in a folder with a text on standard input.
pub(crate) fn run_with(folder: &Path, arguments: &[&str], input: &[u8]) -> Run {
    let mut command = program(folder);
    command.args(arguments).stdin(Stdio::piped()).stdout(Stdio::piped()).stderr(Stdio::piped());
    let mut child = command.spawn().unwrap();
    child.stdin.take().unwrap().write_all(input).unwrap();
    finished(child.wait_with_output().unwrap())
}

fn finished(output: Output) -> Run {
    Run {
        status: output.status.code(),
        out: String::from_utf8(output.stdout).unwrap(),
        err: String::from_utf8(output.stderr).unwrap(),
    }
}
