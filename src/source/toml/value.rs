//! One value of a file.

use std::fmt;

use toml_edit::{Item, TableLike};

use super::{Document, Table};
use crate::source::Span;

/// Something with the place where it stands.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Spanned<T> {
    /// The thing.
    pub value: T,
    /// Where it stands.
    pub span: Span,
}

/// A day, as written: `2027-06-30`.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Date {
    /// Year.
    pub year: u16,
    /// Month, from 1.
    pub month: u8,
    /// Day of the month, from 1.
    pub day: u8,
}

impl Date {
    /// The day of a text such as `2027-06-30`.
    #[must_use]
    pub fn read(text: &str) -> Option<Self> {
        let read = text.trim().parse::<toml_edit::Datetime>().ok().filter(|read| read.time.is_none())?;
        let date = read.date?;
        Some(Self { year: date.year, month: date.month, day: date.day })
    }
}

impl fmt::Display for Date {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(formatter, "{:04}-{:02}-{:02}", self.year, self.month, self.day)
    }
}

/// A text value.
#[derive(Clone, Copy)]
pub struct Text<'a> {
    document: &'a Document,
    text: &'a str,
    span: Span,
}

impl<'a> Text<'a> {
    /// The text without its quotes.
    #[must_use]
    pub fn as_str(&self) -> &'a str {
        self.text
    }

    /// The place of the value with its quotes.
    #[must_use]
    pub fn span(&self) -> Span {
        self.span
    }

    /// The place of a part of the text, counted in bytes of [`Text::as_str`]. Where the file writes the text with
    /// escapes, the places do not match and it is the whole value.
    #[must_use]
    pub fn part(&self, range: std::ops::Range<usize>) -> Span {
        let written = self.document.source().slice(self.span);
        for quotes in ["\"\"\"\n", "'''\n", "\"\"\"", "'''", "\"", "'"] {
            if let Some(rest) = written.strip_prefix(quotes)
                && rest.starts_with(self.text)
            {
                return Span::from(range).shifted(self.span.start() + quotes.len());
            }
        }
        self.span
    }

    /// The file.
    #[must_use]
    pub fn document(&self) -> &'a Document {
        self.document
    }

    /// Notes an error at this text.
    pub fn refuse(&self, message: impl Into<String>, label: impl Into<String>, help: impl Into<String>) {
        self.document.refuse(self.span, message, label, help);
    }
}

impl fmt::Debug for Text<'_> {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(formatter, "{:?} at {:?}", self.text, self.span)
    }
}

/// What a value holds.
#[derive(Clone, Copy)]
enum Held<'a> {
    Plain(&'a toml_edit::Value),
    Table(&'a toml_edit::Table),
    Tables(&'a toml_edit::ArrayOfTables),
    Nothing,
}

/// A value with the key that it stands under.
#[derive(Clone, Copy)]
pub struct Value<'a> {
    document: &'a Document,
    key: &'a str,
    key_span: Span,
    held: Held<'a>,
}

impl fmt::Debug for Value<'_> {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(formatter, "{} = {} at {:?}", self.key, self.noun(), self.span())
    }
}

impl<'a> Value<'a> {
    pub(super) fn of_item(document: &'a Document, key: &'a str, key_span: Span, item: &'a Item) -> Self {
        let held = match item {
            Item::None => Held::Nothing,
            Item::Value(value) => Held::Plain(value),
            Item::Table(table) => Held::Table(table),
            Item::ArrayOfTables(tables) => Held::Tables(tables),
        };
        Self { document, key, key_span, held }
    }

    fn element(&self, value: &'a toml_edit::Value) -> Self {
        Self { held: Held::Plain(value), ..*self }
    }

    /// The key; of an element of an array: the array's key.
    #[must_use]
    pub fn key(&self) -> &'a str {
        self.key
    }

    /// The place of the key.
    #[must_use]
    pub fn key_span(&self) -> Span {
        self.key_span
    }

    /// The place of the value; of a table: its header.
    #[must_use]
    pub fn span(&self) -> Span {
        let span = match self.held {
            Held::Plain(value) => value.span(),
            Held::Table(table) => table.span(),
            Held::Tables(tables) => tables.iter().next().and_then(toml_edit::Table::span),
            Held::Nothing => None,
        };
        span.map_or(self.key_span, Span::from)
    }

    /// The file.
    #[must_use]
    pub fn document(&self) -> &'a Document {
        self.document
    }

    /// Notes an error at this value.
    pub fn refuse(&self, message: impl Into<String>, label: impl Into<String>, help: impl Into<String>) {
        self.document.refuse(self.span(), message, label, help);
    }

    /// What the value is: `a text`, `a number` …
    #[must_use]
    pub fn noun(&self) -> &'static str {
        use toml_edit::Value as Plain;
        match self.held {
            Held::Plain(Plain::String(_)) => "a text",
            Held::Plain(Plain::Integer(_) | Plain::Float(_)) => "a number",
            Held::Plain(Plain::Boolean(_)) => "true or false",
            Held::Plain(Plain::Datetime(_)) => "a date",
            Held::Plain(Plain::Array(_)) => "a list",
            Held::Plain(Plain::InlineTable(_)) | Held::Table(_) => "a table",
            Held::Tables(_) => "a list of tables",
            Held::Nothing => "nothing",
        }
    }

    fn wrong<T>(&self, wanted: &str, help: &str) -> Option<T> {
        self.refuse(format!("`{}` must be {wanted}", self.key), format!("this is {}", self.noun()), help);
        None
    }

    fn plain(&self) -> Option<&'a toml_edit::Value> {
        if let Held::Plain(value) = self.held { Some(value) } else { None }
    }

    /// Whether it is a text.
    #[must_use]
    pub fn is_text(&self) -> bool {
        self.plain().is_some_and(toml_edit::Value::is_str)
    }

    /// Whether it is a table, with a header or in line.
    #[must_use]
    pub fn is_table(&self) -> bool {
        matches!(self.held, Held::Table(_)) || self.plain().is_some_and(toml_edit::Value::is_inline_table)
    }

    /// Whether it is a list of values.
    #[must_use]
    pub fn is_list(&self) -> bool {
        self.plain().is_some_and(toml_edit::Value::is_array)
    }

    /// The text; anything else is reported.
    #[must_use]
    pub fn text(&self) -> Option<Text<'a>> {
        match self.plain().and_then(toml_edit::Value::as_str) {
            Some(text) => Some(Text { document: self.document, text, span: self.span() }),
            None => self.wrong("a text", "write it in quotes, a figure with its unit: \"3.3 V\""),
        }
    }

    /// True or false; anything else is reported.
    #[must_use]
    pub fn boolean(&self) -> Option<Spanned<bool>> {
        match self.plain().and_then(toml_edit::Value::as_bool) {
            Some(value) => Some(Spanned { value, span: self.span() }),
            None => self.wrong("true or false", "write true or false without quotes"),
        }
    }

    /// A finite number, whole or not; anything else is reported.
    #[must_use]
    pub fn number(&self) -> Option<Spanned<f64>> {
        let number = self.plain().and_then(|value| match value {
            toml_edit::Value::Float(number) => Some(*number.value()),
            #[allow(clippy::cast_precision_loss)] // a whole number in a configuration file is far below 2^53
            toml_edit::Value::Integer(number) => Some(*number.value() as f64),
            _ => None,
        });
        match number.filter(|number| number.is_finite()) {
            Some(value) => Some(Spanned { value, span: self.span() }),
            None => self.wrong("a number", "write a number without quotes"),
        }
    }

    /// A day; anything else, a time of day with it too, is reported.
    #[must_use]
    pub fn date(&self) -> Option<Spanned<Date>> {
        let date = self.plain().and_then(toml_edit::Value::as_datetime).filter(|whole| whole.time.is_none());
        match date.and_then(|whole| whole.date) {
            Some(date) => {
                let value = Date { year: date.year, month: date.month, day: date.day };
                Some(Spanned { value, span: self.span() })
            }
            None => self.wrong("a date", "write a date without quotes: 2027-06-30"),
        }
    }

    /// The elements of a list; anything else is reported.
    #[must_use]
    pub fn list(&self) -> Option<Vec<Value<'a>>> {
        match self.plain().and_then(toml_edit::Value::as_array) {
            Some(array) => Some(array.iter().map(|value| self.element(value)).collect()),
            None => self.wrong("a list", "write it in square brackets"),
        }
    }

    /// A list of texts; other elements are reported and left out.
    #[must_use]
    pub fn texts(&self) -> Option<Vec<Text<'a>>> {
        Some(self.list()?.iter().filter_map(Value::text).collect())
    }

    /// A table, with a header or in line; anything else is reported.
    #[must_use]
    pub fn table(&self) -> Option<Table<'a>> {
        let like: Option<&'a dyn TableLike> = match self.held {
            Held::Table(table) => Some(table),
            Held::Plain(toml_edit::Value::InlineTable(table)) => Some(table),
            _ => None,
        };
        match like {
            Some(table) => Some(Table::new(self.document, table, self.span(), self.key.to_owned())),
            None => self.wrong("a table", "write it in braces or under a header in square brackets"),
        }
    }

    /// The tables of a list of tables (`[[key]]`, or in line); anything else is reported.
    #[must_use]
    pub fn tables(&self) -> Option<Vec<Table<'a>>> {
        if let Held::Tables(tables) = self.held {
            let named = |table: &'a toml_edit::Table| {
                let span = table.span().map_or(self.key_span, Span::from);
                Table::new(self.document, table, span, self.key.to_owned())
            };
            return Some(tables.iter().map(named).collect());
        }
        if self.is_list() {
            return Some(self.list()?.iter().filter_map(Value::table).collect());
        }
        self.wrong("a list of tables", &format!("write each under a header of its own: [[{}]]", self.key))
    }
}
