//! The pins of one device: from its library part, completed and corrected by what nets say.

use std::collections::{HashMap, HashSet};

use crate::netlist::{LibraryPart, NetNode};
use crate::source::Span;

use super::model::{NetId, Pin, PinType};

impl PinType {
    /// Reads a type as any version spells it. Of a combined one (`passive+no_connect`) the first part counts: the rest
    /// only says how the sheet uses the pin.
    #[must_use]
    pub fn read(text: &str) -> Self {
        let first = text.split('+').next().unwrap_or_default().trim();
        SPELLINGS
            .iter()
            .find(|(spelling, _)| first.eq_ignore_ascii_case(spelling))
            .map_or(Self::Unspecified, |(_, kind)| *kind)
    }
}

/// `power_in+no_connect`: the schematic has a no-connect mark on the pin.
fn is_marked_open(text: &str) -> bool {
    text.split('+').skip(1).any(|part| part.trim().eq_ignore_ascii_case("no_connect"))
}

const SPELLINGS: &[(&str, PinType)] = &[
    ("input", PinType::Input),
    ("output", PinType::Output),
    ("bidirectional", PinType::Bidirectional),
    ("BiDi", PinType::Bidirectional),
    ("tri_state", PinType::TriState),
    ("3state", PinType::TriState),
    ("passive", PinType::Passive),
    ("power_in", PinType::PowerIn),
    ("power_out", PinType::PowerOut),
    ("open_collector", PinType::OpenCollector),
    ("openCol", PinType::OpenCollector),
    ("open_emitter", PinType::OpenEmitter),
    ("openEm", PinType::OpenEmitter),
    ("no_connect", PinType::NoConnect),
    ("NotConnected", PinType::NoConnect),
    ("free", PinType::Free),
    ("unspecified", PinType::Unspecified),
    ("unspc", PinType::Unspecified),
];

/// One node with the net that it stands for; `None` for a net that connects nothing.
pub(super) type Connection<'a> = (&'a NetNode, Option<NetId>);

/// The pins of a device, and the numbers of pins that lie on several nets.
pub(super) struct Pins<'a> {
    pub(super) pins: Vec<Pin>,
    pub(super) split: Vec<&'a str>,
}

/// Puts together the pins of a device. A pin that is on several nets is listed once for each of them; a repeated node
/// counts once.
pub(super) fn pins<'a>(part: Option<&'a LibraryPart>, connections: &[Connection<'a>]) -> Pins<'a> {
    let mut pins = Vec::new();
    let mut numbers: HashMap<&str, usize> = HashMap::new();
    for pin in part.map_or(&[][..], |part| &part.pins) {
        numbers.entry(&pin.number).or_insert_with(|| {
            pins.push(Pin {
                number: pin.number.clone(),
                name: plain_name(&pin.name).to_owned(),
                kind: PinType::read(&pin.kind),
                marked_open: is_marked_open(&pin.kind),
                net: None,
                span: Span::default(),
            });
            pins.len() - 1
        });
    }
    let mut split = Vec::new();
    let mut places: HashSet<(&str, Option<NetId>)> = HashSet::new();
    for (node, net) in connections {
        if !places.insert((&node.pin, *net)) {
            continue;
        }
        let known = numbers.get(node.pin.as_str()).and_then(|index| pins.get_mut(*index));
        match known {
            Some(pin) if pin.span == Span::default() => connect(pin, node, *net),
            Some(pin) => {
                let mut again = pin.clone();
                connect(&mut again, node, *net);
                pins.push(again);
                split.push(node.pin.as_str());
            }
            None => {
                numbers.insert(&node.pin, pins.len());
                pins.push(named_by_net(node, *net));
            }
        }
    }
    Pins { pins, split }
}

/// A node's own data win over the library part's: they are those of the symbol as placed.
fn connect(pin: &mut Pin, node: &NetNode, net: Option<NetId>) {
    if !node.kind.is_empty() {
        pin.kind = PinType::read(&node.kind);
        pin.marked_open = is_marked_open(&node.kind);
    }
    if !node.function.is_empty() {
        let without = without_number(&node.function, &node.pin);
        // Version 10 writes `VOUT_5` for pin 5; a pin that is really called `OUT_5` has that name in the library too.
        let name = if plain_name(without) == pin.name { without } else { &node.function };
        pin.name = plain_name(name).to_owned();
    }
    pin.net = net;
    pin.span = node.span;
}

/// A pin that no library part has: its name can only lose a suffix that equals its number.
fn named_by_net(node: &NetNode, net: Option<NetId>) -> Pin {
    Pin {
        number: node.pin.clone(),
        name: plain_name(without_number(&node.function, &node.pin)).to_owned(),
        kind: PinType::read(&node.kind),
        marked_open: is_marked_open(&node.kind),
        net,
        span: node.span,
    }
}

/// `VOUT_5` of pin `5` is `VOUT`; an unnamed pin's function is its number alone in version 10.
fn without_number<'a>(function: &'a str, number: &str) -> &'a str {
    if number.is_empty() {
        return function;
    }
    function.strip_suffix(number).and_then(|name| name.strip_suffix('_')).unwrap_or(function)
}

fn plain_name(name: &str) -> &str {
    if name == "~" { "" } else { name }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::netlist::PartPin;

    fn part(pins: &[(&str, &str, &str)]) -> LibraryPart {
        let pin = |(number, name, kind): &(&str, &str, &str)| PartPin {
            number: (*number).to_owned(),
            name: (*name).to_owned(),
            kind: (*kind).to_owned(),
        };
        LibraryPart { pins: pins.iter().map(pin).collect(), ..LibraryPart::default() }
    }

    fn node(pin: &str, function: &str, kind: &str, at: usize) -> NetNode {
        NetNode {
            reference: "U1".to_owned(),
            pin: pin.to_owned(),
            function: function.to_owned(),
            kind: kind.to_owned(),
            span: Span::new(at, at + 5),
        }
    }

    fn net(index: usize) -> Option<NetId> {
        Some(NetId(petgraph::graph::NodeIndex::new(index)))
    }

    fn names(pins: &[Pin]) -> Vec<(&str, &str)> {
        pins.iter().map(|pin| (pin.number.as_str(), pin.name.as_str())).collect()
    }

    #[test]
    fn every_spelling_of_a_pin_type_is_read() {
        assert_eq!(PinType::read("BiDi"), PinType::Bidirectional);
        assert_eq!(PinType::read("3state"), PinType::read("tri_state"));
        assert_eq!(PinType::read("openCol"), PinType::OpenCollector);
        assert_eq!(PinType::read("NotConnected"), PinType::NoConnect);
        assert_eq!(PinType::read("passive+no_connect"), PinType::Passive);
        assert!(is_marked_open("passive+no_connect") && !is_marked_open("no_connect"));
        assert_eq!(PinType::read("unspc"), PinType::Unspecified);
        assert_eq!(PinType::read("something new"), PinType::Unspecified);
    }

    #[test]
    fn a_number_hung_on_a_pin_name_goes_only_where_the_library_agrees() {
        let library = part(&[("5", "VOUT", "power_out"), ("3", "OUT_3", "output"), ("4", "~", "passive")]);
        let nodes = [node("5", "VOUT_5", "power_out", 0), node("3", "OUT_3", "output", 10), node("4", "4", "", 20)];
        let connections: Vec<_> = nodes.iter().map(|node| (node, net(0))).collect();
        assert_eq!(names(&pins(Some(&library), &connections).pins), [("5", "VOUT"), ("3", "OUT_3"), ("4", "4")]);
        assert_eq!(names(&pins(None, &connections).pins), [("5", "VOUT"), ("3", "OUT"), ("4", "4")]);
    }

    #[test]
    fn pins_that_only_nets_name_follow_those_of_the_library() {
        let library = part(&[("VI", "VI", "input"), ("GND", "GND", "input")]);
        let nodes = [node("9", "", "", 0), node("GND", "", "", 10)];
        let connections: Vec<_> = nodes.iter().map(|node| (node, net(1))).collect();
        let found = pins(Some(&library), &connections).pins;
        assert_eq!(names(&found), [("VI", "VI"), ("GND", "GND"), ("9", "")]);
        assert_eq!(found.iter().map(|pin| pin.net).collect::<Vec<_>>(), [None, net(1), net(1)]);
    }

    #[test]
    fn a_repeated_node_counts_once_and_a_pin_on_two_nets_twice() {
        let nodes = [node("1", "", "", 0), node("1", "", "", 10), node("1", "", "", 20)];
        let connections = [(&nodes[0], net(0)), (&nodes[1], net(0)), (&nodes[2], net(1))];
        let found = pins(None, &connections);
        assert_eq!(found.pins.len(), 2);
        assert_eq!(found.split, ["1"]);
    }
}
