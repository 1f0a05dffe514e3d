//! References: strings of zener diodes and diodes to ground, packaged references, and what feeds them.

use crate::circuit::{Circuit, DeviceId, DeviceKind, NetId};

use super::super::model::RegulatorKind;
use super::super::rectifier::anode;
use super::super::walk::{SAMPLE, chains};
use super::model::{Reference, ReferenceFeed, ReferenceKind};
use super::network::Network;
use super::sense::Ends;
use super::supply::is_rail;

/// Longest string of diodes that is followed.
const LONGEST: usize = 6;
/// A net with more pins than this lies inside no string and is held by none.
const MOST_PINS: usize = 16;
/// How many parts a feed is followed through.
const FEED_PARTS: usize = 12;

/// Which way a two-ended diode or zener lets a reference voltage stand at the near net: above its far end or below.
fn raises(circuit: &Circuit, device: DeviceId, near: NetId) -> Option<bool> {
    let part = circuit.device(device);
    let anode = anode(part).and_then(|pin| circuit.net_of(device, pin))?;
    match part.kind {
        DeviceKind::Zener => Some(anode != near),
        DeviceKind::Diode | DeviceKind::Led => Some(anode == near),
        _ => None,
    }
}

/// A string of zener diodes and diodes from a net to ground, or to one of `ends`, that holds the net above
/// (`above`) or below it.
pub(super) fn string(circuit: &Circuit, net: NetId, above: bool, ends: &[NetId]) -> Option<Vec<DeviceId>> {
    let mut at = net;
    let mut found: Vec<DeviceId> = Vec::new();
    while found.len() < LONGEST {
        if !found.is_empty() && (is_rail(circuit, at) || circuit.pin_count(at) > MOST_PINS) {
            return None;
        }
        let fits = |device: DeviceId| !found.contains(&device) && raises(circuit, device, at) == Some(above);
        let next: Vec<_> = circuit.neighbours(at).take(SAMPLE).filter(|(device, _)| fits(*device)).collect();
        let ending = |far: NetId| circuit.net(far).ground || ends.contains(&far);
        let (device, far) = next.iter().find(|(_, far)| ending(*far)).or(next.first()).copied()?;
        found.push(device);
        if ending(far) {
            return Some(found);
        }
        at = far;
    }
    None
}

/// Zener where one is among them, else diodes.
pub(super) fn string_kind(circuit: &Circuit, devices: &[DeviceId]) -> ReferenceKind {
    let zener = devices.iter().any(|device| circuit.device(*device).kind == DeviceKind::Zener);
    if zener { ReferenceKind::Zener } else { ReferenceKind::Diodes }
}

/// The reference that holds a net itself, standing above ground or below it.
pub(super) fn holding(network: &Network<'_>, net: NetId, above: bool) -> Option<Reference> {
    let circuit = network.circuit;
    let told = network.regulators(net).iter().find(|one| {
        (one.polarity == crate::knowledge::Sign::Positive) == above
            && matches!(one.kind, RegulatorKind::Shunt | RegulatorKind::Reference)
    });
    if let Some(told) = told {
        let kind = if told.kind == RegulatorKind::Shunt { ReferenceKind::Shunt } else { ReferenceKind::Series };
        return Some(Reference::held(kind, vec![told.device], net));
    }
    // What clamps a rail is no reference.
    if is_rail(circuit, net) || circuit.pin_count(net) > MOST_PINS {
        return None;
    }
    let devices = string(circuit, net, above, &[])?;
    let kind = string_kind(circuit, &devices);
    Some(Reference::held(kind, devices, net))
}

/// The rail that a regulator other than this one holds, as a reference.
pub(super) fn rail(network: &Network<'_>, net: NetId, above: bool, ends: &Ends) -> Option<Reference> {
    let told = network.regulators(net).iter().find(|one| {
        (one.polarity == crate::knowledge::Sign::Positive) == above && one.kind == RegulatorKind::Series
    })?;
    let apart = !ends.input.contains(&net) && !ends.output.contains(&net);
    apart.then(|| Reference::held(ReferenceKind::Rail, vec![told.device], net))
}

/// What feeds a reference.
pub(super) fn feed(network: &Network<'_>, reference: &Reference, ends: &Ends) -> Option<ReferenceFeed> {
    match reference.kind {
        ReferenceKind::BaseEmitter | ReferenceKind::Packaged => Some(ReferenceFeed::Internal),
        ReferenceKind::Series | ReferenceKind::Rail => {
            let told =
                network.regulators(reference.net).iter().find(|one| reference.devices.contains(&one.device))?;
            Some(ends.feed(told.input_net?))
        }
        ReferenceKind::Zener | ReferenceKind::Diodes | ReferenceKind::Shunt if reference.in_sense => {
            Some(ReferenceFeed::Output)
        }
        _ => by_resistors(network.circuit, reference.net, ends).or_else(|| by_others(network, reference, ends)),
    }
}

/// The supply at the end of the resistors that feed a net: of several the one through the least resistance.
fn by_resistors(circuit: &Circuit, held: NetId, ends: &Ends) -> Option<ReferenceFeed> {
    let stops: Vec<NetId> = ends.input.iter().chain(&ends.output).copied().collect();
    let resistance = |devices: &[DeviceId]| -> f64 {
        let ohms = |device: &DeviceId| circuit.device(*device).amount.as_ref().map_or(0.0, |amount| amount.amount);
        devices.iter().map(ohms).sum()
    };
    let supplies = chains(circuit, held, &stops).into_iter().filter(|chain| {
        !circuit.net(chain.end).ground && (stops.contains(&chain.end) || is_rail(circuit, chain.end))
    });
    let mut supplies: Vec<_> = supplies.map(|chain| (resistance(&chain.devices), chain.end)).collect();
    supplies.sort_by(|one, other| one.0.total_cmp(&other.0));
    supplies.first().map(|(_, end)| ends.feed(*end))
}

/// The first supply beyond diodes, resistors and current sources that feed a net.
fn by_others(network: &Network<'_>, reference: &Reference, ends: &Ends) -> Option<ReferenceFeed> {
    let circuit = network.circuit;
    let mut nets = vec![reference.net];
    let mut next = 0;
    while let Some(net) = nets.get(next).copied() {
        next += 1;
        let apart = net != reference.net;
        if apart && (ends.input.contains(&net) || ends.output.contains(&net) || is_rail(circuit, net)) {
            return Some(ends.feed(net));
        }
        let through = circuit.neighbours(net).take(SAMPLE).filter(|(device, far)| {
            let kind = circuit.device(*device).kind;
            let feeds = matches!(kind, DeviceKind::Resistor | DeviceKind::Diode | DeviceKind::Schottky);
            feeds && !reference.devices.contains(device) && !circuit.net(*far).ground
        });
        let sources = network.collectors(net).map(|source| source.emitter);
        let follow: Vec<NetId> = through.map(|(_, far)| far).chain(sources).collect();
        for far in follow {
            if !circuit.net(far).ground && !nets.contains(&far) && nets.len() < FEED_PARTS {
                nets.push(far);
            }
        }
    }
    None
}
