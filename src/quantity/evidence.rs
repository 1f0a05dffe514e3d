//! What a figure rests on.

use std::cmp::Ordering;
use std::fmt;
use std::hash::{Hash, Hasher};
use std::sync::Arc;

/// How well a figure is founded, strongest first.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Grade {
    /// In the board file, or a field on the symbol.
    Declared,
    /// Connections, what is fitted, component values as read.
    Drawn,
    /// A data sheet or standard that was read.
    Published,
    /// The symbol's own library text, where value and library part agree.
    Described,
    /// A net name, a footprint, a repaired reading, a figure that was recalled and not read.
    Inferred,
    /// A default or a model's estimate.
    Assumed,
}

impl Grade {
    /// Every grade, the strongest first.
    pub const ALL: &'static [Self] =
        &[Self::Declared, Self::Drawn, Self::Published, Self::Described, Self::Inferred, Self::Assumed];

    /// Whether a failure may be claimed on it.
    #[must_use]
    pub fn is_fact(self) -> bool {
        self <= Self::Described
    }

    /// The word for it.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Declared => "declared",
            Self::Drawn => "drawn",
            Self::Published => "published",
            Self::Described => "described",
            Self::Inferred => "inferred",
            Self::Assumed => "assumed",
        }
    }

    /// The weaker of two.
    #[must_use]
    pub fn weaker(self, other: Self) -> Self {
        self.max(other)
    }
}

impl fmt::Display for Grade {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.write_str(self.name())
    }
}

/// Identifies one fact or guess: two figures that share a key share what lies behind it. Stable between runs.
#[derive(Debug, Clone, Eq)]
pub struct Key(Arc<str>);

// Keys are compared all the time and most that are equal are copies of one.
impl PartialEq for Key {
    fn eq(&self, other: &Self) -> bool {
        Arc::ptr_eq(&self.0, &other.0) || self.0 == other.0
    }
}

impl Hash for Key {
    fn hash<H: Hasher>(&self, state: &mut H) {
        self.0.hash(state);
    }
}

impl Ord for Key {
    fn cmp(&self, other: &Self) -> Ordering {
        if Arc::ptr_eq(&self.0, &other.0) { Ordering::Equal } else { self.0.cmp(&other.0) }
    }
}

impl PartialOrd for Key {
    fn partial_cmp(&self, other: &Self) -> Option<Ordering> {
        Some(self.cmp(other))
    }
}

impl Key {
    /// A key from a text that is unique for the fact, such as `U2 dropout` or `+5V voltage`.
    #[must_use]
    pub fn new(text: impl Into<Arc<str>>) -> Self {
        Self(text.into())
    }

    /// Its text.
    #[must_use]
    pub fn as_str(&self) -> &str {
        &self.0
    }
}

/// A table of the board file.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Table {
    /// `[board]`
    Board,
    /// `[[supply]]`
    Supply,
    /// `[[load]]`
    Load,
    /// `[[rail]]`
    Rail,
    /// `[[part]]`
    Part,
}

impl Table {
    /// Its name in the board file.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Board => "board",
            Self::Supply => "supply",
            Self::Load => "load",
            Self::Rail => "rail",
            Self::Part => "part",
        }
    }
}

/// The one declaration in the board file that would settle a guess or supply a missing figure.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Settle {
    /// The table it goes into.
    pub table: Table,
    /// The net or reference that it is about; empty for `[board]`.
    pub target: String,
    /// The key to write.
    pub key: &'static str,
    /// A text that the key could have, such as `"2 .. 180 mA"`; a template, not a value.
    pub example: &'static str,
}

impl Settle {
    /// A declaration about a net or part.
    #[must_use]
    pub fn new(table: Table, target: impl Into<String>, key: &'static str, example: &'static str) -> Self {
        Self { table, target: target.into(), key, example }
    }

    /// The thing to declare in a few words: `load on +5V`, `ESR of C7`.
    #[must_use]
    pub fn phrase(&self) -> String {
        let key = if self.key == "esr" { "ESR".to_owned() } else { self.key.replace('_', " ") };
        match self.table {
            Table::Board => format!("{key} of the board"),
            Table::Load => format!("load on {}", self.target),
            Table::Supply => format!("supply {}", self.target),
            Table::Rail => format!("{key} of rail {}", self.target),
            Table::Part => format!("{key} of {}", self.target),
        }
    }
}

/// What one fact or guess rests on.
#[derive(Debug, Clone, PartialEq)]
pub struct Evidence {
    /// What it is, stable and unique.
    pub key: Key,
    /// How well it is founded.
    pub grade: Grade,
    /// What it is about in a few words: `dropout of U2`.
    pub what: String,
    /// Where it comes from: a file with line, a data sheet's title, `net name`.
    pub source: String,
    /// What would settle it, for guesses.
    pub settle: Option<Settle>,
}

impl Evidence {
    /// Evidence under a key that is made from what it is about.
    #[must_use]
    pub fn new(grade: Grade, what: impl Into<String>, source: impl Into<String>) -> Self {
        let what = what.into();
        Self { key: Key::new(what.as_str()), grade, what, source: source.into(), settle: None }
    }

    /// The same with what would settle it.
    #[must_use]
    pub fn settled_by(mut self, settle: Settle) -> Self {
        self.settle = Some(settle);
        self
    }

    /// The same under another key, for figures that share or must not share what lies behind them.
    #[must_use]
    pub fn keyed(mut self, key: impl Into<Arc<str>>) -> Self {
        self.key = Key::new(key);
        self
    }

    /// The same, no stronger than `grade`.
    #[must_use]
    pub fn at_most(mut self, grade: Grade) -> Self {
        self.grade = self.grade.weaker(grade);
        self
    }
}
