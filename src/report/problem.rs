//! Problems, and findings, as diagnostics.

use std::fmt;

use miette::{Diagnostic, LabeledSpan, SourceCode};

use super::excerpt::{Excerpt, Mark};
use super::inert::inert_short;
use super::look::Look;
use crate::checks::Level;
use crate::source::{Problem, Severity};

/// Most characters of a message or a line of help; texts from files stand in them.
const LONGEST: usize = 600;

/// Something to tell, with the lines that it is about.
#[derive(Debug)]
pub(super) struct Told {
    level: Level,
    message: String,
    excerpt: Option<Excerpt>,
    help: Option<String>,
}

impl Told {
    /// A message of one line; what a file put into it is made harmless.
    pub(super) fn new(level: Level, message: &str) -> Self {
        Self { level, message: inert_short(message, LONGEST), excerpt: None, help: None }
    }

    /// A further line under the message.
    pub(super) fn line(mut self, line: &str) -> Self {
        self.message.push('\n');
        self.message.push_str(&inert_short(line, LONGEST));
        self
    }

    /// The lines that it is about.
    pub(super) fn excerpt(mut self, excerpt: Excerpt) -> Self {
        self.excerpt = Some(excerpt);
        self
    }

    /// What to do.
    pub(super) fn help(mut self, help: &str) -> Self {
        self.help = Some(inert_short(help, LONGEST));
        self
    }

    /// As text.
    pub(super) fn render(&self, look: Look) -> String {
        let mut text = String::new();
        // Writing into a `String` cannot fail, and the excerpt holds every label; were a line lost all the same, the
        // message is what must be told.
        if look.handler().render_report(&mut text, self).is_err() {
            text = format!("  {}: {}\n", self.level, self.message);
        }
        text
    }
}

impl fmt::Display for Told {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.write_str(&self.message)
    }
}

impl std::error::Error for Told {}

impl Diagnostic for Told {
    fn severity(&self) -> Option<miette::Severity> {
        Some(match self.level {
            Level::Error => miette::Severity::Error,
            Level::Warning => miette::Severity::Warning,
            Level::Note => miette::Severity::Advice,
        })
    }

    fn help<'a>(&'a self) -> Option<Box<dyn fmt::Display + 'a>> {
        self.help.as_ref().map(|help| Box::new(help) as Box<dyn fmt::Display>)
    }

    fn source_code(&self) -> Option<&dyn SourceCode> {
        self.excerpt.as_ref().map(|excerpt| excerpt as &dyn SourceCode)
    }

    fn labels(&self) -> Option<Box<dyn Iterator<Item = LabeledSpan> + '_>> {
        self.excerpt.as_ref().map(|excerpt| Box::new(excerpt.labels()) as Box<dyn Iterator<Item = LabeledSpan>>)
    }
}

/// The level at which a problem is shown.
pub(super) fn level_of(problem: &Problem) -> Level {
    match problem.severity() {
        Severity::Error => Level::Error,
        Severity::Warning => Level::Warning,
        Severity::Note => Level::Note,
    }
}

/// A problem as text.
#[must_use]
pub fn problem(problem: &Problem, look: Look) -> String {
    let mut told = Told::new(level_of(problem), problem.message());
    if let Some((source, span)) = problem.place() {
        let label = problem.label().unwrap_or_default().to_owned();
        told = told.excerpt(Excerpt::new(source, &[Mark { span, label }]));
    }
    if let Some(help) = problem.advice() {
        told = told.help(help);
    }
    told.render(look)
}

/// Problems as text, in the order given, with a blank line behind each.
#[must_use]
pub fn problems<'a>(list: impl IntoIterator<Item = &'a Problem>, look: Look) -> String {
    list.into_iter().map(|each| problem(each, look) + "\n").collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::source::{Source, Span};

    fn look() -> Look {
        Look::new(Look::PIPED, false)
    }

    fn at(text: &str, start: usize, end: usize) -> String {
        let source = Source::new("board.net", text);
        let told = Problem::error("the list is not closed").at(&source, Span::new(start, end), "opens here");
        problem(&told.help("export the netlist again"), look())
    }

    #[test]
    fn a_problem_shows_its_line_and_what_to_do() {
        insta::assert_snapshot!(at("(export\n  (nets (net (code \"1\")\n", 10, 15));
    }

    #[test]
    fn a_line_of_megabytes_is_cut_around_its_place() {
        let long = format!("(export {}(net x) {})", "a".repeat(100_000), "µ".repeat(100_000));
        let text = at(&long, 100_008, 100_015);
        assert!(text.contains("board.net:1:100009"), "{text}");
        assert!(text.chars().count() < 1000, "{text}");
        insta::assert_snapshot!(text);
    }

    #[test]
    fn controls_in_the_source_are_shown_without_moving_the_mark() {
        insta::assert_snapshot!(at("(net\t(name \"a\x1b[2J\u{202e}b\") x)\r\n", 20, 24));
    }

    #[test]
    fn a_place_at_the_end_of_the_file_is_shown() {
        let text = at("(export\n", 8, 8);
        assert!(text.contains("board.net:2:1"), "{text}");
        assert!(text.contains("opens here"), "{text}");
    }

    #[test]
    fn a_place_outside_the_text_does_no_harm() {
        for (start, end) in [(100, 200), (0, 4000), (5, 2)] {
            assert!(at("(é\n\u{feff})", start, end).contains("the list is not closed"));
        }
        assert!(at("", 0, 0).contains("the list is not closed"));
        assert!(at("\u{feff}x", 0, 2).contains("board.net:1:1"));
        assert!(at("éé", 1, 3).contains("opens here"));
    }

    #[test]
    fn a_message_with_a_name_of_megabytes_is_cut() {
        let text = problem(&Problem::warning("x".repeat(3_000_000)), look());
        assert!(text.len() < 2000);
    }
}
