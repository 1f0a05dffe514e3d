//! How a report looks: its width, its colours, its signs.

use miette::{GraphicalReportHandler, GraphicalTheme, ThemeCharacters, ThemeStyles};

use crate::checks::Level;

/// The narrowest report that is laid out.
const NARROWEST: usize = 60;
/// The widest; longer lines are hard to read.
const WIDEST: usize = 140;

/// Width and colour of a report.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Look {
    width: usize,
    colour: bool,
}

impl Look {
    /// The width of a report that is not shown on a terminal, in columns.
    pub const PIPED: usize = 100;

    /// A report of about `width` columns (60 to 140), with or without colour.
    #[must_use]
    pub fn new(width: usize, colour: bool) -> Self {
        Self { width: width.clamp(NARROWEST, WIDEST), colour }
    }

    /// The width in columns.
    #[must_use]
    pub fn width(self) -> usize {
        self.width
    }

    /// miette's handler in this look. Lines are drawn with box characters everywhere: a report has `Ω` and `µ` in it
    /// anyhow, and one look keeps the bytes the same on every machine.
    pub(super) fn handler(self) -> GraphicalReportHandler {
        let characters = ThemeCharacters {
            error: "error:".to_owned(),
            warning: "warning:".to_owned(),
            advice: "note:".to_owned(),
            ..ThemeCharacters::unicode()
        };
        let styles = if self.colour { ThemeStyles::ansi() } else { ThemeStyles::none() };
        GraphicalReportHandler::new_themed(GraphicalTheme { characters, styles })
            .with_width(self.width)
            .with_links(false)
            .with_urls(false)
            .with_context_lines(0)
            .without_syntax_highlighting()
            .without_cause_chain()
    }

    /// A text in faint type.
    pub(super) fn faint(self, text: &str) -> String {
        self.painted(text, "2")
    }

    /// A text in bold type.
    pub(super) fn bold(self, text: &str) -> String {
        self.painted(text, "1")
    }

    /// A text in the colour of a level.
    pub(super) fn level(self, level: Level, text: &str) -> String {
        self.painted(
            text,
            match level {
                Level::Error => "31",
                Level::Warning => "33",
                Level::Note => "36",
            },
        )
    }

    fn painted(self, text: &str, code: &str) -> String {
        if self.colour && !text.is_empty() { format!("\u{1b}[{code}m{text}\u{1b}[0m") } else { text.to_owned() }
    }
}
