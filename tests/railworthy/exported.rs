//! Netlists taken apart, changed as an editor changes them, and written again in any format.

use std::collections::{BTreeMap, BTreeSet};
use std::fmt::Write;

use railworthy::netlist::{Component, Format, LibraryPart, NetEntry, Netlist};

/// What an export holds.
#[derive(Debug, Clone)]
pub(crate) struct Exported {
    pub(crate) components: Vec<Component>,
    pub(crate) parts: Vec<LibraryPart>,
    pub(crate) nets: Vec<NetEntry>,
}

/// A generator of numbers that gives the same on every machine (SplitMix64).
pub(crate) struct Dice(pub(crate) u64);

impl Dice {
    fn next(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let mut value = self.0;
        value = (value ^ (value >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        value = (value ^ (value >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        value ^ (value >> 31)
    }

    pub(crate) fn shuffle<T>(&mut self, list: &mut [T]) {
        for at in (1..list.len()).rev() {
            let other = usize::try_from(self.next() % (at as u64 + 1)).unwrap();
            list.swap(at, other);
        }
    }
}

impl Exported {
    pub(crate) fn of(netlist: &Netlist) -> Self {
        Self { components: netlist.components.clone(), parts: netlist.parts.clone(), nets: netlist.nets.clone() }
    }

    /// Components, library parts, nets and nodes in another order, and nets under other codes.
    pub(crate) fn shuffled(mut self, dice: &mut Dice) -> Self {
        dice.shuffle(&mut self.components);
        dice.shuffle(&mut self.parts);
        dice.shuffle(&mut self.nets);
        for (place, net) in self.nets.iter_mut().enumerate() {
            dice.shuffle(&mut net.nodes);
            net.code = (place + 1).to_string();
        }
        self
    }

    /// The parts of each letter numbered anew, with the names that are made from references. References that several
    /// parts have, and those that are not letters with a number, stay.
    pub(crate) fn renumbered(mut self, dice: &mut Dice) -> Self {
        let mut counts: BTreeMap<&str, usize> = BTreeMap::new();
        for component in &self.components {
            *counts.entry(&component.reference).or_default() += 1;
        }
        let mut by_letters: BTreeMap<&str, Vec<&str>> = BTreeMap::new();
        for (reference, _) in counts.iter().filter(|(_, count)| **count == 1) {
            let letters = reference.trim_end_matches(|sign: char| sign.is_ascii_digit());
            let is_plain = letters.chars().all(|sign| sign.is_ascii_alphabetic());
            if is_plain && !letters.is_empty() && letters.len() < reference.len() {
                by_letters.entry(letters).or_default().push(reference);
            }
        }
        let mut names: BTreeMap<String, String> = BTreeMap::new();
        for (letters, references) in &by_letters {
            let mut numbers: Vec<usize> = (100..100 + references.len()).collect();
            dice.shuffle(&mut numbers);
            let renamed = references
                .iter()
                .zip(&numbers)
                .map(|(old, number)| ((*old).to_owned(), format!("{letters}{number}")));
            names.extend(renamed);
        }
        // A reference that stays must not be given to another part.
        let staying: BTreeSet<String> =
            counts.keys().filter(|name| !names.contains_key(**name)).map(|name| (*name).to_owned()).collect();
        names.retain(|_, new| !staying.contains(new));
        let renamed = |name: &str| names.get(name).cloned().unwrap_or_else(|| name.to_owned());
        for component in &mut self.components {
            component.reference = renamed(&component.reference);
        }
        for net in &mut self.nets {
            for node in &mut net.nodes {
                node.reference = renamed(&node.reference);
            }
            net.name = made_name(&net.name, &renamed);
        }
        self
    }

    /// Without the unique ids of symbols.
    pub(crate) fn without_ids(mut self) -> Self {
        for component in &mut self.components {
            component.ids.clear();
        }
        self
    }

    pub(crate) fn component(&mut self, reference: &str) -> &mut Component {
        self.components.iter_mut().find(|component| component.reference == reference).unwrap()
    }

    pub(crate) fn net(&mut self, name: &str) -> &mut NetEntry {
        self.nets.iter_mut().find(|net| net.name == name).unwrap()
    }

    /// Takes a part out.
    pub(crate) fn without(mut self, reference: &str) -> Self {
        self.components.retain(|component| component.reference != reference);
        for net in &mut self.nets {
            net.nodes.retain(|node| node.reference != reference);
        }
        self.nets.retain(|net| !net.nodes.is_empty());
        self
    }

    /// The file in a format.
    pub(crate) fn written(&self, format: Format) -> String {
        match format {
            Format::D | Format::E => lists(&self.tree(format), format),
            Format::Xml => format!("<?xml version=\"1.0\" encoding=\"utf-8\"?>\n{}\n", elements(&self.tree(format))),
        }
    }

    fn tree(&self, format: Format) -> Node {
        let is_e = format != Format::D;
        let components = self.components.iter().map(|component| placed(component, is_e)).collect();
        let parts = self.parts.iter().map(library_part).collect();
        let nets = self.nets.iter().map(|net| net_of(net, is_e)).collect();
        let source = Node::text("source", "made.kicad_sch");
        Node::list(
            "export",
            vec![
                Node::attribute("version", if is_e { "E" } else { "D" }),
                Node::list("design", vec![source, Node::text("tool", "Eeschema")]),
                Node::list("components", components),
                Node::list("libparts", parts),
                Node::list("nets", nets),
            ],
        )
    }
}

/// `Net-(U2-VOUT)` with the new reference.
fn made_name(name: &str, renamed: &impl Fn(&str) -> String) -> String {
    let Some((head, rest)) =
        name.split_once('(').filter(|_| name.contains("Net-(") || name.contains("unconnected-("))
    else {
        return name.to_owned();
    };
    match rest.split_once('-') {
        Some((reference, pin)) => format!("{head}({}-{pin}", renamed(reference)),
        None => name.to_owned(),
    }
}

/// What both syntaxes can say: a name with attributes, children or a text.
struct Node {
    name: &'static str,
    attribute: bool,
    text: Option<String>,
    children: Vec<Node>,
}

impl Node {
    fn list(name: &'static str, children: Vec<Node>) -> Self {
        Self { name, attribute: false, text: None, children }
    }

    fn text(name: &'static str, text: &str) -> Self {
        Self { name, attribute: false, text: Some(text.to_owned()), children: Vec::new() }
    }

    fn attribute(name: &'static str, text: &str) -> Self {
        Self { attribute: true, ..Self::text(name, text) }
    }
}

fn placed(component: &Component, is_e: bool) -> Node {
    let mut items = vec![Node::attribute("ref", &component.reference), Node::text("value", &component.value)];
    for (name, text) in [("footprint", &component.footprint), ("datasheet", &component.datasheet)] {
        if !text.is_empty() {
            items.push(Node::text(name, text));
        }
    }
    let named = |name, text: &str, field: &str| {
        let mut node = Node::list(name, vec![Node::attribute("name", field)]);
        if !text.is_empty() {
            node.text = Some(text.to_owned());
        }
        node
    };
    let mut source = vec![Node::attribute("lib", &component.library), Node::attribute("part", &component.part)];
    source.push(Node::attribute("description", &component.description));
    items.push(Node::list("libsource", source));
    if is_e {
        for field in &component.fields {
            let mut children = vec![Node::attribute("name", &field.name)];
            if !field.value.is_empty() {
                children.push(Node::attribute("value", &field.value));
            }
            items.push(Node::list("property", children));
        }
    } else if !component.fields.is_empty() {
        let fields = component.fields.iter().map(|field| named("field", &field.value, &field.name)).collect();
        items.push(Node::list("fields", fields));
    }
    let sheet = vec![Node::attribute("names", &component.sheet), Node::attribute("tstamps", "/")];
    items.push(Node::list("sheetpath", sheet));
    if !component.ids.is_empty() {
        items.push(Node::text(if is_e { "tstamps" } else { "tstamp" }, &component.ids.join(" ")));
    }
    Node::list("comp", items)
}

fn library_part(part: &LibraryPart) -> Node {
    let mut items = vec![Node::attribute("lib", &part.library), Node::attribute("part", &part.part)];
    if !part.aliases.is_empty() {
        items.push(Node::list("aliases", part.aliases.iter().map(|alias| Node::text("alias", alias)).collect()));
    }
    for (name, text) in [("description", &part.description), ("docs", &part.docs)] {
        if !text.is_empty() {
            items.push(Node::text(name, text));
        }
    }
    let pin = |pin: &railworthy::netlist::PartPin| {
        let [number, name, kind] = [("num", &pin.number), ("name", &pin.name), ("type", &pin.kind)]
            .map(|(of, text)| Node::attribute(of, text));
        Node::list("pin", vec![number, name, kind])
    };
    items.push(Node::list("pins", part.pins.iter().map(pin).collect()));
    Node::list("libpart", items)
}

fn net_of(net: &NetEntry, is_e: bool) -> Node {
    let mut items = vec![Node::attribute("code", &net.code), Node::attribute("name", &net.name)];
    for node in &net.nodes {
        let mut inner = vec![Node::attribute("ref", &node.reference), Node::attribute("pin", &node.pin)];
        for (name, text) in [("pinfunction", &node.function), ("pintype", &node.kind)] {
            if is_e && !text.is_empty() {
                inner.push(Node::attribute(name, text));
            }
        }
        items.push(Node::list("node", inner));
    }
    Node::list("net", items)
}

/// S-expressions. Words of the unique ids stand as words of their own in format E.
fn lists(node: &Node, format: Format) -> String {
    let mut out = format!("({}", node.name);
    for child in &node.children {
        out.push_str(if matches!(child.name, "comp" | "libpart" | "net") { "\n" } else { " " });
        out.push_str(&lists(child, format));
    }
    if let Some(text) = &node.text {
        let words: Vec<&str> = if node.name == "tstamps" { text.split(' ').collect() } else { vec![text] };
        for word in words {
            let _ = write!(out, " {}", atom(word, format));
        }
    }
    out.push(')');
    out
}

fn atom(text: &str, format: Format) -> String {
    let bare = |sign: char| !sign.is_whitespace() && !matches!(sign, '(' | ')' | '"' | ';' | '|');
    if format == Format::D && !text.is_empty() && text.chars().all(bare) {
        return text.to_owned();
    }
    let mut out = String::from('"');
    for sign in text.chars() {
        match sign {
            '"' | '\\' => out.extend(['\\', sign]),
            '\n' => out.push_str("\\n"),
            '\r' => out.push_str("\\r"),
            _ => out.push(sign),
        }
    }
    out.push('"');
    out
}

fn elements(node: &Node) -> String {
    let mut out = format!("<{}", node.name);
    for child in node.children.iter().filter(|child| child.attribute) {
        let _ = write!(out, " {}=\"{}\"", child.name, escaped(child.text.as_deref().unwrap_or_default()));
    }
    out.push('>');
    for child in node.children.iter().filter(|child| !child.attribute) {
        out.push_str(&elements(child));
    }
    if let Some(text) = &node.text {
        out.push_str(&escaped(text));
    }
    let _ = writeln!(out, "</{}>", node.name);
    out
}

fn escaped(text: &str) -> String {
    let mut out = String::new();
    for sign in text.chars() {
        match sign {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '"' => out.push_str("&quot;"),
            '\n' => out.push_str("&#10;"),
            '\r' => out.push_str("&#13;"),
            '\t' => out.push_str("&#9;"),
            _ => out.push(sign),
        }
    }
    out
}
