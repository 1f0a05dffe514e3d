//! Builds the circuit from a netlist.

use std::collections::{BTreeSet, HashMap, HashSet};

use petgraph::graph::UnGraph;

use crate::netlist::{Component, LibraryPart, Netlist};
use crate::source::Problem;

use super::fitted::fitted;
use super::ground::mark_grounds;
use super::kind::{Clues, nature};
use super::model::{Circuit, Device, DeviceId, DeviceKind, Net, NetId, Node, Pin};
use super::parts::Parts;
use super::pins::{Connection, pins};

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
                let message = format!("several parts are called {}: its connections go to the first", component.reference);
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
                        Problem::warning(format!("net {} has a pin of {}, which is no part", entry.name, node.reference))
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
        for (index, (component, of_part)) in std::mem::take(&mut self.components).iter().zip(connections).enumerate() {
            let part = parts.of(component);
            let found = pins(part, of_part);
            if let Some(number) = found.split.first() {
                let message = format!("pin {number} of {} is on several nets", component.reference);
                let span = of_part.iter().find(|(node, _)| node.pin == **number).map_or(component.span, |(node, _)| node.span);
                self.problems.push(Problem::warning(message).at(&netlist.source, span, "on another net too"));
            }
            let device = device(component, index, part, found.pins);
            let id = DeviceId(self.circuit.graph.add_node(Node::Device(device)));
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
    device
}

fn ends(pins: &[Pin]) -> Option<[NetId; 2]> {
    let nets: BTreeSet<NetId> = pins.iter().filter_map(|pin| pin.net).collect();
    match nets.into_iter().collect::<Vec<_>>()[..] {
        [one, other] => Some([one, other]),
        _ => None,
    }
}
