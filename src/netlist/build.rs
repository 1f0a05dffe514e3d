//! Turns islands into components, library parts and nets.

use std::collections::BTreeMap;
use std::ops::ControlFlow;

use sexp::Sexp;

use super::form::{Form, Misshapen, text};
use super::island::{Island, Kind, Place, Sink};
use super::limits::{Limits, MAX_FIELDS};
use super::model::{Component, Field, LibraryPart, NetEntry, NetNode, PartPin};
use super::problems::Problems;
use super::variants::variants;
use crate::source::{Problem, Source, Span};

const EXPORT_AGAIN: &str = "export the netlist again from the schematic editor";

/// A net that is read in pieces.
#[derive(Debug, Default)]
struct BegunNet {
    net: NetEntry,
    named: bool,
}

/// What was built so far.
#[derive(Debug)]
pub(super) struct Builder<'a> {
    source: &'a Source,
    limits: &'a Limits,
    nodes: usize,
    /// The net that has not ended.
    begun: BegunNet,
    pub(super) version: Option<String>,
    pub(super) schematic: String,
    pub(super) schematic_span: Span,
    /// The file of each sheet by its path, where the design block lists them.
    sheets: BTreeMap<String, String>,
    pub(super) tool: String,
    pub(super) components: Vec<Component>,
    pub(super) parts: Vec<LibraryPart>,
    pub(super) nets: Vec<NetEntry>,
    pub(super) problems: Problems,
}

impl Sink for Builder<'_> {
    fn island(&mut self, island: Island<'_>) -> ControlFlow<Problem> {
        let Island { kind, ends, span, places, items } = island;
        let mut placed = items.into_iter().skip(1);
        match kind {
            Kind::Version => self.version = placed.find_map(text),
            Kind::Design => self.design(places, placed),
            Kind::Component => self.component(span, places, placed),
            Kind::Part => self.part(span, places, placed),
            Kind::Net => {
                self.net(places, placed);
                if ends {
                    self.end_net(span);
                }
            }
        }
        self.within_limits(span)
    }

    fn abandon(&mut self) {
        self.begun = BegunNet::default();
    }

    fn problem(&mut self, problem: Problem) {
        self.problems.push(problem);
    }
}

/// Each list right inside an island with its place.
fn forms(items: impl Iterator<Item = Sexp>, places: &[Place]) -> impl Iterator<Item = (Form, Place)> {
    let lists = items.filter(|item| matches!(item, Sexp::List(_)));
    lists.zip(places.iter().copied()).filter_map(|(item, place)| Form::of(item).map(|form| (form, place)))
}

impl<'a> Builder<'a> {
    pub(super) fn new(source: &'a Source, limits: &'a Limits) -> Self {
        Self {
            source,
            limits,
            nodes: 0,
            begun: BegunNet::default(),
            version: None,
            schematic: String::new(),
            schematic_span: Span::default(),
            sheets: BTreeMap::new(),
            tool: String::new(),
            components: Vec::new(),
            parts: Vec::new(),
            nets: Vec::new(),
            problems: Problems::default(),
        }
    }

    fn within_limits(&self, span: Span) -> ControlFlow<Problem> {
        let counts = [
            (self.components.len(), self.limits.components, "components"),
            (self.parts.len(), self.limits.parts, "library parts"),
            (self.nets.len(), self.limits.nets, "nets"),
            (self.nodes, self.limits.nodes, "pins on nets"),
        ];
        match counts.into_iter().find(|(count, limit, _)| count > limit) {
            None => ControlFlow::Continue(()),
            Some((_, limit, noun)) => ControlFlow::Break(
                Problem::error(format!("more than {limit} {noun}"))
                    .at(self.source, span, "reading stopped here")
                    .help("this is more than a board holds; split the schematic"),
            ),
        }
    }

    fn lost(&mut self, message: String, span: Span, label: &str) {
        self.problems.push(Problem::error(message).at(self.source, span, label).help(EXPORT_AGAIN));
    }

    /// A value, with an error at its place when it is not one text.
    fn value(&mut self, form: Form, place: Place) -> String {
        form.value().unwrap_or_else(|misshapen| {
            self.misshapen(&misshapen, place.whole);
            String::new()
        })
    }

    fn misshapen(&mut self, Misshapen(head): &Misshapen, span: Span) {
        // A head may be as long as the file.
        let head: String = head.chars().take(40).collect();
        self.lost(format!("`{head}` does not hold what was expected"), span, "expected a name or one text");
    }

    fn design(&mut self, places: &[Place], items: impl Iterator<Item = Sexp>) {
        for (form, place) in forms(items, places) {
            match form.head.as_str() {
                "source" => {
                    self.schematic = form.value().unwrap_or_default();
                    self.schematic_span = place.value;
                }
                "tool" => self.tool = form.value().unwrap_or_default(),
                "sheet" => self.sheets.extend(listed_sheet(form)),
                _ => {}
            }
        }
    }

    /// Names the sheet files that older exports give with the sheets, or not at all, and not with each component.
    pub(super) fn complete_sheet_files(&mut self) {
        for component in self.components.iter_mut().filter(|component| component.sheet_file.is_empty()) {
            match self.sheets.get(&component.sheet) {
                Some(file) => component.sheet_file.clone_from(file),
                None if component.sheet == "/" => component.sheet_file.clone_from(&self.schematic),
                None => {}
            }
        }
    }

    fn component(&mut self, span: Span, places: &[Place], items: impl Iterator<Item = Sexp>) {
        let mut component = Component { span, ..Component::default() };
        for (form, place) in forms(items, places) {
            match form.head.as_str() {
                "ref" => {
                    if !component.reference.is_empty() {
                        self.lost("a component has two references".into(), place.whole, "the second; it counts");
                    }
                    component.reference = self.value(form, place);
                    component.reference_span = place.value;
                }
                "value" => component.value = self.value(form, place),
                "footprint" => component.footprint = self.value(form, place),
                "datasheet" => component.datasheet = self.value(form, place),
                "description" => component.description = self.value(form, place),
                "libsource" => self.library_source(&mut component, form, place),
                "sheetpath" => {
                    for inner in form.lists() {
                        match inner.head.as_str() {
                            "names" => component.sheet = self.value(inner, place),
                            "tstamps" => component.sheet_ids = self.value(inner, place),
                            _ => {}
                        }
                    }
                }
                "tstamp" | "tstamps" => form.words_into(&mut component.ids),
                "property" => self.field(&mut component.fields, form, place),
                "variants" => match variants(form) {
                    Ok(found) => component.variants.extend(found),
                    Err(misshapen) => self.misshapen(&misshapen, place.whole),
                },
                "fields" => {
                    for field in form.lists().filter(|inner| inner.head == "field") {
                        self.field(&mut component.fields, field, place);
                    }
                }
                _ => {}
            }
        }
        if component.reference.is_empty() {
            self.lost("a component has no reference".into(), span, "expected `ref` with a text; left out");
            return;
        }
        component.sheet_file = sheet_file(&component.fields);
        self.components.push(component);
    }

    fn library_source(&mut self, component: &mut Component, form: Form, place: Place) {
        for inner in form.lists() {
            match inner.head.as_str() {
                "lib" => component.library = self.value(inner, place),
                "part" => component.part = self.value(inner, place),
                "description" => {
                    let described = self.value(inner, place);
                    if component.description.is_empty() {
                        component.description = described;
                    }
                }
                _ => {}
            }
        }
    }

    /// Adds a field, or its text to one of the same name that has none.
    fn field(&mut self, fields: &mut Vec<Field>, form: Form, place: Place) {
        let (name, value) = match form.field() {
            Ok(field) => field,
            Err(misshapen) => return self.misshapen(&misshapen, place.whole),
        };
        if let Some(known) = fields.iter_mut().find(|known| known.name == name) {
            if known.value.is_empty() {
                known.value = value;
            }
        } else if fields.len() < MAX_FIELDS {
            fields.push(Field { name, value });
        } else {
            self.lost(format!("more than {MAX_FIELDS} fields on one part"), place.whole, "left out");
        }
    }

    fn part(&mut self, span: Span, places: &[Place], items: impl Iterator<Item = Sexp>) {
        let mut part = LibraryPart { span, ..LibraryPart::default() };
        for (form, place) in forms(items, places) {
            match form.head.as_str() {
                "lib" => part.library = self.value(form, place),
                "part" => part.part = self.value(form, place),
                "description" => part.description = self.value(form, place),
                "docs" => part.docs = self.value(form, place),
                "aliases" => {
                    for alias in form.lists().filter(|inner| inner.head == "alias") {
                        let alias = self.value(alias, place);
                        part.aliases.push(alias);
                    }
                }
                "fields" => {
                    for field in form.lists().filter(|inner| inner.head == "field") {
                        self.field(&mut part.fields, field, place);
                    }
                }
                "pins" => {
                    for pin in form.lists().filter(|inner| inner.head == "pin") {
                        part.pins.extend(self.part_pin(pin, place));
                    }
                }
                _ => {}
            }
        }
        if part.part.is_empty() {
            self.lost("a library part has no name".into(), span, "expected `part` with a text; left out");
            return;
        }
        self.parts.push(part);
    }

    fn part_pin(&mut self, form: Form, place: Place) -> Option<PartPin> {
        let mut pin = PartPin { number: String::new(), name: String::new(), kind: String::new() };
        for inner in form.lists() {
            match inner.head.as_str() {
                "num" => pin.number = self.value(inner, place),
                "name" => pin.name = self.value(inner, place),
                "type" => pin.kind = self.value(inner, place),
                _ => {}
            }
        }
        if pin.number.is_empty() {
            self.lost("a pin of a library part has no number".into(), place.whole, "expected `num` with a text");
            return None;
        }
        Some(pin)
    }

    fn net(&mut self, places: &[Place], items: impl Iterator<Item = Sexp>) {
        let BegunNet { mut net, mut named } = std::mem::take(&mut self.begun);
        for (form, place) in forms(items, places) {
            match form.head.as_str() {
                "code" | "name"
                    if (form.head == "code" && !net.code.is_empty()) || (form.head == "name" && named) =>
                {
                    let label = "the second; two nets may have run together";
                    self.lost(format!("a net has two of `{}`", form.head), place.whole, label);
                }
                "code" => net.code = self.value(form, place),
                "name" => {
                    net.name = self.value(form, place);
                    net.name_span = place.value;
                    named = true;
                }
                "node" => net.nodes.extend(self.node(form, place)),
                _ => {}
            }
        }
        self.begun = BegunNet { net, named };
    }

    fn end_net(&mut self, span: Span) {
        let BegunNet { mut net, named } = std::mem::take(&mut self.begun);
        net.span = span;
        if net.code.is_empty() || !named {
            let missing = if named { "code" } else { "name" };
            let label = format!("expected `{missing}` with a text; left out");
            self.lost(format!("a net has no {missing}"), span, &label);
            return;
        }
        self.nodes += net.nodes.len();
        self.nets.push(net);
    }

    fn node(&mut self, form: Form, place: Place) -> Option<NetNode> {
        let mut node = NetNode { span: place.whole, ..NetNode::default() };
        if form.rest.as_slice().iter().any(|item| matches!(item, Sexp::Atom(_))) {
            self.lost("a pin on a net holds a text by itself".into(), place.whole, "expected lists only");
        }
        for inner in form.lists() {
            match inner.head.as_str() {
                "ref" => node.reference = self.value(inner, place),
                "pin" => node.pin = self.value(inner, place),
                "pinfunction" => node.function = self.value(inner, place),
                "pintype" => node.kind = self.value(inner, place),
                _ => {}
            }
        }
        if node.reference.is_empty() || node.pin.is_empty() {
            self.lost("a pin on a net is not complete".into(), place.whole, "expected `ref` and `pin` with a text");
            return None;
        }
        Some(node)
    }
}

/// A sheet of the design block: its path and its file.
fn listed_sheet(form: Form) -> Option<(String, String)> {
    let (mut name, mut file) = (None, None);
    for inner in form.lists() {
        match inner.head.as_str() {
            "name" => name = inner.value().ok(),
            "title_block" => {
                file = inner.lists().find(|entry| entry.head == "source").and_then(|entry| entry.value().ok())
            }
            _ => {}
        }
    }
    name.zip(file)
}

/// The schematic file of a component's sheet; the property changed its spelling once.
fn sheet_file(fields: &[Field]) -> String {
    fields
        .iter()
        .find(|field| matches!(field.name.as_str(), "Sheetfile" | "Sheet file"))
        .map(|field| field.value.clone())
        .unwrap_or_default()
}
