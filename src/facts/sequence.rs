//! Which regulators wait for which others before they start.

use std::collections::BTreeSet;

use petgraph::algo::kosaraju_scc;
use petgraph::graph::{DiGraph, NodeIndex};

use super::identity::of;
use super::{Definition, Facts, RailOrigin, SubjectKind, Value, ValueKind};
use crate::circuit::NetId;
use crate::recognize::{Regulator, RegulatorId};

/// How many series elements are followed upwards.
const LONGEST_PATH: usize = 64;

pub(super) const DEFINITIONS: &[Definition] = &[
    Definition {
        name: "in_start_cycle",
        of: SubjectKind::Regulator,
        kind: ValueKind::Flag,
        meaning: "it waits for another regulator which waits for it",
        defined_in: file!(),
        compute: |facts, subject| {
            of(facts, subject, |_| {
                Value::flag(facts.regulator_id(subject).is_some_and(|id| facts.cycle_of(id).is_some()))
            })
        },
    },
    Definition {
        name: "start_cycle",
        of: SubjectKind::Regulator,
        kind: ValueKind::Word(&[]),
        meaning: "the regulators of a circle in which each waits for the next",
        defined_in: file!(),
        compute: |facts, subject| {
            of(facts, subject, |_| {
                let cycle = facts.regulator_id(subject).and_then(|id| facts.cycle_of(id));
                match cycle {
                    Some(cycle) => Value::word(facts.named(cycle)),
                    None => Value::inapplicable("nothing waits for itself"),
                }
            })
        },
    },
];

impl Facts<'_> {
    fn regulator_id(&self, subject: super::Subject) -> Option<RegulatorId> {
        match subject {
            super::Subject::Regulator(id) => Some(id),
            _ => None,
        }
    }

    fn named(&self, cycle: &[RegulatorId]) -> String {
        let names: BTreeSet<&str> = cycle
            .iter()
            .filter_map(|id| self.design().regulators.get(id.0))
            .map(|regulator| self.part_of(regulator).reference.as_str())
            .collect();
        names.into_iter().collect::<Vec<_>>().join(", ")
    }

    fn cycle_of(&self, id: RegulatorId) -> Option<&[RegulatorId]> {
        self.start_cycles().iter().find(|cycle| cycle.binary_search(&id).is_ok()).map(Vec::as_slice)
    }

    /// Circles of at least two regulators, each sorted.
    pub(super) fn find_start_cycles(&self) -> Vec<Vec<RegulatorId>> {
        let mut graph: DiGraph<RegulatorId, ()> = DiGraph::new();
        let nodes: Vec<NodeIndex> = self.regulators().map(|(id, _)| graph.add_node(id)).collect();
        for (id, regulator) in self.regulators() {
            let Some(from) = nodes.get(id.0) else { continue };
            for needed in self.waits_for(regulator) {
                if let Some(to) = nodes.get(needed.0).filter(|_| needed != id) {
                    graph.add_edge(*from, *to, ());
                }
            }
        }
        let groups = kosaraju_scc(&graph).into_iter().filter(|group| group.len() > 1);
        let mut cycles: Vec<Vec<RegulatorId>> = groups
            .map(|group| {
                let mut ids: Vec<_> = group.into_iter().filter_map(|node| graph.node_weight(node).copied()).collect();
                ids.sort_unstable();
                ids
            })
            .collect();
        cycles.sort_unstable();
        cycles
    }

    /// The regulators without whose output this one does not start: that of its input, of its bias supply, of what
    /// switches it on.
    fn waits_for(&self, regulator: &Regulator) -> BTreeSet<RegulatorId> {
        let bias = regulator.roles.bias.iter().filter_map(|pin| self.circuit().net_of(regulator.device, *pin));
        let nets: Vec<NetId> = regulator.input_net.into_iter().chain(bias).collect();
        let mut needed: BTreeSet<RegulatorId> = nets.into_iter().filter_map(|net| self.made_by(net)).collect();
        needed.extend(self.enabled_by(regulator));
        needed
    }

    /// The regulator whose output a net hangs on and on nothing else.
    pub(super) fn made_by(&self, net: NetId) -> Option<RegulatorId> {
        let mut at = net;
        for _ in 0..LONGEST_PATH {
            match self.rail(at).origin {
                RailOrigin::Regulator(id) => return Some(id),
                RailOrigin::Through { from, .. } if self.flow().feeder_count(at) == 1 => at = from,
                _ => return None,
            }
        }
        None
    }
}
