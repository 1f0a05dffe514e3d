//! The program: hands arguments and streams over.

use std::io::{stderr, stdout};
use std::process::ExitCode;

fn main() -> ExitCode {
    railworthy::cli::run(std::env::args_os(), &mut stdout().lock(), &mut stderr().lock())
}
