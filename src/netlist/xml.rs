//! Cuts the XML form of an export into islands and hands each to the XML parser.
//!
//! The scan refuses what makes XML dangerous before the parser sees any of it: document types (and with them
//! entities), deep nesting, floods of attributes. An island then becomes the same nested lists that the
//! S-expression form gives: `<comp ref="C1"><value>10u</value></comp>` is `(comp (ref "C1") (value "10u"))`.

use std::ops::ControlFlow;

use roxmltree::{Document, ParsingOptions};
use sexp::Sexp;

use super::island::{Island, Kind, Met, Place, Section, Sink, opens_outside};
use super::limits::Limits;
use super::xml_tree::{atom, items, places};
use crate::source::{Problem, Source, Span};

const EXPORT_AGAIN: &str = "export the netlist again from the schematic editor";

/// One walk over the tags.
pub(super) struct XmlScanner<'a, S> {
    source: &'a Source,
    text: &'a str,
    limits: &'a Limits,
    sink: &'a mut S,
    at: usize,
    outer: Vec<&'a str>,
    met: Met,
    open: Option<Open>,
    started: bool,
    stopped: bool,
    damaged: bool,
}

/// The island being scanned.
struct Open {
    kind: Kind,
    start: usize,
    depth: usize,
    items: usize,
}

/// A tag as the scan sees it.
struct Tag<'a> {
    name: &'a str,
    start: usize,
    closing: bool,
    empty: bool,
    attributes: usize,
}

impl<'a, S: Sink> XmlScanner<'a, S> {
    pub(super) fn new(source: &'a Source, limits: &'a Limits, sink: &'a mut S) -> Self {
        Self {
            source,
            text: source.text(),
            limits,
            sink,
            at: 0,
            outer: Vec::new(),
            met: Met::default(),
            open: None,
            started: false,
            stopped: false,
            damaged: false,
        }
    }

    /// Walks to the end, or to what must not be read.
    pub(super) fn run(mut self) {
        while let Some(ahead) = self.rest().find('<') {
            self.at += ahead;
            let start = self.at;
            let rest = self.rest();
            let ended = if rest.starts_with("<!--") {
                self.skip_to("-->")
            } else if rest.starts_with("<![CDATA[") {
                self.skip_to("]]>")
            } else if rest.starts_with("<?") {
                self.skip_to("?>")
            } else if rest.starts_with("<!") {
                let problem = Problem::error("a document type is not allowed")
                    .at(self.source, start..start + 2, "a netlist export has none")
                    .help(EXPORT_AGAIN);
                self.stop(problem);
                false
            } else {
                self.tag()
            };
            if self.stopped {
                return;
            }
            if !ended {
                break;
            }
        }
        self.finish();
    }

    fn rest(&self) -> &'a str {
        self.text.get(self.at..).unwrap_or("")
    }

    fn stop(&mut self, problem: Problem) {
        self.sink.problem(problem);
        self.stopped = true;
    }

    fn damage(&mut self, problem: Problem) {
        self.damaged = true;
        self.sink.problem(problem.help(EXPORT_AGAIN));
    }

    fn skip_to(&mut self, end: &str) -> bool {
        match self.rest().find(end) {
            Some(ahead) => {
                self.at += ahead + end.len();
                true
            }
            None => false,
        }
    }

    /// Reads the tag at `at`; false where the file ends inside it.
    fn tag(&mut self) -> bool {
        let start = self.at;
        let bytes = self.rest().as_bytes();
        let closing = bytes.get(1) == Some(&b'/');
        let from = if closing { 2 } else { 1 };
        let name = bytes.iter().skip(from).take_while(|byte| !ends_name(**byte)).count();
        let name = self.text.get(start + from..start + from + name).unwrap_or("");
        let (mut at, mut quote, mut attributes) = (from + name.len(), None, 0);
        loop {
            match (bytes.get(at), quote) {
                (None, _) => return false,
                // No attribute may hold this sign: the tag before it is broken.
                (Some(b'<'), _) => {
                    self.at = start + at;
                    self.broken_tag(start);
                    return true;
                }
                (Some(byte), Some(open)) if *byte == open => quote = None,
                (Some(_), Some(_)) => {}
                (Some(byte @ (b'"' | b'\'')), None) => quote = Some(*byte),
                (Some(b'='), None) => attributes += 1,
                (Some(b'>'), None) => break,
                (Some(_), None) => {}
            }
            at += 1;
        }
        self.at = start + at + 1;
        let empty = !closing && bytes.get(at - 1) == Some(&b'/');
        self.take(&Tag { name, start, closing, empty, attributes });
        true
    }

    fn broken_tag(&mut self, start: usize) {
        let label = if self.open.take().is_some() { "what holds this tag was left out" } else { "passed over" };
        let problem = Problem::error("a tag is not closed").at(self.source, start..self.at, label);
        self.damage(problem);
    }

    fn take(&mut self, tag: &Tag<'a>) {
        let depth = self.outer.len() + self.open.as_ref().map_or(0, |open| open.depth);
        let limit = if depth >= self.limits.depth && !tag.closing {
            Some(format!("elements nest more than {} deep", self.limits.depth))
        } else if tag.attributes > self.limits.attributes {
            Some(format!("an element has more than {} attributes", self.limits.attributes))
        } else {
            None
        };
        if let Some(message) = limit {
            let problem = Problem::error(message)
                .at(self.source, tag.start..tag.start + 1, "reading stopped here")
                .help("this is damaged or no netlist; export it again");
            self.stop(problem);
            return;
        }
        if let Some(open) = &self.open {
            let leaves = if tag.closing { Section::of(tag.name) != Section::Other } else { opens_outside(tag.name) };
            if !leaves {
                self.inside(tag);
                return;
            }
            let problem = Problem::error(format!("a {} is not closed", open.kind.noun())).at(
                self.source,
                open.start..tag.start,
                "it runs into what follows; left out",
            );
            self.open = None;
            self.damage(problem);
        }
        self.outside(tag);
    }

    fn inside(&mut self, tag: &Tag<'a>) {
        let Some(open) = &mut self.open else { return };
        open.items += 1 + tag.attributes;
        if open.items > self.limits.items {
            let message = format!("a {} holds more than {} elements", open.kind.noun(), self.limits.items);
            let problem = Problem::error(message).at(self.source, tag.start..self.at, "reading stopped here");
            self.stop(problem.help("this is damaged or no netlist; export it again"));
            return;
        }
        let written = self.text.get(tag.start..self.at).unwrap_or("");
        if written.contains([' ', '\t', '\r', '\n']) && declares_namespace(written) {
            // Scopes of many names cost the parser more than the length of the text.
            let problem = Problem::error("an element declares a namespace").at(
                self.source,
                tag.start..self.at,
                "a netlist has none; what holds this was left out",
            );
            self.open = None;
            self.damage(problem);
            return;
        }
        if tag.closing {
            open.depth -= 1;
        } else if !tag.empty {
            open.depth += 1;
        }
        if open.depth == 0 {
            let (kind, span) = (open.kind, Span::new(open.start, self.at));
            self.open = None;
            self.island(kind, span);
        }
    }

    fn outside(&mut self, tag: &Tag<'a>) {
        if tag.closing {
            self.close_outer(tag);
            return;
        }
        let around = self.outer.last().map(|name| Section::of(name));
        // The version stands in an attribute, so an element of that name means nothing.
        if let Some(kind) = Kind::of(tag.name, around).filter(|kind| *kind != Kind::Version) {
            if kind.is_entry() && matches!(around, None | Some(Section::Export)) {
                self.mismatch(tag, "stands outside its section");
            }
            self.open = Some(Open { kind, start: tag.start, depth: 0, items: 0 });
            if tag.empty {
                self.open = None;
                self.island(kind, Span::new(tag.start, self.at));
            } else {
                self.inside(tag);
            }
            return;
        }
        let section = Section::of(tag.name);
        match section {
            Section::Export if self.started => {
                let problem = Problem::error("a second netlist begins in the same file")
                    .at(self.source, tag.start..self.at, "it was not read")
                    .help("give each netlist a file of its own");
                self.stop(problem);
                return;
            }
            Section::Export => {
                self.started = true;
                self.version(tag);
            }
            section if section.is_main() && around != Some(Section::Export) => {
                self.mismatch(tag, "stands in the wrong place");
                self.outer.truncate(1);
            }
            Section::Other if around.is_some_and(Section::holds_islands) => {
                let problem = Problem::error("an unknown element stands among components, library parts or nets").at(
                    self.source,
                    tag.start..self.at,
                    "expected `comp`, `libpart` or `net`; left out",
                );
                self.damage(problem);
            }
            _ => {}
        }
        self.met.note(section);
        if !tag.empty {
            self.outer.push(tag.name);
        }
    }

    fn mismatch(&mut self, tag: &Tag<'a>, what: &str) {
        if !self.damaged {
            let name: String = tag.name.chars().take(40).collect();
            let problem = Problem::error(format!("`{name}` {what}: tags do not pair up")).at(
                self.source,
                tag.start..self.at,
                "a tag is missing or too many before this",
            );
            self.damage(problem);
        }
    }

    fn close_outer(&mut self, tag: &Tag<'a>) {
        if self.outer.last() == Some(&tag.name) {
            self.outer.pop();
            return;
        }
        self.mismatch(tag, "closes nothing here");
        if let Some(at) = self.outer.iter().rposition(|name| *name == tag.name) {
            self.outer.truncate(at);
        }
    }

    /// Reads the version off the root's own tag.
    fn version(&mut self, tag: &Tag<'a>) {
        let written = self.text.get(tag.start..self.at).unwrap_or("");
        let alone = format!("{}/>", written.trim_end_matches(['>', '/']));
        let Ok(document) = Document::parse(&alone) else { return };
        let Some(version) = document.root_element().attribute("version") else { return };
        let span = Span::new(tag.start, self.at);
        self.give(Kind::Version, span, &[], vec![atom("version"), atom(version)]);
    }

    fn island(&mut self, kind: Kind, span: Span) {
        let limit = u32::try_from(self.limits.items).unwrap_or(u32::MAX);
        let options = ParsingOptions { nodes_limit: limit, ..ParsingOptions::default() };
        match Document::parse_with_options(self.source.slice(span), options) {
            Ok(document) => {
                let root = document.root_element();
                let places = places(root, span.start());
                self.give(kind, span, &places, items(root));
            }
            Err(error) => {
                let problem = Problem::error(format!("a {} is not well-formed XML: {}", kind.noun(), reason(&error)))
                    .at(self.source, span, "left out");
                self.damage(problem);
            }
        }
    }

    fn give(&mut self, kind: Kind, span: Span, places: &[Place], items: Vec<Sexp>) {
        if let ControlFlow::Break(problem) = self.sink.island(Island { kind, ends: true, span, places, items }) {
            self.stop(problem);
        }
    }

    fn finish(&mut self) {
        let end = self.text.len();
        let last = self.text.char_indices().next_back().map_or(end, |(at, _)| at);
        let message = match &self.open {
            Some(open) => format!("the file ends inside a {}", open.kind.noun()),
            None if !self.outer.is_empty() => format!("the file ends with {} elements still open", self.outer.len()),
            None => {
                if let Some(problem) = self.met.missing() {
                    self.damage(problem);
                }
                return;
            }
        };
        let problem = Problem::error(message).at(self.source, last..end, "everything complete before this was read");
        self.damage(problem);
    }
}

fn ends_name(byte: u8) -> bool {
    matches!(byte, b' ' | b'\t' | b'\r' | b'\n' | b'/' | b'>' | b'<')
}

fn declares_namespace(tag: &str) -> bool {
    tag.split([' ', '\t', '\r', '\n']).skip(1).any(|word| word.starts_with("xmlns=") || word.starts_with("xmlns:"))
}

/// The parser's reason without its position, which counts from the island's start.
fn reason(error: &roxmltree::Error) -> String {
    let message = error.to_string();
    message.rsplit_once(" at ").map_or(message.as_str(), |(reason, _)| reason).chars().take(80).collect()
}
