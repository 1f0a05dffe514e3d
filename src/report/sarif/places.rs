//! Places in a text by lines, characters and bytes, for as many places as a text has.

use super::log::Region;
use crate::source::{Source, Span};

/// After how many bytes the characters ahead are written down.
const STRIDE: usize = 4096;

const MARK: char = '\u{feff}';

/// Where the lines and characters of a text are. A lookup costs the same however long a line or a text is.
#[derive(Debug)]
pub(super) struct Places {
    source: Source,
    /// The byte at which each line begins; the first begins behind a byte order mark.
    lines: Vec<usize>,
    /// How many characters begin ahead of each multiple of [`STRIDE`].
    counts: Vec<usize>,
    /// Whether the text is that of the file, byte for byte.
    is_exact: bool,
}

impl Places {
    pub(super) fn of(source: &Source) -> Self {
        let text = source.text();
        let mark = if text.starts_with(MARK) { MARK.len_utf8() } else { 0 };
        let ends = text.bytes().enumerate().filter(|(_, byte)| *byte == b'\n');
        let lines = std::iter::once(mark).chain(ends.map(|(at, _)| at + 1)).collect();
        let mut counts = Vec::with_capacity(text.len() / STRIDE + 1);
        let mut count = 0;
        for chunk in text.as_bytes().chunks(STRIDE) {
            counts.push(count);
            count += characters(chunk);
        }
        // The end of a text whose length is a multiple of the stride begins a block of its own.
        counts.push(count);
        // What was no UTF-8 was replaced, so that bytes behind it lie elsewhere in the file.
        let is_exact = !text.contains('\u{fffd}');
        Self { source: source.clone(), lines, counts, is_exact }
    }

    /// The text, where it is that of the file byte for byte.
    pub(super) fn exact_text(&self) -> Option<&str> {
        self.is_exact.then(|| self.source.text())
    }

    /// How many characters begin ahead of a byte, a byte order mark not counted.
    fn characters_before(&self, byte: usize) -> usize {
        let block = byte / STRIDE;
        let counted = self.counts.get(block).copied().unwrap_or(0);
        let rest = self.source.text().as_bytes().get(block * STRIDE..byte).unwrap_or(&[]);
        let mark = usize::from(self.source.text().starts_with(MARK) && byte > 0);
        counted + characters(rest) - mark
    }

    /// A place, drawn in to the text and to whole characters.
    pub(super) fn region(&self, span: Span) -> Region {
        let text = self.source.text();
        let first = self.lines.first().copied().unwrap_or(0);
        let inside = |byte: usize| {
            let byte = byte.clamp(first, text.len());
            (byte..=text.len()).find(|at| text.is_char_boundary(*at)).unwrap_or(text.len())
        };
        let (start, end) = (inside(span.start()), inside(span.end()));
        let (start_line, start_column) = self.position(start);
        let (end_line, end_column) = self.position(end);
        let char_offset = self.characters_before(start);
        Region {
            start_line,
            start_column,
            end_line,
            end_column,
            char_offset,
            char_length: self.characters_before(end) - char_offset,
            byte_offset: self.is_exact.then_some(start),
            byte_length: self.is_exact.then_some(end - start),
        }
    }

    /// Line and column of a byte, from 1.
    fn position(&self, byte: usize) -> (usize, usize) {
        let line = self.lines.partition_point(|start| *start <= byte).max(1);
        let start = self.lines.get(line - 1).copied().unwrap_or(0);
        (line, self.characters_before(byte) - self.characters_before(start) + 1)
    }
}

/// How many characters begin in some bytes.
fn characters(bytes: &[u8]) -> usize {
    bytes.iter().filter(|byte| (**byte & 0xC0) != 0x80).count()
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    fn numbers(text: &str, start: usize, end: usize) -> [usize; 6] {
        let region = Places::of(&Source::new("x", text)).region(Span::new(start, end));
        let Region { start_line, start_column, end_line, end_column, char_offset, char_length, .. } = region;
        [start_line, start_column, end_line, end_column, char_offset, char_length]
    }

    #[test]
    fn columns_and_characters_leave_out_the_byte_order_mark_and_bytes_count_it() {
        let text = "\u{feff}ab\r\nµ2\n";
        assert_eq!(numbers(text, 3, 5), [1, 1, 1, 3, 0, 2]);
        assert_eq!(numbers(text, 7, 10), [2, 1, 2, 3, 4, 2]);
        let region = Places::of(&Source::new("x", text)).region(Span::new(9, 10));
        assert_eq!((region.byte_offset, region.byte_length, region.start_column), (Some(9), Some(1), 2));
    }

    #[test]
    fn a_place_outside_or_within_a_character_is_drawn_in() {
        assert_eq!(numbers("\u{feff}é", 0, 99), [1, 1, 1, 2, 0, 1]);
        assert_eq!(numbers("é", 1, 1), [1, 2, 1, 2, 1, 0]);
        assert_eq!(numbers("", 5, 9), [1, 1, 1, 1, 0, 0]);
    }

    #[test]
    fn bytes_of_a_replaced_text_are_not_told() {
        let region = Places::of(&Source::new("x", "a\u{fffd}b")).region(Span::new(4, 5));
        assert_eq!((region.byte_offset, region.byte_length, region.char_offset), (None, None, 2));
    }

    #[test]
    fn the_end_of_a_text_as_long_as_a_stride_is_a_place_like_others() {
        let text = "a".repeat(STRIDE);
        assert_eq!(numbers(&text, STRIDE, STRIDE), [1, STRIDE + 1, 1, STRIDE + 1, STRIDE, 0]);
        assert_eq!(numbers(&text, 1, STRIDE), [1, 2, 1, STRIDE + 1, 1, STRIDE - 1]);
    }

    proptest! {
        #[test]
        fn a_region_names_the_same_characters_thrice(
            before in "\u{feff}?(?s)[aé😀\r\n]{0,30}", long in 0_usize..3, within in "[aé😀\n]{0,9}", after in "[aé\n]{0,5}"
        ) {
            let before = before + &"é".repeat(long * STRIDE);
            let text = format!("{before}{within}{after}");
            let source = Source::new("x", text.as_str());
            let span = Span::new(before.len(), before.len() + within.len());
            let region = Places::of(&source).region(span);
            let start = source.position(span.start());
            prop_assert_eq!((region.start_line, region.start_column), (start.line, start.column));
            let end = source.position(span.end());
            prop_assert_eq!((region.end_line, region.end_column), (end.line, end.column));
            let shown: String =
                text.trim_start_matches('\u{feff}').chars().skip(region.char_offset).take(region.char_length).collect();
            prop_assert_eq!(&shown, &within);
            let (at, length) = (region.byte_offset.unwrap(), region.byte_length.unwrap());
            prop_assert_eq!(&text[at..at + length], &within);
        }
    }
}
