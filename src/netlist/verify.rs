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
    unique_references(source, components, problems);
    unique_codes(source, nets, problems);
    repeated_names(source, nets, problems);
    repeated_parts(source, parts, problems);
    known_references(source, components, nets, problems);
    pins_on_several_nets(source, nets, problems);
}

/// Keeps the items whose flag is set, in order.
fn keep<T>(items: &mut Vec<T>, flags: &[bool]) {
    if flags.contains(&false) {
        let mut flags = flags.iter().copied();
        items.retain(|_| flags.next().unwrap_or(true));
    }
}

fn unique_references(source: &Source, components: &mut Vec<Component>, problems: &mut Problems) {
    let mut seen = HashSet::with_capacity(components.len());
    let fresh: Vec<bool> = components.iter().map(|component| seen.insert(component.reference.as_str())).collect();
    for component in components.iter().zip(&fresh).filter_map(|(component, fresh)| (!fresh).then_some(component)) {
        problems.push(
            Problem::error(format!("the reference {} is used twice", component.reference))
                .at(source, component.reference_span, "the second component of this reference was left out")
                .help("annotate the schematic so that every part has its own reference, then export again"),
        );
    }
    keep(components, &fresh);
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

fn known_references(source: &Source, components: &[Component], nets: &[NetEntry], problems: &mut Problems) {
    let known: HashSet<&str> = components.iter().map(|component| component.reference.as_str()).collect();
    let mut told = HashSet::new();
    for node in nets.iter().flat_map(|net| &net.nodes) {
        if !known.contains(node.reference.as_str()) && told.insert(node.reference.as_str()) {
            problems.push(
                Problem::error(format!("{} is on a net but not among the components", node.reference))
                    .at(source, node.span, "what this part is cannot be told")
                    .help("export the netlist again from the schematic editor"),
            );
        }
    }
}

fn pins_on_several_nets(source: &Source, nets: &[NetEntry], problems: &mut Problems) {
    let count = nets.iter().map(|net| net.nodes.len()).sum();
    let mut home: HashMap<(&str, &str), &NetEntry> = HashMap::with_capacity(count);
    let mut told = HashSet::new();
    for net in nets {
        for node in &net.nodes {
            let pin = (node.reference.as_str(), node.pin.as_str());
            let first = *home.entry(pin).or_insert(net);
            if !std::ptr::eq(first, net) && told.insert(pin) {
                problems.push(
                    Problem::warning(format!("pin {} of {} is on several nets", node.pin, node.reference))
                        .at(source, node.span, format!("it is on {} too", named(first)))
                        .help("give every pin of the symbol its own number"),
                );
            }
        }
    }
}

fn named(net: &NetEntry) -> String {
    if net.name.is_empty() { format!("the net with code {}", net.code) } else { net.name.clone() }
}
