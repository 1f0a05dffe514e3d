//! From the control terminal of a pass transistor back to what drives it.

use crate::circuit::{Circuit, DeviceId, DeviceKind, NetId};

use super::super::model::Regulator;
use super::super::walk::SAMPLE;
use super::model::{Amplifier, AmplifierKind, Junction, Reference, ReferenceKind};
use super::network::Network;
use super::pass::Stage;
use super::reference::{holding, rail};
use super::sense::{Comparison, Ends, Sensed, compare, grounded_emitter, read};
use super::supply::is_rail;
use super::transistor::Transistor;

/// How many nets are looked at from one control terminal.
const MOST_NETS: usize = 24;
/// A net with more pins than this drives no control terminal.
const MOST_PINS: usize = 24;

/// What drives a pass transistor, as far as it regulates.
#[derive(Debug)]
pub(super) struct Drive {
    pub(super) amplifier: Option<Amplifier>,
    pub(super) sensed: Option<Sensed>,
    pub(super) reference: Reference,
    /// Transistors between the amplifier or reference and the control terminal.
    pub(super) drivers: Vec<Transistor>,
    /// The nets on that way, the control net first.
    pub(super) path: Vec<NetId>,
}

/// A net on the way back, with what lies between it and the control terminal.
#[derive(Debug, Clone)]
struct Step {
    net: NetId,
    /// Whether the control terminal falls when this net rises.
    inverted: bool,
    drivers: Vec<Transistor>,
    path: Vec<NetId>,
}

impl Step {
    fn first(net: NetId) -> Self {
        Self { net, inverted: false, drivers: Vec::new(), path: vec![net] }
    }

    fn to(&self, net: NetId, inverts: bool, driver: Option<Transistor>) -> Self {
        let mut step = self.clone();
        step.net = net;
        step.inverted ^= inverts;
        step.drivers.extend(driver);
        step.path.push(net);
        step
    }
}

/// Finds what regulates a pass stage: an error amplifier whose loop counteracts, else a reference that a follower's
/// control terminal is held by.
pub(super) fn drive(network: &Network<'_>, stage: &Stage, ends: &Ends) -> Option<Drive> {
    let circuit = network.circuit;
    let mut steps = vec![Step::first(stage.control)];
    let mut next = 0;
    let mut held = None;
    while let Some(step) = steps.get(next).cloned() {
        next += 1;
        if let Some(found) = amplified(network, stage, ends, &step) {
            return Some(found);
        }
        held = held.or_else(|| holds(network, stage, ends, &step));
        // A net that is given does not pass on what lies behind it.
        let given = !network.op_amps(step.net).is_empty() || !network.regulators(step.net).is_empty();
        if given || ends.cuts(circuit, step.net) || circuit.pin_count(step.net) > MOST_PINS {
            continue;
        }
        for onward in onwards(network, stage, &step) {
            let new = steps.iter().all(|known| known.net != onward.net);
            if new && !ends.cuts(circuit, onward.net) && steps.len() < MOST_NETS {
                steps.push(onward);
            }
        }
    }
    held
}

/// The nets from which a net is driven.
fn onwards(network: &Network<'_>, stage: &Stage, step: &Step) -> Vec<Step> {
    let foreign = |one: &&Transistor| stage.transistors.iter().all(|pass| pass != *one);
    let collectors = network.collectors(step.net).filter(foreign);
    let emitters = network.emitters(step.net).filter(foreign);
    let mut found: Vec<Step> = collectors.map(|one| step.to(one.control, true, Some(*one))).collect();
    found.extend(emitters.map(|one| step.to(one.control, false, Some(*one))));
    let circuit = network.circuit;
    let links = circuit.neighbours(step.net).take(SAMPLE).filter(|(device, _)| links(circuit, *device));
    found.extend(links.map(|(_, far)| step.to(far, false, None)));
    found
}

/// Whether a part passes a drive on.
fn links(circuit: &Circuit, device: DeviceId) -> bool {
    matches!(
        circuit.device(device).kind,
        DeviceKind::Resistor
            | DeviceKind::Diode
            | DeviceKind::Schottky
            | DeviceKind::Zener
            | DeviceKind::Led
            | DeviceKind::Ferrite
            | DeviceKind::NetTie
            | DeviceKind::Switch
    )
}

/// An error amplifier that drives a net, of those whose loop counteracts the first.
fn amplified(network: &Network<'_>, stage: &Stage, ends: &Ends, step: &Step) -> Option<Drive> {
    let by_op_amps = network.op_amps(step.net).iter().filter_map(|one| {
        let compared =
            compare(read(network, one.minus, ends, &step.path), read(network, one.plus, ends, &step.path))?;
        Some((AmplifierKind::OpAmp, vec![one.device], compared))
    });
    let by_shunts = network.error_amplifiers(step.net).iter().filter_map(|shunt| {
        let divider = shunt.divider.clone().filter(|divider| {
            divider.senses.is_some_and(|net| ends.output.contains(&net)) && !divider.upper.is_empty()
        })?;
        let sensed = Sensed { net: divider.senses?, divider: Some(divider) };
        let net = shunt.output_net?;
        let sensing = shunt.roles.adjust.first().and_then(|pin| network.circuit.net_of(shunt.device, *pin))?;
        let devices = vec![shunt.device];
        let reference = Reference::held(ReferenceKind::Shunt, devices, net);
        let compared = Comparison { sensing, comparing: sensing, sensed, reference, rising: false };
        Some((AmplifierKind::Shunt, vec![shunt.device], compared))
    });
    let own = |one: &&Transistor| stage.transistors.iter().all(|pass| pass.device != one.device);
    let by_transistors = network.collectors(step.net).filter(own).filter_map(|one| {
        let (kind, devices, compared) = compared_by(network, one, ends, step)?;
        Some((kind, devices, compared))
    });
    let counteracts = |compared: &Comparison| compared.rising ^ step.inverted ^ !stage.follower;
    let mut found = by_op_amps.chain(by_shunts).chain(by_transistors).filter(|(_, _, c)| !counteracts(c));
    let (kind, devices, compared) = found.next()?;
    let junction = junction(network, kind, step, ends, &compared);
    let own = |one: &&Regulator| kind == AmplifierKind::Shunt && devices.contains(&one.device);
    let shunt = network.error_amplifiers(step.net).iter().find(own).map(|one| Box::new(one.clone()));
    let amplifier = Amplifier {
        kind,
        devices,
        output: step.net,
        sensing: compared.sensing,
        comparing: compared.comparing,
        junction,
        shunt,
    };
    Some(Drive {
        amplifier: Some(amplifier),
        sensed: Some(compared.sensed),
        reference: compared.reference,
        drivers: step.drivers.clone(),
        path: step.path.clone(),
    })
}

/// What the junction of a single transistor does to its reference: where the base senses the output, an NPN transistor
/// conducts from a drop above what its emitter lies at.
fn junction(network: &Network<'_>, kind: AmplifierKind, step: &Step, ends: &Ends, compared: &Comparison) -> Junction {
    let own = compared.reference.kind == ReferenceKind::BaseEmitter || compared.reference.in_sense;
    let senses = |one: &&Transistor| one.control == compared.sensing || one.emitter == compared.sensing;
    let single = network.collectors(step.net).find(senses).filter(|_| kind == AmplifierKind::Transistor && !own);
    match single {
        Some(one) if (one.n == (one.control == compared.sensing)) == ends.positive => Junction::Adds,
        Some(_) => Junction::Takes,
        None => Junction::None,
    }
}

/// What a transistor compares whose collector drives the net: its base against that of another with the same emitter
/// net, or against its own emitter.
fn compared_by(
    network: &Network<'_>,
    one: &Transistor,
    ends: &Ends,
    step: &Step,
) -> Option<(AmplifierKind, Vec<DeviceId>, Comparison)> {
    let input = |net: NetId| read(network, net, ends, &step.path);
    let paired = |other: &&Transistor| {
        *other != one && other.n == one.n && other.bipolar == one.bipolar && other.control != one.control
    };
    if !is_rail(network.circuit, one.emitter) {
        for other in network.emitters(one.emitter).filter(paired).take(MOST_NETS) {
            if let Some(compared) = compare(input(one.control), input(other.control)) {
                let mut devices = vec![one.device, other.device];
                devices.dedup();
                return Some((AmplifierKind::Pair, devices, compared));
            }
        }
        let compared = compare(input(one.control), input(one.emitter))?;
        return Some((AmplifierKind::Transistor, vec![one.device], compared));
    }
    // On ground a base is only compared where the transistor drives the pass stage itself: two in a row are a switch.
    let grounded = network.circuit.net(one.emitter).ground && step.drivers.is_empty() && one.bipolar;
    let compared = grounded_emitter(network, one.control, ends).filter(|_| grounded);
    compared.map(|compared| (AmplifierKind::Transistor, vec![one.device], compared)).or_else(|| {
        let compared = compare(input(one.control), input(one.emitter))?;
        Some((AmplifierKind::Transistor, vec![one.device], compared))
    })
}

/// The reference that holds a follower's control terminal, directly or through followers.
fn holds(network: &Network<'_>, stage: &Stage, ends: &Ends, step: &Step) -> Option<Drive> {
    if !stage.follower || step.inverted {
        return None;
    }
    let buffered = || {
        let told = rail(network, step.net, ends.positive, ends)?;
        let own = network.regulators(step.net).iter().find(|one| told.devices.contains(&one.device))?;
        own.input_net.is_some_and(|net| ends.input.contains(&net)).then_some(told)
    };
    let reference = holding(network, step.net, ends.positive).or_else(buffered)?;
    let (drivers, path) = (step.drivers.clone(), step.path.clone());
    Some(Drive { amplifier: None, sensed: None, reference, drivers, path })
}
