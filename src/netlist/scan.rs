//! Cuts an S-expression export into islands and hands each to the parser.
//!
//! The parser reads a bare atom as a number where it can, takes a semicolon for a comment and splits at every blank
//! of Unicode. So each island is rewritten while it is scanned: every atom quoted, line-end escapes resolved, blanks
//! left out. What comes out of the parser is then every atom exactly as written.

use std::ops::ControlFlow;

use sexp::Sexp;

use super::atoms::{quote, resolve_line_ends, separates};
use super::island::{Island, Kind, Met, Place, Section, Sink, opens_outside};
use super::limits::Limits;
use crate::source::{Problem, Source, Span};

const EXPORT_AGAIN: &str = "export the netlist again from the schematic editor";

/// The island being scanned.
struct Open {
    kind: Kind,
    start: usize,
    depth: usize,
    items: usize,
    /// Texts met in the innermost of the lists right inside the island.
    texts: usize,
    damage: Option<Problem>,
}

/// One walk over the bytes.
pub(super) struct Scanner<'a, S> {
    source: &'a Source,
    text: &'a str,
    limits: &'a Limits,
    sink: &'a mut S,
    at: usize,
    outer: Vec<Section>,
    met: Met,
    open: Option<Open>,
    rewritten: String,
    places: Vec<Place>,
    started: bool,
    stopped: bool,
    damaged: bool,
    trailing: bool,
}

impl<'a, S: Sink> Scanner<'a, S> {
    pub(super) fn new(source: &'a Source, limits: &'a Limits, sink: &'a mut S) -> Self {
        let text = source.text();
        Self {
            source,
            text,
            limits,
            sink,
            at: if text.starts_with('\u{feff}') { '\u{feff}'.len_utf8() } else { 0 },
            outer: Vec::new(),
            met: Met::default(),
            open: None,
            rewritten: String::new(),
            places: Vec::new(),
            started: false,
            stopped: false,
            damaged: false,
            trailing: false,
        }
    }

    /// Walks to the end, or to the limit that was passed.
    pub(super) fn run(mut self) {
        let bytes = self.text.as_bytes();
        while let Some(byte) = bytes.get(self.at) {
            match byte {
                b' ' | b'\t' | b'\r' | b'\n' => {
                    self.at += 1;
                    continue;
                }
                b'(' => self.open_list(),
                b')' => self.close_list(),
                b'"' => self.quoted(),
                _ => self.bare(),
            }
            if self.stopped {
                return;
            }
        }
        self.finish();
    }

    fn slice(&self, start: usize, end: usize) -> &'a str {
        self.text.get(start..end).unwrap_or("")
    }

    /// The bare word that follows the bracket at `at`.
    fn head(&self) -> &'a str {
        let rest = self.text.get(self.at + 1..).unwrap_or("");
        let rest = rest.trim_start_matches([' ', '\t', '\r', '\n']);
        let end = rest.bytes().position(|byte| separates(byte) || byte == b'"').unwrap_or(rest.len());
        rest.get(..end).unwrap_or("")
    }

    fn stop(&mut self, problem: Problem) {
        self.sink.problem(problem);
        self.stopped = true;
    }

    fn damage(&mut self, problem: Problem) {
        self.damaged = true;
        self.sink.problem(problem);
    }

    fn open_list(&mut self) {
        let depth = self.outer.len() + self.open.as_ref().map_or(0, |open| open.depth);
        if depth >= self.limits.depth {
            let problem = Problem::error(format!("lists nest more than {} deep", self.limits.depth))
                .at(self.source, self.at..self.at + 1, "one level too many")
                .help("an export nests 8 deep: this is damaged or no netlist; export it again");
            self.stop(problem);
            return;
        }
        if let Some(open) = &self.open {
            // Heads that matter here begin with one of three letters: cheaper to look at than to read every head.
            let may_break = matches!(self.text.as_bytes().get(self.at + 1), Some(b'c' | b'l' | b'n'));
            if !(may_break && opens_outside(self.head())) {
                self.open_inside();
                return;
            }
            let (kind, start) = (open.kind, open.start);
            let unclosed = self.unclosed(kind, start);
            self.abandon(unclosed);
        }
        self.open_outside();
    }

    fn unclosed(&self, kind: Kind, start: usize) -> Problem {
        Problem::error(format!("a {} is not closed: a closing bracket is missing", kind.noun()))
            .at(self.source, start..self.at, "it runs into what follows")
            .help(format!("this {} was left out; {EXPORT_AGAIN}", kind.noun()))
    }

    /// Drops the island being scanned, for the first reason that was found.
    fn abandon(&mut self, reason: Problem) {
        if let Some(open) = self.open.take() {
            self.sink.abandon();
            self.damage(open.damage.unwrap_or(reason));
        }
    }

    fn open_inside(&mut self) {
        let at = self.at;
        if let Some(open) = &mut self.open {
            open.depth += 1;
            open.items += 1;
            if open.depth == 2 {
                open.texts = 0;
                self.places.push(Place { whole: Span::new(at, at), value: Span::new(at, at) });
            }
            if open.items > self.limits.items {
                let kind = open.kind;
                self.too_many_items(kind);
                return;
            }
        }
        self.rewritten.push('(');
        self.at += 1;
    }

    fn too_many_items(&mut self, kind: Kind) {
        let problem =
            Problem::error(format!("a {} holds more than {} texts and lists", kind.noun(), self.limits.items))
                .at(self.source, self.at..self.at + 1, "reading stopped here")
                .help("this is damaged or no netlist; export it again");
        self.stop(problem);
    }

    fn open_outside(&mut self) {
        let head = self.head();
        let around = self.outer.last().copied();
        if let Some(kind) = Kind::of(head, around) {
            if kind.is_entry() && matches!(around, None | Some(Section::Export)) {
                self.stray(kind);
            }
            self.rewritten.clear();
            self.places.clear();
            let open = Open { kind, start: self.at, depth: 0, items: 0, texts: 0, damage: None };
            self.open = Some(open);
            self.open_inside();
            return;
        }
        let section = Section::of(head);
        match section {
            Section::Export if self.started => {
                let problem = Problem::error("a second netlist begins in the same file")
                    .at(self.source, self.at..self.at + 1 + head.len(), "it was not read")
                    .help("give each netlist a file of its own");
                self.stop(problem);
                return;
            }
            Section::Export => self.started = true,
            section if section.is_main() && around != Some(Section::Export) => self.misplaced(head),
            Section::Other if around.is_some_and(Section::holds_islands) => self.unknown(head),
            // A section that is not known is passed over; what has no name may be any, with its entries.
            Section::Other if around == Some(Section::Export) && head.is_empty() => self.unnamed(),
            _ => {}
        }
        self.met.note(section);
        self.outer.push(section);
        self.at += 1;
    }

    /// An island outside its section: told once, since one bracket too many moves all that follow.
    fn stray(&mut self, kind: Kind) {
        if !self.damaged {
            let problem = Problem::error(format!("a {} stands outside its section", kind.noun()))
                .at(self.source, self.at..self.at + 1, "a closing bracket too many stands before this")
                .help(EXPORT_AGAIN);
            self.damage(problem);
        }
    }

    /// A section inside another: the one around it was never closed.
    fn misplaced(&mut self, head: &str) {
        if !self.damaged {
            let problem = Problem::error(format!("`{head}` stands in the wrong place: brackets do not pair up"))
                .at(
                    self.source,
                    self.at..self.at + 1 + head.len(),
                    "a closing bracket is missing or too many before this",
                )
                .help(EXPORT_AGAIN);
            self.damage(problem);
        }
        self.outer.truncate(1);
    }

    fn unnamed(&mut self) {
        let problem = Problem::error("a list without a name stands among the sections of the netlist")
            .at(self.source, self.at..self.at + 1, "brackets do not pair up before this; left out")
            .help(EXPORT_AGAIN);
        self.damage(problem);
    }

    fn unknown(&mut self, head: &str) {
        let problem = Problem::error("a list of an unknown kind stands among components, library parts or nets")
            .at(self.source, self.at..self.at + 1 + head.len(), "expected `comp`, `libpart` or `net`; left out")
            .help(EXPORT_AGAIN);
        self.damage(problem);
    }

    fn close_list(&mut self) {
        self.at += 1;
        let at = self.at;
        let Some(open) = &mut self.open else {
            if self.outer.pop().is_none() && !self.damaged {
                let problem = Problem::error("a closing bracket too many")
                    .at(self.source, at - 1..at, "nothing is open here")
                    .help(EXPORT_AGAIN);
                self.damage(problem);
            }
            return;
        };
        self.rewritten.push(')');
        if open.depth == 2
            && let Some(place) = self.places.last_mut()
        {
            place.whole = Span::new(place.whole.start(), at);
        }
        open.depth -= 1;
        if open.depth == 0 {
            self.close_island();
        } else if open.depth == 1 && open.kind == Kind::Net && self.rewritten.len() > self.limits.piece {
            self.cut_net();
        }
    }

    fn close_island(&mut self) {
        let Some(mut open) = self.open.take() else { return };
        match open.damage.take() {
            None => self.hand_over(&open, true),
            Some(damage) => {
                self.sink.abandon();
                self.damage(damage);
            }
        }
    }

    /// Hands over what was met of a long net so far.
    fn cut_net(&mut self) {
        let Some(open) = self.open.take() else { return };
        self.rewritten.push(')');
        if open.damage.is_none() {
            self.hand_over(&open, false);
        }
        self.open = Some(open);
        self.rewritten.clear();
        self.rewritten.push_str("(net");
        self.places.clear();
    }

    fn hand_over(&mut self, open: &Open, ends: bool) {
        let span = Span::new(open.start, self.at);
        match sexp::parse(&self.rewritten) {
            Ok(Sexp::List(items)) => {
                let island = Island { kind: open.kind, ends, span, places: &self.places, items };
                if let ControlFlow::Break(problem) = self.sink.island(island) {
                    self.stop(problem);
                }
            }
            // A scanned island is balanced, so the parser has no reason to refuse it.
            Ok(Sexp::Atom(_)) | Err(_) => {
                let problem = Problem::error(format!("a {} cannot be parsed", open.kind.noun()))
                    .at(self.source, span, "left out")
                    .help(EXPORT_AGAIN);
                self.damage(problem);
            }
        }
    }

    /// Notes an atom at `start..at`; false where none is wanted because no island is open.
    fn atom(&mut self, start: usize) -> bool {
        let Some(open) = &mut self.open else {
            if self.outer.is_empty() && !self.trailing {
                self.trailing = true;
                let problem = Problem::warning("text outside the brackets is passed over").at(
                    self.source,
                    start..self.at,
                    "not part of the netlist",
                );
                self.sink.problem(problem);
            }
            return false;
        };
        open.items += 1;
        if open.depth == 2 {
            if open.texts == 1
                && let Some(place) = self.places.last_mut()
            {
                place.value = Span::new(start, self.at);
            }
            open.texts += 1;
        }
        if open.items > self.limits.items {
            let kind = open.kind;
            self.too_many_items(kind);
            return false;
        }
        true
    }

    fn bare(&mut self) {
        let start = self.at;
        let rest = self.text.as_bytes().get(start..).unwrap_or(&[]);
        let mut plain = true;
        let mut length = rest.len();
        for (at, byte) in rest.iter().enumerate() {
            if separates(*byte) {
                length = at;
                break;
            }
            plain &= !matches!(byte, b'"' | b'\\');
        }
        self.at += length;
        if !self.atom(start) {
            return;
        }
        let atom = self.slice(start, self.at);
        quote(atom, plain, &mut self.rewritten);
    }

    fn quoted(&mut self) {
        let start = self.at;
        let Some((end, line_escapes)) = self.closing_quote(start) else { return };
        self.at = end;
        if !self.atom(start) {
            return;
        }
        let atom = self.slice(start, end);
        if line_escapes { resolve_line_ends(atom, &mut self.rewritten) } else { self.rewritten.push_str(atom) }
    }

    /// The end of the quoted atom at `start`, and whether it has escapes that the parser would leave alone. Where the
    /// quote is not closed, notes that and goes on behind its line, so that one quote does not swallow the file.
    fn closing_quote(&mut self, start: usize) -> Option<(usize, bool)> {
        let bytes = self.text.as_bytes();
        let (mut at, mut line_escapes, mut line_end) = (start + 1, false, None);
        loop {
            match bytes.get(at) {
                None => break,
                Some(b'"') => {
                    if bytes.get(at + 1).is_none_or(|byte| separates(*byte)) {
                        return Some((at + 1, line_escapes));
                    }
                    break;
                }
                Some(b'\\') => {
                    line_escapes |= matches!(bytes.get(at + 1), Some(b'n' | b'r'));
                    at += 2;
                }
                Some(b'\n') => {
                    line_end = line_end.or(Some(at));
                    at += 1;
                }
                Some(_) => at += 1,
            }
        }
        let at_end = bytes.get(at).is_none();
        let resume = line_end.unwrap_or(if at_end { bytes.len() } else { at + 1 });
        let problem = Problem::error("a quote is not closed")
            .at(self.source, start..start + 1, "opened here, and text follows the next quote without a blank")
            .help(format!("what holds this text was left out; {EXPORT_AGAIN}"));
        self.at = resume;
        if at_end && line_end.is_none() {
            // The file ends inside this text: `finish` says so.
            return None;
        }
        match &mut self.open {
            Some(open) => open.damage = open.damage.take().or(Some(problem)),
            None => self.damage(problem),
        }
        None
    }

    fn finish(&mut self) {
        let end = self.text.len();
        let last = self.text.char_indices().next_back().map_or(end, |(at, _)| at);
        if let Some(open) = self.open.take() {
            self.sink.abandon();
            let noun = open.kind.noun();
            let problem = Problem::error(format!("the file ends inside a {noun}"))
                .at(self.source, last..end, format!("the {noun} that began before this is not complete"))
                .help(format!("everything before it was read; {EXPORT_AGAIN}"));
            if let Some(damage) = open.damage {
                self.damage(damage);
            }
            self.damage(problem);
        } else if !self.outer.is_empty() && !self.damaged {
            let problem = Problem::error(format!("the file ends with {} lists still open", self.outer.len()))
                .at(self.source, last..end, "something is missing behind this")
                .help(format!("everything before it was read; {EXPORT_AGAIN}"));
            self.damage(problem);
        } else if let Some(problem) = self.met.missing() {
            self.damage(problem);
        }
    }
}
