//! The program: hands arguments and streams over.

use std::io::{stderr, stdout};
use std::process::ExitCode;

fn main() -> ExitCode {
    // Standard error is not held: what shows the progress, and what tells of a panic, writes there from other threads.
    railworthy::cli::run(std::env::args_os(), &mut stdout().lock(), &mut stderr())
}
