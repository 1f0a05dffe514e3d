//! The lines of a text that a diagnostic shows: made harmless, and cut where they are too long to be read.

use miette::{LabeledSpan, MietteError, MietteSpanContents, SourceCode, SourceSpan, SpanContents};

use super::inert::{inert, visible};
use crate::source::{Source, Span};

/// Most characters of a line that are shown.
const MOST_CHARACTERS: usize = 90;
/// Characters shown ahead of a place in a line that is cut.
const AHEAD: usize = 24;
/// Most characters of a label.
const LABEL: usize = 120;

/// A place in a text with a few words about it.
#[derive(Debug, Clone)]
pub(super) struct Mark {
    pub(super) span: Span,
    pub(super) label: String,
}

/// The lines around some marks.
#[derive(Debug)]
pub(super) struct Excerpt {
    name: String,
    text: String,
    lines: Vec<Line>,
    labels: Vec<LabeledSpan>,
    /// The column in the source, from 0, of each label by its offset in the excerpt.
    columns: Vec<(usize, usize)>,
}

/// A line of the excerpt.
#[derive(Debug)]
struct Line {
    /// Its bytes in the excerpt's text, line feed included.
    start: usize,
    end: usize,
    /// Its number in the source, from 0.
    number: usize,
}

impl Excerpt {
    /// The lines of `source` that hold the marks. The first mark is the main one: its line and column head the
    /// excerpt.
    pub(super) fn new(source: &Source, marks: &[Mark]) -> Self {
        let mut excerpt = Self {
            name: inert(source.name()).into_owned(),
            text: String::new(),
            lines: Vec::new(),
            labels: Vec::new(),
            columns: Vec::new(),
        };
        let mut placed: Vec<(usize, &Mark, bool)> = marks
            .iter()
            .enumerate()
            .map(|(index, mark)| (source.position(mark.span.start()).line, mark, index == 0))
            .collect();
        placed.sort_by_key(|(line, mark, main)| (*line, mark.span.start(), !*main));
        let mut rest = placed.as_slice();
        while let Some((line, ..)) = rest.first() {
            let count = rest.iter().take_while(|(other, ..)| other == line).count();
            let (here, behind) = rest.split_at(count);
            excerpt.add_line(source, *line, here);
            rest = behind;
        }
        excerpt
    }

    fn add_line(&mut self, source: &Source, number: usize, marks: &[(usize, &Mark, bool)]) {
        let Some((_, first, _)) = marks.first() else { return };
        let (start, end) = (source.line(number).start(), source.line(number).end());
        let line = source.slice(source.line(number));
        let cut = Cut::new(line, first.span.start().saturating_sub(start));
        let base = self.text.len();
        if cut.from > 0 {
            self.text.push('…');
        }
        let mut offsets: Vec<(usize, usize)> = Vec::new();
        for (at, sign) in line.get(cut.from..cut.to).unwrap_or("").char_indices() {
            offsets.push((start + cut.from + at, self.text.len()));
            self.text.push(visible(sign));
        }
        let shown_end = self.text.len();
        if cut.to < line.len() {
            self.text.push('…');
        }
        self.text.push('\n');
        // A byte of the source to its place in the excerpt; what was cut away lies at the nearer end.
        let place = |byte: usize| {
            let at = offsets.partition_point(|(from, _)| *from < byte);
            offsets.get(at).map_or(shown_end, |(_, to)| *to)
        };
        for (_, mark, main) in marks {
            let from = place(mark.span.start());
            let to = place(mark.span.end().min(end)).max(from);
            let label = super::inert::inert_short(&mark.label, LABEL);
            let label = Some(label).filter(|label| !label.is_empty());
            let span = SourceSpan::new(from.into(), to - from);
            self.columns.push((from, source.position(mark.span.start()).column - 1));
            self.labels.push(if *main {
                LabeledSpan::new_primary_with_span(label, span)
            } else {
                LabeledSpan::new_with_span(label, span)
            });
        }
        self.lines.push(Line { start: base, end: self.text.len(), number: number - 1 });
    }

    pub(super) fn labels(&self) -> impl Iterator<Item = LabeledSpan> + '_ {
        self.labels.iter().cloned()
    }
}

/// The part of a line that is shown, in bytes of it.
struct Cut {
    from: usize,
    to: usize,
}

impl Cut {
    /// The whole line where it is short enough; else the part around `at`.
    fn new(line: &str, at: usize) -> Self {
        if line.char_indices().nth(MOST_CHARACTERS).is_none() {
            return Self { from: 0, to: line.len() };
        }
        let at = (0..=at.min(line.len())).rev().find(|at| line.is_char_boundary(*at)).unwrap_or(0);
        let (before, behind) = line.split_at(at);
        let from = match before.char_indices().nth_back(AHEAD) {
            Some((from, _)) => from,
            None => 0,
        };
        let shown = before.get(from..).map_or(0, |text| text.chars().count());
        let to = behind.char_indices().nth(MOST_CHARACTERS - shown).map_or(line.len(), |(length, _)| at + length);
        Self { from, to }
    }
}

impl SourceCode for Excerpt {
    fn read_span<'a>(
        &'a self,
        span: &SourceSpan,
        _before: usize,
        _after: usize,
    ) -> Result<Box<dyn SpanContents<'a> + 'a>, MietteError> {
        let (from, to) = (span.offset(), span.offset() + span.len());
        let first = self.lines.iter().position(|line| from < line.end).ok_or(MietteError::OutOfBounds)?;
        let last = self.lines.iter().rposition(|line| line.start < to).unwrap_or(first).max(first);
        let lines = self.lines.get(first..=last).ok_or(MietteError::OutOfBounds)?;
        let (Some(one), Some(other)) = (lines.first(), lines.last()) else { return Err(MietteError::OutOfBounds) };
        // Lines that are not neighbours are shown apart.
        if other.number - one.number != last - first {
            return Err(MietteError::OutOfBounds);
        }
        let data = self.text.as_bytes().get(one.start..other.end).ok_or(MietteError::OutOfBounds)?;
        let column = self.columns.iter().find(|(offset, _)| *offset == from).map_or(0, |(_, column)| *column);
        let span = SourceSpan::new(one.start.into(), data.len());
        let name = self.name.clone();
        Ok(Box::new(MietteSpanContents::new_named(name, data, span, one.number, column, lines.len())))
    }
}
