//! A parsed file and the problems met while reading it.

use std::cell::RefCell;
use std::fmt;

use super::Table;
use crate::source::{Problem, Source, Span};

/// A parsed TOML file; its values are read through [`Document::root`].
pub struct Document {
    source: Source,
    tree: toml_edit::Document<String>,
    problems: RefCell<Vec<Problem>>,
}

impl Document {
    /// Parses a text.
    ///
    /// # Errors
    /// When the text is not TOML: one problem that points at the first place which is not.
    pub fn parse(source: &Source) -> Result<Self, Box<Problem>> {
        match toml_edit::Document::parse(source.text().to_owned()) {
            Ok(tree) => Ok(Self { source: source.clone(), tree, problems: RefCell::default() }),
            Err(error) => {
                let end = source.text().len();
                let span = error.span().map_or(Span::new(end, end), Span::from);
                let message = error.message().lines().collect::<Vec<_>>().join(", ");
                Err(Box::new(Problem::error("the file is not valid TOML").at(source, span, message)))
            }
        }
    }

    /// The table of the whole file.
    #[must_use]
    pub fn root(&self) -> Table<'_> {
        Table::new(self, self.tree.as_table(), Span::new(0, 0), String::new())
    }

    /// The text.
    #[must_use]
    pub fn source(&self) -> &Source {
        &self.source
    }

    /// Notes a problem.
    pub fn report(&self, problem: Problem) {
        self.problems.borrow_mut().push(problem);
    }

    /// Notes an error at a place of the file, with what stands there and what to do.
    pub fn refuse(&self, span: Span, message: impl Into<String>, label: impl Into<String>, help: impl Into<String>) {
        self.report(Problem::error(message).at(&self.source, span, label).help(help));
    }

    /// Whether a problem was noted so far.
    #[must_use]
    pub fn has_problems(&self) -> bool {
        !self.problems.borrow().is_empty()
    }

    /// Every problem noted, in the order of their places.
    #[must_use]
    pub fn into_problems(self) -> Vec<Problem> {
        let mut problems = self.problems.into_inner();
        problems.sort_by_key(|problem| problem.place().map(|(_, span)| span));
        problems
    }
}

impl fmt::Debug for Document {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(formatter, "Document({:?}, {} problems)", self.source, self.problems.borrow().len())
    }
}
