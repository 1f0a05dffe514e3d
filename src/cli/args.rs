//! What is typed.

use std::path::PathBuf;

use clap::{Args, Parser, Subcommand, ValueEnum};

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
}

#[derive(Debug, Args)]
pub(super) struct Check {
    /// Netlist exports; `-` reads standard input
    #[arg(required = true, value_name = "BOARD.net")]
    pub(super) boards: Vec<PathBuf>,

    #[command(flatten)]
    pub(super) input: Input,

    /// How the result is written
    #[arg(long, value_enum, default_value_t)]
    pub(super) format: CheckFormat,

    /// Write the result to a file, whole or not at all
    #[arg(long, value_name = "FILE")]
    pub(super) output: Option<PathBuf>,

    /// The level from which a finding makes the exit status 1
    #[arg(long, value_enum, default_value_t, value_name = "LEVEL")]
    pub(super) fail_on: FailOn,

    /// Show findings alone, without headings and summaries
    #[arg(long)]
    pub(super) quiet: bool,
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
