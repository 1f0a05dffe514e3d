//! How components and nets fit together.
//!
//! An error is what leaves open which part or net is meant. Real exports repeat net names, repeat a pin within a net
//! and put one pin on several nets (symbols whose pins share a number): those are at most warnings.

use std::collections::{HashMap, HashSet};

use super::model::{Component, LibraryPart, NetEntry};
use super::problems::Problems;
use crate::source::{Problem, Source};

/// Drops components and nets that claim a taken reference or code, and tells all that does not fit.
pub(super) fn verify(
    source: &Source,
    components: &mut Vec<Component>,
    parts: &[LibraryPart],
    nets: &mut Vec<NetEntry>,
    problems: &mut Problems,
) {
    let (known, fresh) = by_reference(source, components, problems);
    unique_codes(source, nets, problems);
    repeated_names(source, nets, problems);
    repeated_parts(source, parts, problems);
    let parts = parts_of_nodes(source, known, components.len(), nets, problems);
    pins_on_several_nets(source, nets, &parts, problems);
    keep(components, &fresh);
}

/// Keeps the items whose flag is set, in order.
fn keep<T>(items: &mut Vec<T>, flags: &[bool]) {
    if flags.contains(&false) {
        let mut flags = flags.iter().copied();
        items.retain(|_| flags.next().unwrap_or(true));
    }
}

/// The components by reference, and for each whether it is the first of its reference; those that are not are told.
fn by_reference<'a>(
    source: &Source,
    components: &'a [Component],
    problems: &mut Problems,
) -> (HashMap<&'a str, usize>, Vec<bool>) {
    let mut known = HashMap::with_capacity(components.len());
    let mut fresh = Vec::with_capacity(components.len());
    for (at, component) in components.iter().enumerate() {
        let first = *known.entry(component.reference.as_str()).or_insert(at);
        fresh.push(first == at);
        if first != at {
            problems.push(
                Problem::error(format!("the reference {} is used twice", component.reference))
                    .at(source, component.reference_span, "the second component of this reference was left out")
                    .help("annotate the schematic so that every part has its own reference, then export again"),
            );
        }
    }
    (known, fresh)
}

fn unique_codes(source: &Source, nets: &mut Vec<NetEntry>, problems: &mut Problems) {
    let mut seen = HashSet::with_capacity(nets.len());
    let fresh: Vec<bool> = nets.iter().map(|net| seen.insert(net.code.as_str())).collect();
    for net in nets.iter().zip(&fresh).filter_map(|(net, fresh)| (!fresh).then_some(net)) {
        problems.push(
            Problem::error(format!("the net code {} is used twice", net.code))
                .at(source, net.name_span, "the second net of this code was left out")
                .help("give every net its own code: export the netlist again from the schematic editor"),
        );
    }
    keep(nets, &fresh);
}

fn repeated_names(source: &Source, nets: &[NetEntry], problems: &mut Problems) {
    let mut seen = HashSet::with_capacity(nets.len());
    for net in nets.iter().filter(|net| !net.name.is_empty()) {
        if !seen.insert(net.name.as_str()) {
            problems.push(
                Problem::warning(format!("two nets are named {}", net.name))
                    .at(source, net.name_span, "taken as a net of its own, by its code")
                    .help("nothing joins the two; if they should be one, join them in the schematic"),
            );
        }
    }
}

fn repeated_parts(source: &Source, parts: &[LibraryPart], problems: &mut Problems) {
    let mut seen = HashSet::with_capacity(parts.len());
    for part in parts {
        if !seen.insert((part.library.as_str(), part.part.as_str())) {
            problems.push(
                Problem::warning(format!("the library part {}:{} is described twice", part.library, part.part)).at(
                    source,
                    part.span,
                    "the first description counts",
                ),
            );
        }
    }
}

/// The part of every node, over all nets in order: its index among the components, or one behind these for each
/// reference that is not there, which is told.
fn parts_of_nodes<'a>(
    source: &Source,
    mut known: HashMap<&'a str, usize>,
    components: usize,
    nets: &'a [NetEntry],
    problems: &mut Problems,
) -> Vec<usize> {
    // A reference that is used twice leaves a gap, which does no harm.
    let mut free = components;
    let mut parts = Vec::with_capacity(nets.iter().map(|net| net.nodes.len()).sum());
    for node in nets.iter().flat_map(|net| &net.nodes) {
        let part = *known.entry(node.reference.as_str()).or_insert(free);
        parts.push(part);
        if part == free {
            free += 1;
            problems.push(
                Problem::error(format!("{} is on a net but not among the components", node.reference))
                    .at(source, node.span, "what this part is cannot be told")
                    .help("export the netlist again from the schematic editor"),
            );
        }
    }
    parts
}

/// Tells each pin that is on several nets, once; `parts` are those of the nodes.
fn pins_on_several_nets(source: &Source, nets: &[NetEntry], parts: &[usize], problems: &mut Problems) {
    let mut pins = Pins::of_parts(parts);
    let mut told = HashSet::new();
    let nodes = nets.iter().flat_map(|net| net.nodes.iter().map(move |node| (net, node)));
    for ((net, node), part) in nodes.zip(parts) {
        let first = pins.first_net(*part, &node.pin, net);
        if !std::ptr::eq(first, net) && told.insert((*part, node.pin.as_str())) {
            problems.push(
                Problem::warning(format!("pin {} of {} is on several nets", node.pin, node.reference))
                    .at(source, node.span, format!("it is on {} too", named(first)))
                    .help("give every pin of the symbol its own number"),
            );
        }
    }
}

/// How many pins of a part are looked through one by one.
const FEW_PINS: usize = 16;

/// The first net of every pin. Most parts have so few pins that hashing these costs more than looking at all.
struct Pins<'a> {
    /// For each part the latest of its pins in `few`, and how many of these there are.
    latest: Vec<(usize, usize)>,
    /// Pins with their nets, each with the place of the one before it of the same part.
    few: Vec<(&'a str, &'a NetEntry, usize)>,
    many: HashMap<(usize, &'a str), &'a NetEntry>,
}

impl<'a> Pins<'a> {
    fn of_parts(parts: &[usize]) -> Self {
        let count = parts.iter().max().map_or(0, |last| last + 1);
        Self { latest: vec![(0, 0); count], few: Vec::with_capacity(parts.len()), many: HashMap::new() }
    }

    /// The net on which a pin was met first, which is `net` where it was not met before.
    fn first_net(&mut self, part: usize, pin: &'a str, net: &'a NetEntry) -> &'a NetEntry {
        let Some(latest) = self.latest.get_mut(part) else { return net };
        let (mut at, count) = *latest;
        for _ in 0..count {
            let Some((known, first, before)) = self.few.get(at) else { break };
            if *known == pin {
                return first;
            }
            at = *before;
        }
        if count == FEW_PINS {
            return self.many.entry((part, pin)).or_insert(net);
        }
        self.few.push((pin, net, latest.0));
        *latest = (self.few.len() - 1, count + 1);
        net
    }
}

fn named(net: &NetEntry) -> String {
    if net.name.is_empty() { format!("the net with code {}", net.code) } else { net.name.clone() }
}
