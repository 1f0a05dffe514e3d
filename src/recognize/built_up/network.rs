//! The parts of a board that a built-up regulator can consist of, by the nets on which they lie.

use std::collections::HashMap;

use crate::circuit::{Circuit, NetId};

use super::super::find::Found;
use super::super::model::{Regulator, RegulatorKind};
use super::opamp::{OpAmpUnit, op_amps};
use super::transistor::{Transistor, transistors};

/// Looked up by net, never gone through in order of a hash.
pub(super) struct Network<'a> {
    pub(super) circuit: &'a Circuit,
    /// In order of the file.
    pub(super) transistors: Vec<Transistor>,
    by_collector: HashMap<NetId, Vec<usize>>,
    by_emitter: HashMap<NetId, Vec<usize>>,
    op_amps: HashMap<NetId, Vec<OpAmpUnit>>,
    error_amplifiers: HashMap<NetId, Vec<Regulator>>,
    regulators: HashMap<NetId, Vec<Regulator>>,
}

impl<'a> Network<'a> {
    pub(super) fn new(circuit: &'a Circuit, found: &Found) -> Self {
        let mut network = Self {
            circuit,
            transistors: Vec::new(),
            by_collector: HashMap::new(),
            by_emitter: HashMap::new(),
            op_amps: HashMap::new(),
            error_amplifiers: HashMap::new(),
            regulators: HashMap::new(),
        };
        for id in circuit.devices().filter(|id| circuit.device(*id).is_fitted()) {
            network.transistors.extend(transistors(circuit, id));
            for op_amp in op_amps(circuit, id) {
                network.op_amps.entry(op_amp.output).or_default().push(op_amp);
            }
        }
        for (index, transistor) in network.transistors.iter().enumerate() {
            network.by_collector.entry(transistor.collector).or_default().push(index);
            network.by_emitter.entry(transistor.emitter).or_default().push(index);
        }
        for shunt in &found.error_amplifiers {
            if let Some(net) = shunt.output_net {
                network.error_amplifiers.entry(net).or_default().push(shunt.clone());
            }
        }
        for regulator in found.regulators.iter().filter(|one| one.kind != RegulatorKind::Switching) {
            if let Some(net) = regulator.output_net {
                network.regulators.entry(net).or_default().push(regulator.clone());
            }
        }
        network
    }

    /// Transistors whose collector or drain lies on a net.
    pub(super) fn collectors(&self, net: NetId) -> impl Iterator<Item = &Transistor> {
        self.by_collector.get(&net).into_iter().flatten().filter_map(|index| self.transistors.get(*index))
    }

    /// Transistors whose emitter or source lies on a net.
    pub(super) fn emitters(&self, net: NetId) -> impl Iterator<Item = &Transistor> {
        self.by_emitter.get(&net).into_iter().flatten().filter_map(|index| self.transistors.get(*index))
    }

    pub(super) fn op_amps(&self, output: NetId) -> &[OpAmpUnit] {
        self.op_amps.get(&output).map_or(&[], Vec::as_slice)
    }

    /// Programmable shunts used as amplifiers, by the net that they drive.
    pub(super) fn error_amplifiers(&self, output: NetId) -> &[Regulator] {
        self.error_amplifiers.get(&output).map_or(&[], Vec::as_slice)
    }

    /// Packaged regulators and references by the net that they hold.
    pub(super) fn regulators(&self, output: NetId) -> &[Regulator] {
        self.regulators.get(&output).map_or(&[], Vec::as_slice)
    }
}
