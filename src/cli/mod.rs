//! Arguments, files, exit status.

mod accept;
mod args;
mod boards;
mod catalog;
mod check;
mod compare;
mod day;
mod declare;
mod draft;
mod explain;
mod folders;
mod guard;
mod input;
mod output;
mod rails;
mod repository;
mod settings;
mod streams;
mod vet;
mod walk;

use std::ffi::OsString;
use std::io::Write;
use std::process::ExitCode;

use clap::Parser;

use self::args::{Command, Typed};
use self::settings::Terminal;
pub use self::walk::{DEEPEST_FOLDER, MOST_BOARDS, MOST_ENTRIES};
use crate::report;

/// How a run ended, the least first.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
enum Status {
    /// Done, with nothing at or above the fail level.
    Clean,
    /// Done, with findings.
    Findings,
    /// Not done, or not wholly.
    Broken,
}

impl Status {
    fn code(self) -> u8 {
        match self {
            Self::Clean => 0,
            Self::Findings => 1,
            Self::Broken => 2,
        }
    }
}

/// Where a run writes.
struct Streams<'a> {
    out: &'a mut dyn Write,
    err: &'a mut dyn Write,
}

impl Streams<'_> {
    /// Writes a result; where that fails, says so.
    fn result(&mut self, text: &str) -> Status {
        match streams::write(self.out, text) {
            Ok(()) => Status::Clean,
            Err(error) => self.broken(&format!("the result cannot be written: {error}")),
        }
    }

    /// Says why a run cannot be done. Where even that cannot be written, the exit status has to tell.
    fn broken(&mut self, why: &str) -> Status {
        let _ = streams::write(self.err, &report::guarded(&format!("error: {}\n", report::inert(why))));
        Status::Broken
    }

    /// Tells something beside the result.
    fn tell(&mut self, text: &str) {
        let _ = streams::write(self.err, &report::guarded(text));
    }
}

/// Runs the program on its arguments, the program's own name first.
pub fn run(arguments: impl IntoIterator<Item = OsString>, out: &mut dyn Write, err: &mut dyn Write) -> ExitCode {
    let mut streams = Streams { out, err };
    let status = guard::guarded(|| status(arguments, &mut streams));
    ExitCode::from(status.unwrap_or_else(|fault| streams.broken(&fault)).code())
}

fn status(arguments: impl IntoIterator<Item = OsString>, streams: &mut Streams<'_>) -> Status {
    let typed = match Typed::try_parse_from(arguments) {
        Ok(typed) => typed,
        Err(error) => return usage(&error, streams),
    };
    let terminal = Terminal::of(typed.color);
    match &typed.command {
        Command::Check(check) => check::run(check, terminal, streams),
        Command::Accept(accept) => accept::run(accept, terminal, streams),
        Command::Rails(rails) => rails::run(rails, terminal, streams),
        Command::Explain(explain) => explain::run(explain, terminal, streams),
        Command::Compare(compare) => compare::run(compare, terminal, streams),
        Command::Declare(declare) => declare::run(declare, terminal, streams),
        Command::Catalog(catalog) => catalog::run(catalog, terminal, streams),
        Command::Draft(draft) => draft::run(draft, terminal, streams),
        Command::Vet(vet) => vet::run(vet, terminal, streams),
        Command::Schema(schema) => repository::schema(schema, streams),
        Command::Completions(completions) => repository::completions(completions, streams),
        Command::Manual(manual) => repository::manual(manual, streams),
    }
}

/// What is wrong with the arguments; or help or the version, which were asked for.
fn usage(error: &clap::Error, streams: &mut Streams<'_>) -> Status {
    let text: String = error.render().to_string().lines().map(|line| format!("{}\n", report::inert(line))).collect();
    if error.use_stderr() {
        streams.tell(&text);
        Status::Broken
    } else {
        streams.result(&text)
    }
}
