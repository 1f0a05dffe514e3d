//! The layout of nested lists (`.kicad_sch`).
//!
//! A placed symbol is a list `symbol` right inside the list of the sheet, with its id in `uuid` and its reference in a
//! `property` right inside it. The symbols of the library stand one level deeper, and pins have ids of their own.

use super::symbols::Symbols;
use crate::source::Span;

/// A symbol that has not ended.
#[derive(Debug)]
struct Open<'t> {
    /// Its bracket and head.
    start: Span,
    id: Option<&'t str>,
    reference: Option<Span>,
}

/// A list right inside a symbol.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Inner {
    Other,
    Id,
    Property,
    Reference,
}

/// One walk over the text; nothing is kept of what is nested deeper, so that no depth does harm.
#[derive(Debug)]
struct Walk<'t> {
    depth: usize,
    /// Where the innermost list begins.
    opened: usize,
    /// Texts met in it; none once a list inside it has ended.
    texts: Option<usize>,
    is_sheet: bool,
    symbol: Option<Open<'t>>,
    inner: Inner,
}

/// Notes every placed symbol; whether the sheet is whole.
pub(super) fn read(text: &str, start: usize, symbols: &mut Symbols) -> bool {
    let bytes = text.as_bytes();
    let mut walk = Walk { depth: 0, opened: 0, texts: None, is_sheet: false, symbol: None, inner: Inner::Other };
    let mut at = start;
    while let Some(byte) = bytes.get(at) {
        match byte {
            b' ' | b'\t' | b'\r' | b'\n' => at += 1,
            b'(' => {
                walk.open(at);
                at += 1;
            }
            b')' => {
                at += 1;
                if !walk.close(symbols) {
                    return false;
                }
            }
            _ => {
                let Some(end) = end_of_text(bytes, at) else { return false };
                walk.text(text.get(at..end).unwrap_or(""), Span::new(at, end));
                at = end;
            }
        }
    }
    walk.is_sheet && walk.depth == 0
}

/// The byte behind the text that begins at `start`; none where its quote is not closed.
fn end_of_text(bytes: &[u8], start: usize) -> Option<usize> {
    let quoted = bytes.get(start) == Some(&b'"');
    let mut at = start + usize::from(quoted);
    loop {
        match bytes.get(at) {
            Some(b'"') if quoted => return Some(at + 1),
            Some(b'\\') if quoted => at += 2,
            Some(b' ' | b'\t' | b'\r' | b'\n' | b'(' | b')') if !quoted => return Some(at),
            Some(_) => at += 1,
            None => return (!quoted).then_some(at),
        }
    }
}

impl<'t> Walk<'t> {
    fn open(&mut self, at: usize) {
        self.depth += 1;
        self.opened = at;
        self.texts = Some(0);
        if self.depth == 3 {
            self.inner = Inner::Other;
        }
    }

    /// Ends the innermost list; false where none is open.
    fn close(&mut self, symbols: &mut Symbols) -> bool {
        let Some(depth) = self.depth.checked_sub(1) else { return false };
        self.depth = depth;
        self.texts = None;
        if depth == 1
            && let Some(Open { start, id: Some(id), reference }) = self.symbol.take()
        {
            symbols.add(id, reference.unwrap_or(start));
        }
        true
    }

    fn text(&mut self, text: &'t str, span: Span) {
        let Some(before) = self.texts else { return };
        self.texts = Some(before + 1);
        match (self.depth, before) {
            (1, 0) => self.is_sheet = text == "kicad_sch",
            (2, 0) if self.is_sheet && text == "symbol" => {
                let start = Span::new(self.opened, span.end());
                self.symbol = Some(Open { start, id: None, reference: None });
            }
            (3, 0) => {
                self.inner = match text {
                    "uuid" => Inner::Id,
                    "property" => Inner::Property,
                    _ => Inner::Other,
                };
            }
            (3, _) => self.inside(before, text, span),
            _ => {}
        }
    }

    /// A text behind the head of a list right inside a symbol.
    fn inside(&mut self, before: usize, text: &'t str, span: Span) {
        let Some(symbol) = &mut self.symbol else { return };
        match (self.inner, before) {
            (Inner::Id, 1) => {
                symbol.id.get_or_insert(unquoted(text));
            }
            (Inner::Property, 1) if unquoted(text) == "Reference" => self.inner = Inner::Reference,
            (Inner::Reference, 2) => {
                symbol.reference.get_or_insert(span);
            }
            _ => {}
        }
    }
}

fn unquoted(text: &str) -> &str {
    text.strip_prefix('"').and_then(|text| text.strip_suffix('"')).unwrap_or(text)
}
