//! A table that remembers which keys were asked for.

use std::fmt;

use toml_edit::TableLike;

use super::{Date, Document, Spanned, Text, Value, nearest};
use crate::source::Span;

/// A table of a file. Ask for its keys, then call [`Table::finish`].
pub struct Table<'a> {
    document: &'a Document,
    table: &'a dyn TableLike,
    span: Span,
    name: String,
    known: Vec<&'static str>,
    open: bool,
}

impl fmt::Debug for Table<'_> {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(formatter, "Table({:?}, {} keys) at {:?}", self.name, self.table.len(), self.span)
    }
}

impl<'a> Table<'a> {
    pub(super) fn new(document: &'a Document, table: &'a dyn TableLike, span: Span, name: String) -> Self {
        Self { document, table, span, name, known: Vec::new(), open: false }
    }

    /// The file.
    #[must_use]
    pub fn document(&self) -> &'a Document {
        self.document
    }

    /// The place of the header, or of the braces; the begin of the file for the whole file.
    #[must_use]
    pub fn span(&self) -> Span {
        self.span
    }

    /// The last part of its name; empty for the whole file.
    #[must_use]
    pub fn name(&self) -> &str {
        &self.name
    }

    /// Notes an error at the table's header.
    pub fn refuse(&self, message: impl Into<String>, label: impl Into<String>, help: impl Into<String>) {
        self.document.refuse(self.span, message, label, help);
    }

    /// The value under a key, which is known from now on.
    pub fn take(&mut self, key: &'static str) -> Option<Value<'a>> {
        if !self.known.contains(&key) {
            self.known.push(key);
        }
        self.value(key)
    }

    fn value(&self, key: &str) -> Option<Value<'a>> {
        let (key, item) = self.table.get_key_value(key)?;
        if item.is_none() {
            return None;
        }
        let span = key.span().map_or(self.span, Span::from);
        Some(Value::of_item(self.document, key.get(), span, item))
    }

    /// The value under a key; its lack is reported at the table's header.
    pub fn require(&mut self, key: &'static str) -> Option<Value<'a>> {
        let value = self.take(key);
        if value.is_none() {
            let place = if self.name.is_empty() { "the file".to_owned() } else { format!("`{}`", self.name) };
            self.refuse(
                format!("{place} lacks the key `{key}`"),
                format!("`{key}` belongs here"),
                format!("add `{key} = …`"),
            );
        }
        value
    }

    /// The text under a key.
    pub fn text(&mut self, key: &'static str) -> Option<Text<'a>> {
        self.take(key)?.text()
    }

    /// True or false under a key.
    pub fn boolean(&mut self, key: &'static str) -> Option<Spanned<bool>> {
        self.take(key)?.boolean()
    }

    /// The number under a key.
    pub fn number(&mut self, key: &'static str) -> Option<Spanned<f64>> {
        self.take(key)?.number()
    }

    /// The day under a key.
    pub fn date(&mut self, key: &'static str) -> Option<Spanned<Date>> {
        self.take(key)?.date()
    }

    /// The list of texts under a key; empty where it is missing.
    pub fn texts(&mut self, key: &'static str) -> Vec<Text<'a>> {
        self.take(key).and_then(|value| value.texts()).unwrap_or_default()
    }

    /// The table under a key.
    pub fn table(&mut self, key: &'static str) -> Option<Table<'a>> {
        self.take(key)?.table()
    }

    /// The list of tables under a key; empty where it is missing.
    pub fn tables(&mut self, key: &'static str) -> Vec<Table<'a>> {
        self.take(key).and_then(|value| value.tables()).unwrap_or_default()
    }

    /// Every entry whose key was not asked for so far, in the order of the file: for tables whose keys are free, such
    /// as pin numbers. Nothing is unknown in such a table.
    pub fn entries(&mut self) -> Vec<Value<'a>> {
        self.open = true;
        let keys = self.table.iter().map(|(key, _)| key).filter(|key| !self.known.contains(key));
        keys.filter_map(|key| self.value(key)).collect()
    }

    /// Refuses every key that was not asked for, with the nearest right name.
    pub fn finish(self) {
        if self.open {
            return;
        }
        for (key, _) in self.table.iter().filter(|(key, _)| !self.known.contains(key)) {
            let place = if self.name.is_empty() { "here".to_owned() } else { format!("in `{}`", self.name) };
            let help = match nearest(key, self.known.iter().copied()) {
                Some(name) => format!("did you mean `{name}`?"),
                None => format!("keys {place}: {}", self.known.join(", ")),
            };
            let span = self.table.key(key).and_then(toml_edit::Key::span).map_or(self.span, Span::from);
            self.document.refuse(span, format!("unknown key `{key}`"), format!("not a key {place}"), help);
        }
    }
}

#[cfg(test)]
mod tests {
    use crate::source::{Source, toml::Document};

    /// Problems as `line:column message, label; help`.
    fn told(document: Document) -> Vec<String> {
        let told = |problem: &crate::source::Problem| {
            let (source, span) = problem.place().unwrap();
            let at = source.position(span.start());
            let (label, help) = (problem.label().unwrap_or(""), problem.advice().unwrap_or(""));
            format!("{}:{} {}, {label}; {help}", at.line, at.column, problem.message())
        };
        document.into_problems().iter().map(told).collect()
    }

    #[test]
    fn every_wrong_key_and_type_is_reported_where_it_stands() {
        let source = Source::new(
            "x.toml",
            "net = 3\ncurent = \"1 A\"\nhot = \"yes\"\nlist = [\"a\", 2]\n[[load]]\nkind = \"a\"\n[[load]]\nknd = 1\n",
        );
        let document = Document::parse(&source).unwrap();
        let mut root = document.root();
        assert!(root.text("net").is_none());
        assert!(root.text("current").is_none());
        assert!(root.boolean("hot").is_none());
        assert_eq!(root.texts("list").len(), 1);
        for mut load in root.tables("load") {
            load.require("kind");
            load.finish();
        }
        root.finish();
        assert_eq!(
            told(document),
            [
                "1:7 `net` must be a text, this is a number; write it in quotes, a figure with its unit: \"3.3 V\"",
                "2:1 unknown key `curent`, not a key here; did you mean `current`?",
                "3:7 `hot` must be true or false, this is a text; write true or false without quotes",
                "4:14 `list` must be a text, this is a number; write it in quotes, a figure with its unit: \"3.3 V\"",
                "7:1 `load` lacks the key `kind`, `kind` belongs here; add `kind = …`",
                "8:1 unknown key `knd`, not a key in `load`; did you mean `kind`?",
            ]
        );
    }

    #[test]
    fn values_are_read_with_their_spans() {
        let source = Source::new(
            "x.toml",
            "'µ' = 'a > b'\nn = 2\nd = 2027-06-30\np = { 1 = \"x\", tab = \"y\" }\nq = [{ a = 1 }]\ne = \"\\u00b5 b\"\n",
        );
        let document = Document::parse(&source).unwrap();
        let mut root = document.root();
        let text = root.text("µ").unwrap();
        assert_eq!(source.slice(text.part(2..3)), ">");
        assert!((root.number("n").unwrap().value - 2.0).abs() < 1e-9);
        assert_eq!(root.date("d").unwrap().value.to_string(), "2027-06-30");
        let mut pins = root.table("p").unwrap();
        let keys: Vec<_> = pins.entries().iter().map(|value| value.key()).collect();
        assert_eq!(keys, ["1", "tab"]);
        pins.finish();
        assert_eq!(root.tables("q").len(), 1);
        let escaped = root.text("e").unwrap();
        assert_eq!(escaped.part(0..1), escaped.span());
        root.finish();
        assert!(!document.has_problems());
    }

    #[test]
    fn a_text_that_is_not_toml_is_refused_at_its_place() {
        let source = Source::new("x.toml", "a = 1\nb = = 2\n");
        let problem = Document::parse(&source).unwrap_err();
        let (_, span) = problem.place().unwrap();
        assert_eq!(source.position(span.start()).line, 2);
        assert_eq!(problem.message(), "the file is not valid TOML");
    }
}
