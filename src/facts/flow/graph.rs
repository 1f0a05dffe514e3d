//! The structure of the supply: which net feeds which, through what.

use std::collections::HashMap;

use petgraph::Direction;
use petgraph::algo::kosaraju_scc;
use petgraph::graph::{DiGraph, NodeIndex};
use petgraph::visit::EdgeRef;

use super::element::{Element, feeds};
use super::seeds::{self, Seed};
use crate::circuit::{DeviceId, NetId};
use crate::facts::Facts;
use crate::recognize::{Regulator, RegulatorId, RegulatorKind};

/// How one supply net feeds another.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Link {
    /// Through a series element.
    Series(DeviceId),
    /// Through a regulator or converter.
    Regulator(RegulatorId),
}

/// An edge: the link, and what the series element is.
#[derive(Debug, Clone, Copy)]
struct Edge {
    link: Link,
    element: Option<Element>,
}

/// Which supply net feeds which.
#[derive(Debug)]
pub struct Flow {
    /// Nodes are added as they are found, so that what feeds a net first comes before it.
    graph: DiGraph<NetId, Edge>,
    nodes: HashMap<NetId, NodeIndex>,
    seeds: HashMap<NetId, Seed>,
    /// About how many volts a net has: enough for signs and the share of a converter's current.
    volts: HashMap<NetId, f64>,
}

impl Flow {
    /// The structure of a board's supply.
    pub(in crate::facts) fn of(facts: &Facts<'_>) -> Self {
        let mut flow =
            Self { graph: DiGraph::new(), nodes: HashMap::new(), seeds: HashMap::new(), volts: HashMap::new() };
        flow.grow(facts, seeds::first(facts));
        // A net that is only named like a supply is a source where nothing else feeds it.
        let rest = seeds::named(facts, |net| flow.nodes.contains_key(&net));
        flow.grow(facts, rest);
        flow.regulators(facts);
        flow
    }

    /// Adds sources, and everything that series elements carry on from them.
    fn grow(&mut self, facts: &Facts<'_>, found: Vec<(NetId, Seed, f64)>) {
        let mut queue = std::collections::VecDeque::new();
        for (net, seed, volts) in found {
            if self.nodes.contains_key(&net) {
                continue;
            }
            self.node(net);
            self.seeds.insert(net, seed);
            self.volts.insert(net, volts);
            queue.push_back(net);
        }
        while let Some(net) = queue.pop_front() {
            let volts = self.about(net);
            for (device, to, element) in feeds(facts.circuit(), net, volts >= 0.0) {
                if leads_back(facts, net, to) || self.seeds.contains_key(&to) {
                    continue;
                }
                let is_new = !self.nodes.contains_key(&to);
                if is_new {
                    self.node(to);
                    self.volts.insert(to, volts);
                    queue.push_back(to);
                }
                if is_new || self.is_another_gate(to, device, element) {
                    self.edge(net, to, Edge { link: Link::Series(device), element: Some(element) });
                }
            }
        }
    }

    /// Whether a net that a diode or transistor feeds is fed by another one too.
    fn is_another_gate(&self, net: NetId, device: DeviceId, element: Element) -> bool {
        element.is_gate()
            && self.feeders(net).all(|(_, known, kind)| known != device && kind.is_gate())
            && self.feeders(net).next().is_some()
    }

    fn regulators(&mut self, facts: &Facts<'_>) {
        for (id, regulator) in facts.regulators() {
            let (Some(input), Some(output)) = (regulator.input_net, regulator.output_net) else { continue };
            if input != output && !facts.circuit().net(output).ground {
                self.edge(input, output, Edge { link: Link::Regulator(id), element: None });
            }
        }
    }

    fn node(&mut self, net: NetId) -> NodeIndex {
        let graph = &mut self.graph;
        *self.nodes.entry(net).or_insert_with(|| graph.add_node(net))
    }

    fn edge(&mut self, from: NetId, to: NetId, edge: Edge) {
        let (from, to) = (self.node(from), self.node(to));
        self.graph.add_edge(from, to, edge);
    }

    /// About how many volts a net has, signed; zero where nothing tells.
    pub(super) fn about(&self, net: NetId) -> f64 {
        self.volts.get(&net).copied().unwrap_or(0.0)
    }

    pub(super) fn seed(&self, net: NetId) -> Option<&Seed> {
        self.seeds.get(&net)
    }

    /// The nets that feed this one through series elements, in the order in which they were found.
    pub(super) fn feeders(&self, net: NetId) -> impl Iterator<Item = (NetId, DeviceId, Element)> {
        let node = self.nodes.get(&net).copied();
        let edges = node.into_iter().flat_map(|node| self.graph.edges_directed(node, Direction::Incoming));
        let mut found: Vec<_> = edges
            .filter_map(|edge| match (edge.weight().link, edge.weight().element) {
                (Link::Series(device), Some(element)) => {
                    Some((edge.id(), *self.graph.node_weight(edge.source())?, device, element))
                }
                _ => None,
            })
            .collect();
        found.sort_by_key(|(id, ..)| *id);
        found.into_iter().map(|(_, net, device, element)| (net, device, element))
    }

    /// How many series elements feed a net.
    pub(in crate::facts) fn feeder_count(&self, net: NetId) -> usize {
        self.feeders(net).count()
    }

    /// The nets that a net feeds, with the links.
    pub fn fed(&self, net: NetId) -> impl Iterator<Item = (Link, NetId)> {
        let node = self.nodes.get(&net).copied();
        let edges = node.into_iter().flat_map(|node| self.graph.edges_directed(node, Direction::Outgoing));
        let mut found: Vec<_> = edges
            .filter_map(|edge| Some((edge.id(), edge.weight().link, *self.graph.node_weight(edge.target())?)))
            .collect();
        found.sort_by_key(|(id, ..)| *id);
        found.into_iter().map(|(_, link, net)| (link, net))
    }

    /// Every net, each after those that feed it; nets that feed each other in a circle in the order in which they were
    /// found.
    pub(super) fn downwards(&self) -> Vec<NetId> {
        let mut groups = kosaraju_scc(&self.graph);
        groups.reverse();
        for group in &mut groups {
            group.sort_unstable();
        }
        groups.into_iter().flatten().filter_map(|node| self.graph.node_weight(node).copied()).collect()
    }

    /// The circles of nets that feed each other, each in order of finding: a rail that feeds its own source.
    #[must_use]
    pub fn circles(&self) -> Vec<Vec<NetId>> {
        let groups = kosaraju_scc(&self.graph).into_iter().filter(|group| group.len() > 1);
        let mut circles: Vec<Vec<NodeIndex>> = groups
            .map(|mut group| {
                group.sort_unstable();
                group
            })
            .collect();
        circles.sort_unstable();
        let net = |node: NodeIndex| self.graph.node_weight(node).copied();
        circles.into_iter().map(|group| group.into_iter().filter_map(net).collect()).collect()
    }
}

/// A link from a part's own output to its input protects the part against a charged output, and the inductor of a
/// converter leads back to its switch pin: neither feeds anything.
fn leads_back(facts: &Facts<'_>, from: NetId, to: NetId) -> bool {
    let switched = |regulator: &Regulator| {
        regulator.kind == RegulatorKind::Switching
            && facts.part_of(regulator).pins.iter().any(|pin| pin.net == Some(to))
    };
    // Many parts share an input, few an output.
    facts.feeding(from).any(|regulator| regulator.input_net == Some(to) || switched(regulator))
}
