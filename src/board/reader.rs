//! What the readers of all tables share: figures with their places, words, contradictions.

use crate::quantity::{Dimension, Range};
use crate::source::Span;
use crate::source::toml::{Document, Spanned, Table, Text, nearest};

use super::declared::{Declared, Place};
use super::texts::read_figure;
use crate::knowledge::Allowed;

/// The file that is being read.
#[derive(Debug, Clone, Copy)]
pub(super) struct Reader<'a> {
    pub(super) document: &'a Document,
    pub(super) shared: bool,
}

impl<'a> Reader<'a> {
    /// Something with its place in the file.
    pub(super) fn declared<T>(self, value: T, span: Span) -> Declared<T> {
        Declared::new(value, Place::File { source: self.document.source().clone(), span, shared: self.shared })
    }

    /// Takes over a value that carries its span.
    pub(super) fn spanned<T>(self, found: Option<Spanned<T>>) -> Option<Declared<T>> {
        found.map(|found| self.declared(found.value, found.span))
    }

    /// The figure under a key, which must be one that `allowed` admits.
    pub(super) fn figure(
        self,
        table: &mut Table<'a>,
        key: &'static str,
        dimension: Dimension,
        allowed: Allowed,
    ) -> Option<Declared<Range>> {
        let text = table.text(key)?;
        self.figure_of(text, dimension, allowed)
    }

    /// The figure that a text states.
    pub(super) fn figure_of(self, text: Text<'a>, dimension: Dimension, allowed: Allowed) -> Option<Declared<Range>> {
        match read_figure(text.as_str(), dimension, allowed) {
            Ok(range) => Some(self.declared(range, text.span())),
            Err(fault) => {
                self.document.refuse(text.part(fault.place.clone()), fault.message, fault.label, fault.help);
                None
            }
        }
    }

    /// A single figure under a key: a range is refused.
    pub(super) fn single(
        self,
        table: &mut Table<'a>,
        key: &'static str,
        dimension: Dimension,
        allowed: Allowed,
    ) -> Option<Declared<Range>> {
        let figure = self.figure(table, key, dimension, allowed)?;
        if figure.value.is_exact() {
            return Some(figure);
        }
        let Place::File { span, .. } = figure.place else { return None };
        self.document.refuse(
            span,
            format!("`{key}` must be one value"),
            "this is a range",
            "write the one that holds",
        );
        None
    }

    /// A text under a key that must not be empty.
    pub(super) fn name(self, table: &mut Table<'a>, key: &'static str) -> Option<Declared<String>> {
        self.name_of(table.text(key)?, key)
    }

    /// A text that must not be empty.
    pub(super) fn name_of(self, text: Text<'a>, key: &str) -> Option<Declared<String>> {
        if text.as_str().trim().is_empty() {
            text.refuse(format!("`{key}` is empty"), "nothing stands here", "write a text, or leave the key out");
            return None;
        }
        Some(self.declared(text.as_str().to_owned(), text.span()))
    }

    /// A name that an entry is about; its lack is reported at the entry's header.
    pub(super) fn required(self, table: &mut Table<'a>, key: &'static str) -> Option<Declared<String>> {
        let text = table.require(key)?.text()?;
        self.name_of(text, key)
    }

    /// A word out of a list under a key.
    pub(super) fn word<T: Copy>(
        self,
        table: &mut Table<'a>,
        key: &'static str,
        words: &[(T, &'static str)],
    ) -> Option<Declared<T>> {
        let text = table.text(key)?;
        let value = self.word_of(text, key, words)?;
        Some(self.declared(value, text.span()))
    }

    /// A word out of a list.
    pub(super) fn word_of<T: Copy>(self, text: Text<'a>, key: &str, words: &[(T, &'static str)]) -> Option<T> {
        let word = text.as_str().trim();
        if let Some((value, _)) = words.iter().find(|(_, name)| name.eq_ignore_ascii_case(word)) {
            return Some(*value);
        }
        let names: Vec<&str> = words.iter().map(|(_, name)| *name).collect();
        let help = match nearest(word, names.iter().copied()) {
            Some(near) => format!("did you mean `{near}`?"),
            None => format!("write one of {}", names.join(", ")),
        };
        text.refuse(format!("`{word}` is no {key}"), "not one of its words", help);
        None
    }

    /// Reports keys of which an entry may have only one: the second is refused, where the first stands is told.
    pub(super) fn only_one(self, keys: &[(&str, Option<Span>)]) {
        let mut given = keys.iter().filter_map(|(key, span)| Some((key, (*span)?)));
        let Some((first, _)) = given.next() else { return };
        for (key, span) in given {
            self.document.refuse(
                span,
                format!("`{first}` and `{key}` contradict each other"),
                format!("`{first}` is given too"),
                "keep one of them",
            );
        }
    }

    /// Reports an entry that repeats an earlier one of the same file.
    pub(super) fn twice<T>(self, table: &str, what: &str, first: &Declared<T>, again: &Declared<T>) {
        let Place::File { span, .. } = &again.place else { return };
        let line = first.place.line().unwrap_or(0);
        self.document.refuse(
            *span,
            format!("{what} has two [[{table}]] entries"),
            "declared here again",
            format!("the first stands on line {line}: write one entry with all its keys"),
        );
    }
}

/// The place of something that was declared in a file.
pub(super) fn span_of<T>(declared: Option<&Declared<T>>) -> Option<Span> {
    match &declared?.place {
        Place::File { span, .. } => Some(*span),
        Place::Field { .. } => None,
    }
}
