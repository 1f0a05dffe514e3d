//! What was typed, with what the surroundings say, as settings.

use std::io::{IsTerminal, stderr, stdout};

use super::args::{Color, FailOn};
use crate::checks::Level;
use crate::report::Look;

/// The looks of what is written.
#[derive(Debug, Clone, Copy)]
pub(super) struct Terminal {
    /// On standard output.
    pub(super) out: Look,
    /// On standard error.
    pub(super) err: Look,
    colour: Color,
}

impl Terminal {
    pub(super) fn of(colour: Color) -> Self {
        let look = |is_terminal| Look::new(width(is_terminal), coloured(colour, is_terminal));
        Self { out: look(stdout().is_terminal()), err: look(stderr().is_terminal()), colour }
    }

    /// The look of a file.
    pub(super) fn file(self) -> Look {
        Look::new(Look::PIPED, coloured(self.colour, false))
    }
}

fn width(is_terminal: bool) -> usize {
    let known = is_terminal.then(terminal_size::terminal_size).flatten();
    known.map_or(Look::PIPED, |(width, _)| usize::from(width.0))
}

/// A colour that was asked for is given; else a terminal that shows colours has them, unless `NO_COLOR` is set to
/// anything.
fn coloured(colour: Color, is_terminal: bool) -> bool {
    let set = |name: &str| std::env::var_os(name).filter(|value| !value.is_empty());
    match colour {
        Color::Always => true,
        Color::Never => false,
        Color::Auto => is_terminal && set("NO_COLOR").is_none() && set("TERM").is_none_or(|term| term != "dumb"),
    }
}

/// Whether progress is shown on standard error: on a terminal that can redraw a line, and where no machine runs this.
pub(super) fn shows_progress() -> bool {
    let set = |name: &str| std::env::var_os(name).is_some_and(|value| !value.is_empty());
    let is_dumb = std::env::var_os("TERM").is_some_and(|term| term == "dumb");
    stderr().is_terminal() && !set("CI") && !is_dumb
}

impl FailOn {
    /// Whether a finding of this level fails the run.
    pub(super) fn fails(self, level: Level) -> bool {
        match self {
            Self::Error => level <= Level::Error,
            Self::Warning => level <= Level::Warning,
            Self::Note => level <= Level::Note,
            Self::Never => false,
        }
    }
}
