//! The older layout of lines (`.sch`).
//!
//! A symbol stands between `$Comp` and `$EndComp`; the fourth word of its line `U` is its id, and the line `F 0` holds
//! its reference in quotes.

use super::symbols::Symbols;
use crate::source::Span;

/// How a sheet of this layout begins.
pub(super) const FIRST: &str = "EESchema Schematic File";
/// Its last line; spelled so.
const LAST: &str = "$EndSCHEMATC";

/// A symbol that has not ended.
#[derive(Debug)]
struct Open<'t> {
    start: Span,
    id: Option<&'t str>,
    reference: Option<Span>,
}

/// Notes every placed symbol; whether the sheet is whole.
pub(super) fn read(text: &str, start: usize, symbols: &mut Symbols) -> bool {
    let mut symbol: Option<Open<'_>> = None;
    let mut ended = false;
    let mut next = start;
    for line in text.get(start..).unwrap_or("").split_inclusive('\n') {
        let at = next;
        next += line.len();
        let line = line.trim_end();
        match line {
            "$Comp" => symbol = Some(Open { start: Span::new(at, at + line.len()), id: None, reference: None }),
            "$EndComp" => {
                if let Some(Open { start, id: Some(id), reference }) = symbol.take() {
                    symbols.add(id, reference.unwrap_or(start));
                }
            }
            LAST => ended = true,
            _ => {
                if let Some(symbol) = &mut symbol {
                    inside(symbol, line, at);
                }
            }
        }
    }
    ended && symbol.is_none()
}

fn inside<'t>(symbol: &mut Open<'t>, line: &'t str, at: usize) {
    if line.starts_with("U ") {
        symbol.id = symbol.id.or(line.split_ascii_whitespace().nth(3));
    } else if line.starts_with("F 0 ") && symbol.reference.is_none() {
        symbol.reference = quoted(line).map(|span| span.shifted(at));
    }
}

/// The first text in quotes, with them.
fn quoted(line: &str) -> Option<Span> {
    let start = line.find('"')?;
    let length = line.get(start + 1..)?.find('"')?;
    Some(Span::new(start, start + length + 2))
}
