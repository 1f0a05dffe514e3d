//! What is typed.

use std::path::PathBuf;

use clap::{Args, Parser, Subcommand, ValueEnum};

use crate::source::toml::Date;

/// Judges the linear regulators and voltage references of a schematic netlist before boards are ordered.
#[derive(Debug, Parser)]
#[command(
    name = "railworthy",
    version,
    disable_help_subcommand = true,
    after_help = "Exit status: 0 nothing at or above the fail level; 1 findings; 2 not done, or not wholly."
)]
pub(super) struct Typed {
    #[command(subcommand)]
    pub(super) command: Command,

    /// Whether output is coloured
    #[arg(long, value_enum, default_value_t, global = true, value_name = "WHEN")]
    pub(super) color: Color,
}

#[derive(Debug, Subcommand)]
pub(super) enum Command {
    /// Judge boards: what fails, what hangs on a guess, what to do
    Check(Check),
    /// Show the supply tree and every figure known of each regulator, unjudged
    Rails(Rails),
    /// Explain a check, or a part of a board: its supply, every figure, each verdict
    Explain(Explain),
    /// Compare a board with what it was: what a change brings and takes away
    Compare(Compare),
    /// Draft the board file entries that accept what is found on a board, with a reason
    Accept(Accept),
    /// Begin or continue a board file: what is not declared and decides most comes first
    Declare(Declare),
    /// List what is known: checks, parts, supplies, technologies, devices, quantities
    Catalog(Catalog),
    /// Begin a part file for a part that is not known, from what its symbol tells
    Draft(Draft),
    /// Validate rule folders and run the cases of their checks
    Vet(Vet),
    /// Print a JSON Schema of a file that people write, or of a result
    Schema(Schema),
    /// Print completions for a shell
    Completions(Completions),
    /// Print the manual page of the program, or of one command
    Manual(Manual),
}

#[derive(Debug, Args)]
pub(super) struct Check {
    /// Netlist exports, and folders, of which every netlist export below is judged; `-` reads standard input
    #[arg(required = true, value_name = "BOARD.net | FOLDER")]
    pub(super) boards: Vec<PathBuf>,

    #[command(flatten)]
    pub(super) input: Input,

    /// How the result is written
    #[arg(long, value_enum, default_value_t)]
    pub(super) format: CheckFormat,

    /// Write the result to a file, whole or not at all
    #[arg(long, value_name = "FILE")]
    pub(super) output: Option<PathBuf>,

    /// How many boards are judged at once; as many as there are processors if not given
    #[arg(long, value_name = "COUNT", value_parser = clap::value_parser!(u16).range(1..=256))]
    pub(super) jobs: Option<u16>,

    /// The level from which a finding makes the exit status 1
    #[arg(long, value_enum, default_value_t, value_name = "LEVEL")]
    pub(super) fail_on: FailOn,

    /// Show findings alone, without headings and summaries
    #[arg(long)]
    pub(super) quiet: bool,
}

#[derive(Debug, Args)]
pub(super) struct Compare {
    /// The netlist export of the board as it was, or a folder of such; `-` reads standard input
    #[arg(value_name = "OLD")]
    pub(super) old: PathBuf,

    /// The netlist export of the board as it is, or a folder of such
    #[arg(value_name = "NEW")]
    pub(super) new: PathBuf,

    #[command(flatten)]
    pub(super) input: Input,

    /// The board file of the old board, where `--board` is that of the new one only
    #[arg(long, value_name = "FILE")]
    pub(super) old_board: Option<PathBuf>,

    /// How the result is written
    #[arg(long, value_enum, default_value_t)]
    pub(super) format: CompareFormat,

    /// Write the result to a file, whole or not at all
    #[arg(long, value_name = "FILE")]
    pub(super) output: Option<PathBuf>,

    /// How many boards are judged at once; as many as there are processors if not given
    #[arg(long, value_name = "COUNT", value_parser = clap::value_parser!(u16).range(1..=256))]
    pub(super) jobs: Option<u16>,

    /// The level from which a finding that is new or worse makes the exit status 1
    #[arg(long, value_enum, default_value_t, value_name = "LEVEL")]
    pub(super) fail_on: FailOn,

    /// Show findings alone, without headings, figures and summaries
    #[arg(long)]
    pub(super) quiet: bool,
}

#[derive(Debug, Args)]
pub(super) struct Accept {
    /// Netlist export; `-` reads standard input
    #[arg(value_name = "BOARD.net")]
    pub(super) netlist: PathBuf,

    /// Why the findings are accepted
    #[arg(long, value_name = "TEXT")]
    pub(super) reason: String,

    /// The last day on which they are accepted
    #[arg(long, value_name = "YYYY-MM-DD", value_parser = day)]
    pub(super) until: Option<Date>,

    /// The least level of findings that are accepted
    #[arg(long, value_enum, default_value_t, value_name = "LEVEL")]
    pub(super) least: Least,

    /// Only what this check finds; may be given more than once
    #[arg(long, value_name = "CHECK")]
    pub(super) check: Vec<String>,

    /// Only what is found about this part; may be given more than once
    #[arg(long, value_name = "PART")]
    pub(super) part: Vec<String>,

    /// Write the entries behind what stands in the board file, whole or not at all; one that is not there is made
    #[arg(long)]
    pub(super) write: bool,

    #[command(flatten)]
    pub(super) input: Input,
}

/// A day as typed.
fn day(text: &str) -> Result<Date, String> {
    Date::read(text).ok_or_else(|| "write a date: 2027-06-30".to_owned())
}

#[derive(Debug, Args)]
pub(super) struct Rails {
    /// Netlist export; `-` reads standard input
    #[arg(value_name = "BOARD.net")]
    pub(super) netlist: PathBuf,

    #[command(flatten)]
    pub(super) input: Input,

    /// How the result is written
    #[arg(long, value_enum, default_value_t)]
    pub(super) format: RailsFormat,
}

#[derive(Debug, Args)]
pub(super) struct Explain {
    /// The name of a check, or a netlist export followed by the reference of a part
    #[arg(value_name = "CHECK | BOARD.net")]
    pub(super) what: PathBuf,

    /// The part of the board
    #[arg(value_name = "PART")]
    pub(super) part: Option<String>,

    #[command(flatten)]
    pub(super) input: Input,
}

#[derive(Debug, Args)]
pub(super) struct Declare {
    /// Netlist export; `-` reads standard input
    #[arg(value_name = "BOARD.net")]
    pub(super) netlist: PathBuf,

    #[command(flatten)]
    pub(super) input: Input,

    /// Write the board file to a file, whole or not at all
    #[arg(long, value_name = "FILE")]
    pub(super) output: Option<PathBuf>,

    /// Let the output take the place of a file that exists
    #[arg(long, requires = "output")]
    pub(super) replace: bool,
}

#[derive(Debug, Args)]
pub(super) struct Catalog {
    /// What to list
    #[arg(value_enum, value_name = "WHAT")]
    pub(super) what: Shelf,

    /// Show this one in full
    #[arg(value_name = "NAME")]
    pub(super) name: Option<String>,

    /// A folder of further rules; may be given more than once
    #[arg(long, value_name = "DIR")]
    pub(super) rules: Vec<PathBuf>,
}

#[derive(Debug, Args)]
pub(super) struct Draft {
    /// Netlist export; `-` reads standard input
    #[arg(value_name = "BOARD.net")]
    pub(super) netlist: PathBuf,

    /// The part of the board
    #[arg(value_name = "PART")]
    pub(super) part: String,

    #[command(flatten)]
    pub(super) input: Input,

    /// Write the part file to a file, whole or not at all
    #[arg(long, value_name = "FILE")]
    pub(super) output: Option<PathBuf>,
}

#[derive(Debug, Args)]
pub(super) struct Vet {
    /// Rule folders; without one the built-in rules
    #[arg(value_name = "DIR")]
    pub(super) folders: Vec<PathBuf>,

    /// List what the built-in part files lack, too; of folders that are named it is always listed
    #[arg(long)]
    pub(super) lacks: bool,
}

#[derive(Debug, Args)]
pub(super) struct Schema {
    /// Which: board, check, part, result, rails; without it they are listed
    #[arg(value_name = "NAME")]
    pub(super) name: Option<String>,
}

#[derive(Debug, Args)]
pub(super) struct Completions {
    /// The shell
    #[arg(value_enum, value_name = "SHELL")]
    pub(super) shell: clap_complete::Shell,
}

#[derive(Debug, Args)]
pub(super) struct Manual {
    /// The command; without it the program as a whole
    #[arg(value_name = "COMMAND")]
    pub(super) command: Option<String>,
}

/// What a board is judged under.
#[derive(Debug, Args)]
pub(super) struct Input {
    /// The board file, in place of `STEM.railworthy.toml` beside the netlist
    #[arg(long, value_name = "FILE")]
    pub(super) board: Option<PathBuf>,

    /// A folder of further rules; may be given more than once
    #[arg(long, value_name = "DIR")]
    pub(super) rules: Vec<PathBuf>,
}

#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, ValueEnum)]
pub(super) enum Color {
    /// On a terminal, unless `NO_COLOR` is set
    #[default]
    Auto,
    Always,
    Never,
}

#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, ValueEnum)]
pub(super) enum CheckFormat {
    /// For people
    #[default]
    Text,
    /// One line for each finding, for editors and build tools
    Line,
    /// A comment for a pull request
    Markdown,
    /// For programs
    Json,
    /// For code hosts and editors: SARIF 2.1.0
    Sarif,
    /// For continuous integration: JUnit XML
    Junit,
}

#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, ValueEnum)]
pub(super) enum CompareFormat {
    /// For people
    #[default]
    Text,
    /// For editors and build tools: one line for each finding that is new or worse
    Line,
    /// For a comment on a pull request
    Markdown,
    /// For programs
    Json,
    /// For code hosts and editors: SARIF 2.1.0, each result with what it is beside the old board
    Sarif,
    /// For continuous integration: JUnit XML, where what is new or worse fails
    Junit,
}

#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, ValueEnum)]
pub(super) enum RailsFormat {
    /// For people
    #[default]
    Text,
    /// For programs
    Json,
}

#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, ValueEnum)]
pub(super) enum FailOn {
    Error,
    #[default]
    Warning,
    Note,
    Never,
}

#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, ValueEnum)]
pub(super) enum Least {
    Error,
    #[default]
    Warning,
    Note,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
pub(super) enum Shelf {
    Checks,
    Parts,
    Supplies,
    Technologies,
    Devices,
    Quantities,
}
