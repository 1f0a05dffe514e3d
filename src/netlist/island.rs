//! A piece of a netlist that is parsed by itself, so that damage in one leaves the others readable.

use std::ops::ControlFlow;

use sexp::Sexp;

use super::limits::Limits;
use super::scan::Scanner;
use super::xml::XmlScanner;
use crate::source::{Problem, Source, Span};

/// What an island describes.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Kind {
    /// The version of the format.
    Version,
    /// Where the netlist comes from.
    Design,
    /// One component.
    Component,
    /// One library part.
    Part,
    /// One net.
    Net,
}

impl Kind {
    /// The kind of an island by its head and the head of the list around it.
    pub(super) fn of(head: &str, around: Option<Section>) -> Option<Self> {
        let (kind, home) = match head {
            "comp" => (Self::Component, Section::Components),
            "libpart" => (Self::Part, Section::Parts),
            "net" => (Self::Net, Section::Nets),
            "version" => (Self::Version, Section::Export),
            "design" => (Self::Design, Section::Export),
            _ => return None,
        };
        // An island that stands outside its section, but not inside another form, is there by a bracket too many.
        let strayed = matches!(around, None | Some(Section::Export)) && kind.is_entry();
        (around == Some(home) || strayed).then_some(kind)
    }

    /// Whether there are many of it, in a section of their own.
    pub(super) fn is_entry(self) -> bool {
        matches!(self, Self::Component | Self::Part | Self::Net)
    }

    /// What a message calls it.
    pub(super) fn noun(self) -> &'static str {
        match self {
            Self::Version => "version",
            Self::Design => "design block",
            Self::Component => "component",
            Self::Part => "library part",
            Self::Net => "net",
        }
    }
}

/// A list around islands.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Section {
    /// The whole netlist.
    Export,
    /// The components.
    Components,
    /// The library parts.
    Parts,
    /// The libraries, which are not used.
    Libraries,
    /// The nets.
    Nets,
    /// Anything else: passed over.
    Other,
}

impl Section {
    /// The section with this head.
    pub(super) fn of(head: &str) -> Self {
        match head {
            "export" => Self::Export,
            "components" => Self::Components,
            "libparts" => Self::Parts,
            "libraries" => Self::Libraries,
            "nets" => Self::Nets,
            _ => Self::Other,
        }
    }

    /// Whether all that stands in it are islands.
    pub(super) fn holds_islands(self) -> bool {
        matches!(self, Self::Components | Self::Parts | Self::Nets)
    }

    /// Whether it stands right inside the export.
    pub(super) fn is_main(self) -> bool {
        !matches!(self, Self::Export | Self::Other)
    }
}

/// Which of the sections that a netlist cannot be without were met.
#[derive(Debug, Default)]
pub(super) struct Met {
    components: bool,
    nets: bool,
}

impl Met {
    /// Notes a section.
    pub(super) fn note(&mut self, section: Section) {
        self.components |= section == Section::Components;
        self.nets |= section == Section::Nets;
    }

    /// The first section that is missing.
    pub(super) fn missing(&self) -> Option<Problem> {
        let name = match self {
            Self { components: false, .. } => "components",
            Self { nets: false, .. } => "nets",
            _ => return None,
        };
        let problem = Problem::error(format!("the netlist has no section `{name}`"));
        Some(problem.help("export the netlist again from the schematic editor"))
    }
}

/// Whether a head can only stand outside islands: where it opens inside one, that island was never closed.
pub(super) fn opens_outside(head: &str) -> bool {
    matches!(head, "comp" | "libpart" | "net") || Section::of(head).is_main()
}

/// Where a list right inside an island stands.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub(super) struct Place {
    /// The whole list.
    pub(super) whole: Span,
    /// Its first text behind the head, with its quotes; empty at its start where it has none.
    pub(super) value: Span,
}

/// One parsed piece of the file.
#[derive(Debug)]
pub(super) struct Island<'a> {
    pub(super) kind: Kind,
    /// Whether it ends here; if not, the next island is more of it.
    pub(super) ends: bool,
    /// The whole piece, as far as it was read.
    pub(super) span: Span,
    /// The place of each list right inside it, in order.
    pub(super) places: &'a [Place],
    /// What stands in it, head first; every atom is a text as written.
    pub(super) items: Vec<Sexp>,
}

/// Takes what a scanner finds.
pub(super) trait Sink {
    /// Takes an island; a problem in return is a limit that was passed and ends the scan.
    fn island(&mut self, island: Island<'_>) -> ControlFlow<Problem>;
    /// The island that has not ended is damaged: what was taken of it is void.
    fn abandon(&mut self);
    /// Takes a problem.
    fn problem(&mut self, problem: Problem);
}

/// The islands of a text as they reach the model, for comparison with an independent reading.
#[doc(hidden)]
#[must_use]
pub fn islands(text: &str) -> Vec<(Span, Sexp)> {
    #[derive(Default)]
    struct Collector {
        whole: Vec<(Span, Sexp)>,
        begun: Vec<Sexp>,
    }
    impl Sink for Collector {
        fn island(&mut self, island: Island<'_>) -> ControlFlow<Problem> {
            let head = usize::from(!self.begun.is_empty());
            self.begun.extend(island.items.into_iter().skip(head));
            if island.ends {
                self.whole.push((island.span, Sexp::List(std::mem::take(&mut self.begun))));
            }
            ControlFlow::Continue(())
        }
        fn abandon(&mut self) {
            self.begun.clear();
        }
        fn problem(&mut self, _problem: Problem) {}
    }
    let source = Source::new("", text);
    let mut found = Collector::default();
    let limits = Limits::default();
    if text.trim_start_matches('\u{feff}').trim_start().starts_with('<') {
        XmlScanner::new(&source, &limits, &mut found).run();
    } else {
        Scanner::new(&source, &limits, &mut found).run();
    }
    found.whole
}
