//! A text with its name, and places in it.

use std::fmt;
use std::sync::{Arc, OnceLock};

/// A run of bytes in a [`Source`]: `start` up to, not including, `end`.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Default)]
pub struct Span {
    start: usize,
    end: usize,
}

impl Span {
    /// The bytes from `start` up to, not including, `end`; a reversed pair is taken as empty at `start`.
    #[must_use]
    pub fn new(start: usize, end: usize) -> Self {
        Self { start, end: end.max(start) }
    }

    /// The first byte.
    #[must_use]
    pub fn start(self) -> usize {
        self.start
    }

    /// The byte behind the last.
    #[must_use]
    pub fn end(self) -> usize {
        self.end
    }

    /// How many bytes.
    #[must_use]
    pub fn length(self) -> usize {
        self.end - self.start
    }

    /// The same span, counted from `offset` bytes further back.
    #[must_use]
    pub fn shifted(self, offset: usize) -> Self {
        Self { start: self.start + offset, end: self.end + offset }
    }
}

impl From<std::ops::Range<usize>> for Span {
    fn from(range: std::ops::Range<usize>) -> Self {
        Self::new(range.start, range.end)
    }
}

/// A place in a text.
#[derive(Debug, Clone)]
pub struct Location {
    /// The text.
    pub source: Source,
    /// Where in it.
    pub span: Span,
}

impl Location {
    /// A place in a text.
    #[must_use]
    pub fn new(source: &Source, span: Span) -> Self {
        Self { source: source.clone(), span }
    }

    /// Line and column of its first character.
    #[must_use]
    pub fn position(&self) -> Position {
        self.source.position(self.span.start())
    }
}

/// Line and column, both from 1; columns count characters, lines end with a line feed.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub struct Position {
    /// Line, from 1.
    pub line: usize,
    /// Column in characters, from 1.
    pub column: usize,
}

/// A text that was read, with the name under which its reader knows it.
#[derive(Clone)]
pub struct Source {
    name: Arc<str>,
    text: Arc<str>,
    /// Where each line begins; looked up only once a place is shown.
    lines: Arc<OnceLock<Vec<usize>>>,
}

impl Source {
    /// A text under a name (a path as the user gave it, or `<stdin>`).
    #[must_use]
    pub fn new(name: impl Into<Arc<str>>, text: impl Into<Arc<str>>) -> Self {
        Self { name: name.into(), text: text.into(), lines: Arc::default() }
    }

    /// The name it is known by.
    #[must_use]
    pub fn name(&self) -> &str {
        &self.name
    }

    /// Whether both are the same text, read at the same time.
    #[must_use]
    pub fn is(&self, other: &Self) -> bool {
        Arc::ptr_eq(&self.text, &other.text)
    }

    /// The whole text.
    #[must_use]
    pub fn text(&self) -> &str {
        &self.text
    }

    /// The text of a span; empty where the span lies outside or cuts a character.
    #[must_use]
    pub fn slice(&self, span: Span) -> &str {
        self.text.get(span.start()..span.end()).unwrap_or("")
    }

    /// The bytes of a line, counted from 1, without its end and without a byte order mark; empty behind the last line.
    #[must_use]
    pub fn line(&self, number: usize) -> Span {
        let lines = self.lines();
        let Some(start) = lines.get(number.saturating_sub(1)).copied() else {
            return Span::new(self.text.len(), self.text.len());
        };
        let end = lines.get(number).map_or(self.text.len(), |next| next - 1);
        let text = self.text.get(start..end).unwrap_or("");
        let end = end - usize::from(text.ends_with('\r'));
        let mark = if number <= 1 && text.starts_with('\u{feff}') { '\u{feff}'.len_utf8() } else { 0 };
        Span::new(start + mark, end)
    }

    fn lines(&self) -> &[usize] {
        self.lines.get_or_init(|| {
            let ends = self.text.bytes().enumerate().filter(|(_, byte)| *byte == b'\n');
            std::iter::once(0).chain(ends.map(|(at, _)| at + 1)).collect()
        })
    }

    /// Line and column of a byte; a byte behind the end is taken as the end.
    #[must_use]
    pub fn position(&self, offset: usize) -> Position {
        let offset = offset.min(self.text.len());
        let lines = self.lines();
        let line = lines.partition_point(|start| *start <= offset).max(1);
        let start = lines.get(line - 1).copied().unwrap_or(0);
        let before = self.text.as_bytes().get(start..offset).unwrap_or(&[]);
        // Counting the bytes that begin a character works within a cut character too.
        let mut column = before.iter().filter(|byte| (**byte & 0xC0) != 0x80).count() + 1;
        if start == 0 && before.starts_with(&[0xEF, 0xBB, 0xBF]) {
            column -= 1;
        }
        Position { line, column }
    }
}

impl fmt::Debug for Source {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(formatter, "Source({:?}, {} bytes)", self.name, self.text.len())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_line_is_given_without_its_end() {
        let source = Source::new("x", "\u{feff}ab\r\nµ2\n");
        let line = |number| source.slice(source.line(number)).to_owned();
        assert_eq!([line(1), line(2), line(3), line(4)], ["ab", "µ2", "", ""]);
        assert_eq!(source.line(2), Span::new(7, 10));
        assert_eq!(Source::new("x", "").line(1), Span::new(0, 0));
    }

    #[test]
    fn a_position_counts_characters_and_line_feeds_and_not_the_byte_order_mark() {
        let source = Source::new("x", "\u{feff}ab\r\nµ2\n");
        assert_eq!(source.position(3), Position { line: 1, column: 1 });
        assert_eq!(source.position(7), Position { line: 2, column: 1 });
        assert_eq!(source.position(9), Position { line: 2, column: 2 });
        assert_eq!(source.position(999), Position { line: 3, column: 1 });
    }
}
