//! What a netlist holds, as written, each thing with its place in the file.

use crate::source::{Problem, Source, Span};

/// The format of an export.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Format {
    /// S-expressions with mostly bare atoms, no pin data on nodes.
    D,
    /// S-expressions with quoted atoms and pin data on nodes.
    E,
    /// The XML form of either.
    Xml,
}

impl Format {
    /// `D`, `E` or `xml`.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::D => "D",
            Self::E => "E",
            Self::Xml => "xml",
        }
    }
}

/// A name with its text: a field or property of a component, or a field of a library part.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Field {
    /// The field's name as written.
    pub name: String,
    /// Its text as written; empty where it has none.
    pub value: String,
}

/// What an assembly variant changes on a component.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct ComponentVariant {
    /// The variant's name.
    pub name: String,
    /// Fields and attributes with the texts that they have in it; `dnp` is `1` or `0`.
    pub changes: Vec<Field>,
}

/// One placed component.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Component {
    /// Reference designator.
    pub reference: String,
    /// Value as written.
    pub value: String,
    /// Footprint, `library:name` or empty.
    pub footprint: String,
    /// Data sheet address as written, or empty.
    pub datasheet: String,
    /// The symbol's library, or empty.
    pub library: String,
    /// The symbol's name in the library, or empty.
    pub part: String,
    /// The symbol's description, or empty.
    pub description: String,
    /// `fields` and `property` entries in order of the file, each name once (the first non-empty text wins).
    /// A property without a value (such as `dnp`) has an empty text.
    pub fields: Vec<Field>,
    /// The assembly variants in which it is fitted otherwise; what changes nothing about the circuit is left out.
    pub variants: Vec<ComponentVariant>,
    /// Human-readable sheet path, such as `/Power/`, or empty.
    pub sheet: String,
    /// Schematic file of its sheet as the export names it, or empty.
    pub sheet_file: String,
    /// Unique ids of the sheets down to its own, as written, or empty.
    pub sheet_ids: String,
    /// Unique ids of its symbol (one a unit), as written.
    pub ids: Vec<String>,
    /// The whole `(comp …)` or `<comp>`.
    pub span: Span,
    /// The reference inside it.
    pub reference_span: Span,
}

/// A pin of a library part.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct PartPin {
    /// Pin number as written (may be a word).
    pub number: String,
    /// Pin name as written; `~` or empty for none.
    pub name: String,
    /// Electrical type as written.
    pub kind: String,
}

/// A library part.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct LibraryPart {
    /// Library name.
    pub library: String,
    /// Part name.
    pub part: String,
    /// Other part names under which components refer to it.
    pub aliases: Vec<String>,
    /// Description, or empty.
    pub description: String,
    /// Data sheet, or empty.
    pub docs: String,
    /// Fields, in order.
    pub fields: Vec<Field>,
    /// Pins, in order.
    pub pins: Vec<PartPin>,
    /// The whole `(libpart …)`.
    pub span: Span,
}

/// One pin on a net.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct NetNode {
    /// Reference of the component.
    pub reference: String,
    /// Pin number as written.
    pub pin: String,
    /// Pin name as written (version 10 suffixes it with the pin number), or empty.
    pub function: String,
    /// Electrical type as written (may be combined with `+`), or empty.
    pub kind: String,
    /// The whole `(node …)`.
    pub span: Span,
}

/// One net.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct NetEntry {
    /// Net code as written: the key; names are not unique in old files.
    pub code: String,
    /// Net name as written; may be empty.
    pub name: String,
    /// Nodes in order.
    pub nodes: Vec<NetNode>,
    /// The whole `(net …)`.
    pub span: Span,
    /// The name inside it.
    pub name_span: Span,
}

/// A netlist as read. What could not be read stands in `problems`.
#[derive(Debug, Clone)]
pub struct Netlist {
    /// The text it was read from.
    pub source: Source,
    /// Its format.
    pub format: Format,
    /// The version as written (`D`, `E`).
    pub version: String,
    /// The schematic that it was exported from, as written, or empty.
    pub schematic: String,
    /// That text with its quotes, or nothing at the start of the file.
    pub schematic_span: Span,
    /// The program that wrote it, as written, or empty.
    pub tool: String,
    /// Components in order of the file.
    pub components: Vec<Component>,
    /// Library parts in order of the file.
    pub parts: Vec<LibraryPart>,
    /// Nets in order of the file.
    pub nets: Vec<NetEntry>,
    /// What was lost or odd, in order of the file; an error means that the board is not whole.
    pub problems: Vec<Problem>,
}

impl Netlist {
    /// How many pins are connected, over all nets.
    #[must_use]
    pub fn node_count(&self) -> usize {
        self.nets.iter().map(|net| net.nodes.len()).sum()
    }

    /// Whether nothing was lost.
    #[must_use]
    pub fn is_complete(&self) -> bool {
        use crate::source::Severity;
        self.problems.iter().all(|problem| problem.severity() < Severity::Error)
    }
}
