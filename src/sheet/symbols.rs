//! Where the symbols of a sheet stand.

use std::collections::BTreeMap;

use super::{lines, lists};
use crate::source::Span;

/// Most symbols of one sheet; those behind are not found.
pub const MOST_SYMBOLS: usize = 500_000;

/// The symbols of a sheet by their unique ids.
#[derive(Debug, Default)]
pub(super) struct Symbols {
    places: BTreeMap<String, Span>,
    whole: bool,
}

impl Symbols {
    /// Reads the text of a sheet in either layout. What is no sheet has no symbols.
    pub(super) fn read(text: &str) -> Self {
        let mut symbols = Self::default();
        let start = text.len() - text.trim_start_matches('\u{feff}').len();
        let whole = if text.get(start..).unwrap_or("").starts_with(lines::FIRST) {
            lines::read(text, start, &mut symbols)
        } else {
            lists::read(text, start, &mut symbols)
        };
        symbols.whole = whole && symbols.places.len() < MOST_SYMBOLS;
        symbols
    }

    /// Notes a symbol; of two with the same id the first stays.
    pub(super) fn add(&mut self, id: &str, place: Span) {
        if self.places.len() < MOST_SYMBOLS && !id.is_empty() {
            self.places.entry(id.to_ascii_lowercase()).or_insert(place);
        }
    }

    /// Where the symbol of an id stands: the reference inside it, or where it begins.
    pub(super) fn place(&self, id: &str) -> Option<Span> {
        self.places.get(&key(id)).copied()
    }

    /// Every id.
    pub(super) fn ids(&self) -> impl Iterator<Item = &str> {
        self.places.keys().map(String::as_str)
    }

    /// Whether the sheet was read to its end and nothing in it is broken off, so that a symbol that was not found is
    /// not there.
    pub(super) fn is_whole(&self) -> bool {
        self.whole
    }
}

/// An id as symbols are noted: some netlists write the ids of the sheets ahead of the symbol's own.
pub(super) fn key(id: &str) -> String {
    id.rsplit('/').next().unwrap_or(id).to_ascii_lowercase()
}
