//! Builds the circuit from a netlist.

use std::collections::{BTreeSet, HashMap};

use petgraph::graph::UnGraph;

use crate::netlist::{Component, LibraryPart, Netlist};
use crate::source::Problem;

use super::fitted::fitted;
use super::ground::mark_grounds;
use super::kind::{Clues, nature};
use super::model::{Circuit, Device, DeviceId, DeviceKind, Net, NetId, Node, Pin};
use super::parts::Parts;
use super::pins::{Connection, pins};
use super::value::component_value;

impl Circuit {
    /// Builds the board's graph. What is odd about the netlist as a circuit comes back as problems; nothing is left out
    /// for it.
    #[must_use]
    pub fn build(netlist: &Netlist) -> (Self, Vec<Problem>) {
        let mut builder = Builder::new(netlist);
        builder.add_nets();
        let connections = builder.connections();
        builder.add_devices(&connections);
        builder.add_edges();
        let Builder { mut circuit, problems, .. } = builder;
        mark_grounds(&mut circuit);
        (circuit, problems)
    }
}

struct Builder<'a> {
    netlist: &'a Netlist,
    circuit: Circuit,
    problems: Vec<Problem>,
    /// Components in order, then those that only nets name.
    components: Vec<Component>,
    /// Components by reference; of several with the same one, the first.
    places: HashMap<&'a str, usize>,
}

impl<'a> Builder<'a> {
    fn new(netlist: &'a Netlist) -> Self {
        let circuit = Circuit {
            graph: UnGraph::with_capacity(netlist.components.len() + netlist.nets.len(), netlist.node_count()),
            devices: Vec::with_capacity(netlist.components.len()),
            nets: Vec::with_capacity(netlist.nets.len()),
            by_reference: HashMap::with_capacity(netlist.components.len()),
            by_name: HashMap::with_capacity(netlist.nets.len()),
            whole: netlist.is_complete(),
        };
        Self { netlist, circuit, problems: Vec::new(), components: Vec::new(), places: HashMap::new() }
    }

    fn add_nets(&mut self) {
        for entry in &self.netlist.nets {
            let name = if entry.name.is_empty() { format!("net {}", entry.code) } else { entry.name.clone() };
            let net = Net {
                name: name.clone(),
                code: entry.code.clone(),
                ground: false,
                span: entry.span,
                name_span: entry.name_span,
            };
            let id = NetId(self.circuit.graph.add_node(Node::Net(net)));
            self.circuit.nets.push(id);
            self.circuit.by_name.entry(name).or_default().push(id);
        }
    }

    /// What nets say about each component, in the order of `components`, which gets the parts that only nets name.
    fn connections(&mut self) -> Vec<Vec<Connection<'a>>> {
        let netlist = self.netlist;
        self.components.clone_from(&netlist.components);
        let mut connections: Vec<Vec<Connection<'a>>> = vec![Vec::new(); netlist.components.len()];
        for (index, component) in netlist.components.iter().enumerate() {
            if self.places.contains_key(component.reference.as_str()) {
                let message =
                    format!("several parts are called {}: its connections go to the first", component.reference);
                self.problems.push(
                    Problem::warning(message)
                        .at(&netlist.source, component.reference_span, "named again here")
                        .help("annotate the schematic and export it again"),
                );
            } else {
                self.places.insert(&component.reference, index);
            }
        }
        for (entry, id) in netlist.nets.iter().zip(&self.circuit.nets) {
            let open = connects_nothing(&entry.name) && entry.nodes.len() < 2;
            for node in &entry.nodes {
                let next = connections.len();
                let place = *self.places.entry(&node.reference).or_insert(next);
                if place == next {
                    connections.push(Vec::new());
                    self.components.push(Component { reference: node.reference.clone(), ..Component::default() });
                    self.problems.push(
                        Problem::warning(format!(
                            "net {} has a pin of {}, which is no part",
                            entry.name, node.reference
                        ))
                        .at(&netlist.source, node.span, "no part has this reference"),
                    );
                }
                if let Some(of_part) = connections.get_mut(place) {
                    of_part.push((node, (!open).then_some(*id)));
                }
            }
        }
        connections
    }

    fn add_devices(&mut self, connections: &[Vec<Connection<'a>>]) {
        let netlist = self.netlist;
        let parts = Parts::new(&netlist.parts);
        for (index, (component, of_part)) in std::mem::take(&mut self.components).iter().zip(connections).enumerate()
        {
            let part = parts.of(component);
            let found = pins(part, of_part);
            if let Some(number) = found.split.first() {
                let message = format!("pin {number} of {} is on several nets", component.reference);
                let span = of_part
                    .iter()
                    .find(|(node, _)| node.pin == **number)
                    .map_or(component.span, |(node, _)| node.span);
                self.problems.push(Problem::warning(message).at(&netlist.source, span, "on another net too"));
            }
            let device = device(component, index, part, found.pins);
            let id = DeviceId(self.circuit.graph.add_node(Node::Device(Box::new(device))));
            self.circuit.devices.push(id);
            self.circuit.by_reference.entry(component.reference.clone()).or_insert(id);
        }
    }

    /// Adds the pins, net by net, in the reverse order of the file: petgraph lists the newest edge of a node first.
    fn add_edges(&mut self) {
        let mut edges = Vec::new();
        for id in &self.circuit.devices {
            let pins = self.circuit.device(*id).pins.iter().enumerate();
            edges.extend(pins.filter_map(|(index, pin)| Some((pin.net?, pin.span, *id, index))));
        }
        edges.sort_by_key(|(net, span, device, index)| (*net, *span, *device, *index));
        for (net, _, device, pin) in edges.into_iter().rev() {
            self.circuit.graph.add_edge(device.0, net.0, pin);
        }
    }
}

/// Whether a net's name says that it was made for a pin that is left open.
fn connects_nothing(name: &str) -> bool {
    name.trim_start_matches('/').starts_with("unconnected-(")
}

fn device(component: &Component, index: usize, part: Option<&LibraryPart>, pins: Vec<Pin>) -> Device {
    let keywords = component.fields.iter().find(|field| field.name == "ki_keywords");
    let described = if component.description.is_empty() {
        part.map(|part| part.description.clone()).unwrap_or_default()
    } else {
        component.description.clone()
    };
    let mut device = Device {
        reference: component.reference.clone(),
        value: component.value.clone(),
        kind: DeviceKind::Unknown,
        polarity: None,
        polarized: false,
        amount: None,
        fitted: super::Fitted::Yes,
        library: component.library.clone(),
        part: component.part.clone(),
        fields: component.fields.clone(),
        sheet: component.sheet.clone(),
        description: described,
        description_of_other: component.description.is_empty()
            && part.is_some_and(|part| part.part != component.part),
        keywords: keywords.map(|field| field.value.clone()).unwrap_or_default(),
        footprint: component.footprint.clone(),
        ends: ends(&pins),
        pins,
        component: index,
    };
    let nature = nature(&Clues {
        library: &device.library,
        part: &device.part,
        description: &device.description,
        keywords: &device.keywords,
        pins: &device.pins,
        reference: &device.reference,
        value: &device.value,
    });
    device.kind = nature.kind;
    device.polarity = nature.polarity;
    device.polarized = nature.polarized;
    device.fitted = fitted(&device);
    device.amount = component_value(&device);
    device
}

fn ends(pins: &[Pin]) -> Option<[NetId; 2]> {
    let nets: BTreeSet<NetId> = pins.iter().filter_map(|pin| pin.net).collect();
    match nets.into_iter().collect::<Vec<_>>()[..] {
        [one, other] => Some([one, other]),
        _ => None,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::netlist::{Field, Format, NetEntry, NetNode};
    use crate::source::{Source, Span};

    fn component(reference: &str, value: &str, part: &str) -> Component {
        let (reference, value, part) = (reference.to_owned(), value.to_owned(), part.to_owned());
        Component { reference, value, library: "Device".to_owned(), part, ..Component::default() }
    }

    fn netlist(components: Vec<Component>, nets: &[(&str, &[(&str, &str)])]) -> Netlist {
        let mut at = 0;
        let mut node = |(reference, pin): &(&str, &str)| {
            at += 10;
            let (reference, pin) = ((*reference).to_owned(), (*pin).to_owned());
            NetNode { reference, pin, span: Span::new(at, at + 5), ..NetNode::default() }
        };
        let nets = nets.iter().enumerate().map(|(code, (name, nodes))| NetEntry {
            code: code.to_string(),
            name: (*name).to_owned(),
            nodes: nodes.iter().map(&mut node).collect(),
            ..NetEntry::default()
        });
        Netlist {
            source: Source::new("x.net", ""),
            format: Format::D,
            version: "D".to_owned(),
            schematic: String::new(),
            schematic_span: Span::default(),
            tool: String::new(),
            components,
            parts: Vec::new(),
            nets: nets.collect(),
            problems: Vec::new(),
        }
    }

    #[test]
    fn pins_on_a_net_come_in_order_of_the_file() {
        let parts = vec![component("R2", "1k", "R"), component("R1", "1k", "R"), component("C1", "1u", "C")];
        let nets: &[(&str, &[(&str, &str)])] =
            &[("A", &[("R1", "1"), ("C1", "1"), ("R2", "2")]), ("GND", &[("C1", "2"), ("R1", "2")])];
        let (circuit, problems) = Circuit::build(&netlist(parts, nets));
        assert!(problems.is_empty());
        let a = circuit.net_named("A").unwrap();
        let on: Vec<_> = circuit.devices_on(a).map(|id| circuit.device(id).reference.as_str()).collect();
        assert_eq!(on, ["R1", "C1", "R2"]);
        assert_eq!(circuit.pin_count(a), 3);
        let ground = circuit.net_named("GND").unwrap();
        let c1 = circuit.device_named("C1").unwrap();
        assert_eq!(circuit.other_end(c1, a), Some(ground));
        assert_eq!(circuit.other_end(circuit.device_named("R2").unwrap(), a), None);
        assert_eq!(circuit.grounds().collect::<Vec<_>>(), [ground]);
        assert_eq!(circuit.neighbours(ground).count(), 2);
    }

    #[test]
    fn nets_of_one_name_stay_apart_and_unnamed_ones_are_named_by_code() {
        let parts = vec![component("R1", "1k", "R"), component("R2", "1k", "R")];
        let (circuit, _) =
            Circuit::build(&netlist(parts, &[("", &[("R1", "1")]), ("", &[("R1", "2")]), ("X", &[]), ("X", &[])]));
        let names: Vec<_> = circuit.nets().map(|id| circuit.net(id).name.as_str()).collect();
        assert_eq!(names, ["net 0", "net 1", "X", "X"]);
        assert_eq!(circuit.nets_named("X").len(), 2);
        assert!(circuit.ends(circuit.device_named("R1").unwrap()).is_some());
    }

    #[test]
    fn a_pin_that_is_left_open_on_purpose_is_on_no_net() {
        let nets: &[(&str, &[(&str, &str)])] = &[("unconnected-(R1-Pad1)", &[("R1", "1")])];
        let (circuit, _) = Circuit::build(&netlist(vec![component("R1", "1k", "R")], nets));
        let pin = &circuit.device(circuit.device_named("R1").unwrap()).pins[0];
        assert_eq!((pin.net, pin.span), (None, Span::new(10, 15)));
    }

    #[test]
    fn odd_references_are_told_and_kept() {
        let parts = vec![component("R?", "1k", "R"), component("R?", "2k", "R")];
        let nets: &[(&str, &[(&str, &str)])] = &[("A", &[("R?", "1"), ("U9", "4")]), ("B", &[("R?", "1")])];
        let (circuit, problems) = Circuit::build(&netlist(parts, nets));
        let messages: Vec<_> = problems.iter().map(Problem::message).collect();
        assert_eq!(
            messages,
            [
                "several parts are called R?: its connections go to the first",
                "net A has a pin of U9, which is no part",
                "pin 1 of R? is on several nets"
            ]
        );
        assert_eq!(circuit.devices().len(), 3);
        assert_eq!(circuit.device(circuit.device_named("U9").unwrap()).kind, DeviceKind::Integrated);
        assert_eq!(circuit.device(circuit.device_named("R?").unwrap()).value, "1k");
    }

    #[test]
    fn parts_that_are_not_fitted_are_skipped_where_asked() {
        let mut left_out = component("R1", "1k", "R");
        left_out.fields.push(Field { name: "dnp".to_owned(), value: String::new() });
        let (circuit, _) = Circuit::build(&netlist(vec![left_out], &[("A", &[("R1", "1")])]));
        let a = circuit.net_named("A").unwrap();
        assert_eq!((circuit.pins_on(a).count(), circuit.fitted_on(a).count()), (1, 0));
    }

    #[test]
    fn a_value_is_read_for_what_the_part_is_and_a_placeholder_is_none() {
        let parts = vec![component("R10", "R10", "R"), component("R11", "R10", "R"), component("C1", "10", "CP")];
        let (circuit, _) = Circuit::build(&netlist(parts, &[]));
        let amounts: Vec<_> =
            circuit.devices().map(|id| circuit.device(id).amount.as_ref().map(|read| read.amount)).collect();
        assert_eq!(amounts, [None, Some(0.1), Some(10e-6)]);
    }

    #[test]
    fn a_ground_can_be_marked_by_name() {
        let (mut circuit, _) =
            Circuit::build(&netlist(vec![component("R1", "1k", "R")], &[("-BATT", &[("R1", "1")])]));
        assert_eq!(circuit.mark_ground(["-BATT", "NOPE"]), ["NOPE"]);
        assert_eq!(circuit.grounds().count(), 1);
    }

    #[test]
    fn a_net_of_many_pins_is_built_and_walked_in_linear_time() {
        let parts = (0..100_000).map(|index| component(&format!("R{index}"), "1k", "R")).collect();
        let references: Vec<String> = (0..100_000).map(|index| format!("R{index}")).collect();
        let nodes: Vec<(&str, &str)> = references.iter().map(|reference| (reference.as_str(), "1")).collect();
        let others: Vec<(&str, &str)> = references.iter().map(|reference| (reference.as_str(), "2")).collect();
        let (circuit, _) = Circuit::build(&netlist(parts, &[("A", &nodes), ("B", &others)]));
        assert_eq!(circuit.neighbours(circuit.net_named("A").unwrap()).count(), 100_000);
    }
}
