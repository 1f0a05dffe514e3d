//! Reading figures with their sources.

use std::collections::BTreeSet;

use super::amount::read_figure;
use super::{Cited, SourceNote};
use crate::quantity::{Dimension, Range};
use crate::source::toml::{Table, Text, Value, nearest};

/// Which keys of a table hold recalled figures.
#[derive(Debug, Clone)]
enum Recalled {
    All,
    Keys(BTreeSet<String>),
}

/// What the figures of a table rest on unless they say otherwise.
#[derive(Debug, Clone)]
pub(super) struct Cite<'s> {
    sources: &'s [SourceNote],
    source: Option<&'s SourceNote>,
    recalled: Recalled,
}

/// The sources of a file; a file without any is refused.
pub(super) fn read_sources(root: &mut Table<'_>) -> Vec<SourceNote> {
    let mut sources: Vec<SourceNote> = Vec::new();
    for mut table in root.require("sources").and_then(|value| value.tables()).unwrap_or_default() {
        let id = table.require("id").and_then(|value| value.text());
        let title = table.require("title").and_then(|value| value.text());
        let read = table.require("read").and_then(|value| value.boolean());
        let section = table.text("section");
        if let (Some(id), Some(title), Some(read)) = (id, title, read) {
            if sources.iter().any(|source| source.id == id.as_str()) {
                id.refuse(format!("two sources are called `{}`", id.as_str()), "the second", "give each its own id");
            }
            let title = match section {
                Some(section) => format!("{}, {}", title.as_str(), section.as_str()),
                None => title.as_str().to_owned(),
            };
            sources.push(SourceNote { id: id.as_str().to_owned(), title, read: read.value });
        }
        table.finish();
    }
    if sources.is_empty() && !root.document().has_problems() {
        root.refuse("the file names no source", "`sources` is empty", "add what was read, or read = false");
    }
    sources
}

impl<'s> Cite<'s> {
    /// What figures rest on at the top of a file: its first source, and the key `recalled` (true, or a list of keys).
    pub(super) fn of_file(root: &mut Table<'_>, sources: &'s [SourceNote]) -> Self {
        let top = Self { sources, source: sources.first(), recalled: Recalled::Keys(BTreeSet::new()) };
        top.within(root)
    }

    /// The same inside a table, which may name another `source` and its own `recalled` figures.
    pub(super) fn within(&self, table: &mut Table<'_>) -> Self {
        let source = table.text("source").and_then(|id| self.find(&id)).or(self.source);
        let recalled = match table.take("recalled") {
            None => match self.recalled {
                Recalled::All => Recalled::All,
                Recalled::Keys(_) => Recalled::Keys(BTreeSet::new()),
            },
            Some(value) if value.is_list() => {
                Recalled::Keys(value.texts().into_iter().flatten().map(|key| key.as_str().to_owned()).collect())
            }
            Some(value) => match value.boolean() {
                Some(flag) if flag.value => Recalled::All,
                _ => Recalled::Keys(BTreeSet::new()),
            },
        };
        Self { sources: self.sources, source, recalled }
    }

    /// Whether the file names no source at all, which is reported once and not for every figure.
    pub(super) fn is_empty(&self) -> bool {
        self.sources.is_empty()
    }

    fn find(&self, id: &Text<'_>) -> Option<&'s SourceNote> {
        let found = self.sources.iter().find(|source| source.id == id.as_str());
        if found.is_none() {
            let help = match nearest(id.as_str(), self.sources.iter().map(|source| source.id.as_str())) {
                Some(name) => format!("did you mean `{name}`?"),
                None => "add it to `sources`".to_owned(),
            };
            id.refuse(format!("no source is called `{}`", id.as_str()), "an unknown source", help);
        }
        found
    }

    /// A figure under a key with what it rests on.
    pub(super) fn cite<T>(&self, key: &str, value: T) -> Cited<T> {
        self.cite_as(value, self.marks(key))
    }

    /// Whether the table itself says that the figure under a key is recalled, whatever its source.
    fn marks(&self, key: &str) -> bool {
        match &self.recalled {
            Recalled::All => true,
            Recalled::Keys(keys) => keys.contains(key),
        }
    }

    fn cite_as<T>(&self, value: T, marked: bool) -> Cited<T> {
        let Some(source) = self.source else {
            return Cited { value, source: "recalled".to_owned(), recalled: true };
        };
        let recalled = marked || !source.read;
        Cited { value, source: source.title.clone(), recalled }
    }

    /// A figure: a text, or a table of `value`, `source` and `recalled`.
    pub(super) fn figure(&self, value: Value<'_>, dimension: Dimension) -> Option<Cited<Range>> {
        if !value.is_table() {
            let range = read_range(&value.text()?, dimension)?;
            return Some(self.cite(value.key(), range));
        }
        let mut table = value.table()?;
        let inner = self.within(&mut table);
        let range = table.require("value").and_then(|value| read_range(&value.text()?, dimension));
        table.finish();
        Some(inner.cite_as(range?, self.marks(value.key()) || matches!(inner.recalled, Recalled::All)))
    }

    /// A figure of one value: the high end of a range where typical and maximum are given.
    pub(super) fn value(&self, value: Value<'_>, dimension: Dimension) -> Option<Cited<f64>> {
        let figure = self.figure(value, dimension)?;
        if !figure.value.is_exact() {
            value.refuse(
                format!("`{}` takes one value", value.key()),
                "this is a range",
                "write the one that the sheet limits",
            );
        }
        Some(figure.map(Range::high))
    }

    /// Refuses keys in the table's `recalled` that name nothing.
    pub(super) fn check_keys(table: &mut Table<'_>, known: &[&str]) {
        let named = table.take("recalled").filter(Value::is_list).and_then(|value| value.texts()).unwrap_or_default();
        for key in named.iter().filter(|key| !known.contains(&key.as_str())) {
            let help = match nearest(key.as_str(), known.iter().copied()) {
                Some(name) => format!("did you mean `{name}`?"),
                None => "name keys of this table that hold figures".to_owned(),
            };
            key.refuse(format!("`{}` is no figure here", key.as_str()), "not a figure of this table", help);
        }
    }
}

impl<T> Cited<T> {
    /// The same citation of something made from the value.
    #[must_use]
    pub fn map<U>(self, change: impl FnOnce(T) -> U) -> Cited<U> {
        Cited { value: change(self.value), source: self.source, recalled: self.recalled }
    }
}

/// A range with the unit of `dimension`; what is wrong is reported at the very part of the text.
pub(super) fn read_range(text: &Text<'_>, dimension: Dimension) -> Option<Range> {
    match read_figure(text.as_str(), dimension) {
        Ok(range) => Some(range),
        Err(refusal) => {
            let help = match dimension.symbol() {
                Some("") => "write a number or a percentage: \"2 %\"".to_owned(),
                Some(symbol) => format!(
                    "write \"1 {symbol}\", \"1 .. 2 {symbol}\", \"typical / maximum {symbol}\" or three values"
                ),
                None => format!("write a figure in {dimension}"),
            };
            let document = text.document();
            let span = refusal.span();
            document.refuse(text.part(span.start()..span.end()), refusal.message(), "not readable as a figure", help);
            None
        }
    }
}

/// One of a list of words; another is reported with the nearest right one.
pub(super) fn word<T: Copy>(text: &Text<'_>, what: &str, all: &[(T, &str)]) -> Option<T> {
    let found = all.iter().find(|(_, name)| *name == text.as_str()).map(|(value, _)| *value);
    if found.is_none() {
        let names: Vec<&str> = all.iter().map(|(_, name)| *name).collect();
        let help = match nearest(text.as_str(), names.iter().copied()) {
            Some(name) => format!("did you mean `{name}`?"),
            None => format!("one of: {}", names.join(", ")),
        };
        text.refuse(format!("`{}` is no {what}", text.as_str()), format!("not a {what}"), help);
    }
    found
}
