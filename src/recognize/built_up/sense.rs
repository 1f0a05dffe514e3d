//! What the inputs of an amplifier see: the output, a reference, ground.

use crate::circuit::{Circuit, DeviceKind, NetId};

use super::super::divider;
use super::super::model::Divider;
use super::super::walk::{SAMPLE, chains};
use super::model::{Reference, ReferenceFeed, ReferenceKind};
use super::network::Network;
use super::opamp::OpAmpUnit;
use super::reference::{holding, rail, string, string_kind};
use super::supply::is_rail;

/// How many nets are looked at for a reference behind resistors.
const MOST_NETS: usize = 8;
/// A net with more pins than this is no input of an amplifier.
const MOST_PINS: usize = 24;

/// The supply lines at both ends of a pass transistor.
#[derive(Debug, Clone)]
pub(super) struct Ends {
    /// The line ahead of it.
    pub(super) input: Vec<NetId>,
    /// The line behind it.
    pub(super) output: Vec<NetId>,
    /// Whether the output stands above ground.
    pub(super) positive: bool,
}

impl Ends {
    pub(super) fn feed(&self, net: NetId) -> ReferenceFeed {
        if self.output.contains(&net) {
            ReferenceFeed::Output
        } else if self.input.contains(&net) {
            ReferenceFeed::Input
        } else {
            ReferenceFeed::Other(net)
        }
    }

    /// Whether a network is cut at a net.
    pub(super) fn cuts(&self, circuit: &Circuit, net: NetId) -> bool {
        self.input.contains(&net) || self.output.contains(&net) || is_rail(circuit, net)
    }
}

/// What senses the output.
#[derive(Debug, Clone)]
pub(super) struct Sensed {
    /// The net that is sensed.
    pub(super) net: NetId,
    pub(super) divider: Option<Divider>,
}

/// What an input of an amplifier sees.
#[derive(Debug)]
pub(super) struct Input {
    pub(super) net: NetId,
    pub(super) sensed: Option<Sensed>,
    pub(super) reference: Option<Reference>,
    /// A reference of the other sign: an inverting amplifier weighs it against the output.
    pub(super) opposite: Option<Reference>,
    pub(super) grounded: bool,
}

/// Reads an input; nets in `blocked` belong to the way from the amplifier to the pass transistor.
pub(super) fn read(network: &Network<'_>, net: NetId, ends: &Ends, blocked: &[NetId]) -> Input {
    let circuit = network.circuit;
    if circuit.net(net).ground {
        return Input { net, sensed: None, reference: None, opposite: None, grounded: true };
    }
    let reference = referenced(network, net, ends, ends.positive, blocked);
    // Resistors from a held net to the output feed the reference.
    let held = reference.as_ref().is_some_and(|reference| reference.net == net);
    let sensed = if held { None } else { sensed(circuit, net, ends) };
    let opposite = referenced(network, net, ends, !ends.positive, blocked);
    let opposite = opposite.map(|reference| weighed(circuit, net, reference));
    Input { net, sensed, reference, opposite, grounded: false }
}

fn sensed(circuit: &Circuit, net: NetId, ends: &Ends) -> Option<Sensed> {
    if ends.output.contains(&net) {
        return Some(Sensed { net, divider: None });
    }
    if ends.cuts(circuit, net) || circuit.pin_count(net) > MOST_PINS {
        return None;
    }
    ends.output.iter().find_map(|output| {
        let within = divider::Ends { output: Some(*output), grounds: &[], has_ground: true };
        let divider = divider::read(circuit, net, within);
        let fits = divider.senses == Some(*output) && !divider.upper.is_empty();
        fits.then_some(Sensed { net: *output, divider: Some(divider) })
    })
}

/// The reference at a net, or behind resistors and followers from it.
fn referenced(network: &Network<'_>, net: NetId, ends: &Ends, above: bool, blocked: &[NetId]) -> Option<Reference> {
    let circuit = network.circuit;
    let mut nets = vec![net];
    let mut next = 0;
    let mut share = Share { from: net, whole: true, divider: None, lost: false };
    while let Some(at) = nets.get(next).copied() {
        next += 1;
        if ends.input.contains(&at) || ends.output.contains(&at) {
            continue;
        }
        if let Some(reference) = holding(network, at, above).or_else(|| rail(network, at, above, ends)) {
            share.close(circuit, at, at);
            let whole = share.divider.is_none() && !share.lost;
            return Some(Reference { whole, divider: share.divider.filter(|_| !share.lost), ..reference });
        }
        if ends.cuts(circuit, at) || circuit.pin_count(at) > MOST_PINS {
            continue;
        }
        // A follower gives what its input has, whatever resistors lie behind its output.
        let follows = |one: &&OpAmpUnit| one.minus == at && !blocked.contains(&one.plus) && !nets.contains(&one.plus);
        if let Some(follower) = network.op_amps(at).iter().find(follows) {
            share.close(circuit, at, follower.plus);
            nets.truncate(next);
            nets.push(follower.plus);
            continue;
        }
        let away = |end: NetId| circuit.net(end).ground || ends.output.contains(&end);
        share.whole &= !chains(circuit, at, &ends.output).iter().any(|chain| away(chain.end));
        for device in circuit.devices_on(at).take(SAMPLE).filter(|device| circuit.device(*device).is_fitted()) {
            if !matches!(circuit.device(device).kind, DeviceKind::Resistor | DeviceKind::Potentiometer) {
                continue;
            }
            for far in circuit.device(device).pins.iter().filter_map(|pin| pin.net) {
                let apart = !circuit.net(far).ground && !blocked.contains(&far) && !nets.contains(&far);
                if apart && nets.len() < MOST_NETS {
                    nets.push(far);
                }
            }
        }
    }
    None
}

/// A reference of the other sign with the resistors through which it is weighed against the output; a resistor from there
/// to ground has no voltage across it.
fn weighed(circuit: &Circuit, input: NetId, reference: Reference) -> Reference {
    let ends = divider::Ends { output: Some(reference.net), grounds: &[], has_ground: true };
    let read = divider::read(circuit, input, ends);
    let through = read.senses == Some(reference.net) && !read.upper.is_empty();
    let divider = through.then(|| Divider { lower: Vec::new(), lower_parallel: Vec::new(), returns: None, ..read });
    Reference { whole: false, divider, ..reference }
}

/// How much of a reference reaches an input, on the way back from it.
struct Share {
    /// The input, or that of the last follower.
    from: NetId,
    /// Whether no resistors have taken a part since.
    whole: bool,
    /// The divider that takes a part.
    divider: Option<Divider>,
    /// Whether more than one divider takes a part, or something other than one.
    lost: bool,
}

impl Share {
    /// Ends at a net that is held what began at `from`, and begins at another net.
    fn close(&mut self, circuit: &Circuit, held: NetId, next: NetId) {
        if !self.whole {
            let divider = part_of(circuit, self.from, held);
            self.lost |= divider.is_none() || self.divider.is_some();
            self.divider = divider;
        }
        (self.from, self.whole) = (next, true);
    }
}

/// The divider that gives an input a part of a reference, where nothing else leads to that input.
fn part_of(circuit: &Circuit, input: NetId, held: NetId) -> Option<Divider> {
    let known = |end: NetId| end == held || circuit.net(end).ground;
    if chains(circuit, input, &[held]).iter().any(|chain| !known(chain.end)) {
        return None;
    }
    let divider = divider::read(circuit, input, divider::Ends { output: Some(held), grounds: &[], has_ground: true });
    (!divider.upper.is_empty() && !divider.lower.is_empty()).then_some(divider)
}

/// What an amplifier compares.
#[derive(Debug)]
pub(super) struct Comparison {
    pub(super) sensing: NetId,
    /// The other input.
    pub(super) comparing: NetId,
    pub(super) sensed: Sensed,
    pub(super) reference: Reference,
    /// Whether the amplifier's output rises with the output of the regulator.
    pub(super) rising: bool,
}

/// What an amplifier with an inverting and a plain input compares; `None` where it is no error amplifier.
pub(super) fn compare(minus: Input, plus: Input) -> Option<Comparison> {
    match (minus, plus) {
        (
            Input { net: sensing, sensed: Some(sensed), .. },
            Input { net: comparing, reference: Some(reference), .. },
        ) => Some(Comparison { sensing, comparing, sensed, reference, rising: false }),
        (
            Input { net: comparing, reference: Some(reference), .. },
            Input { net: sensing, sensed: Some(sensed), .. },
        ) => Some(Comparison { sensing, comparing, sensed, reference, rising: true }),
        (
            Input { net: sensing, sensed: Some(sensed), opposite: Some(reference), .. },
            Input { net: comparing, grounded: true, .. },
        ) => Some(Comparison { sensing, comparing, sensed, reference, rising: false }),
        (
            Input { net: comparing, grounded: true, .. },
            Input { net: sensing, sensed: Some(sensed), opposite: Some(reference), .. },
        ) => Some(Comparison { sensing, comparing, sensed, reference, rising: true }),
        _ => None,
    }
}

/// What a single transistor with its emitter on ground compares: the divided output with its base-emitter drop, or the
/// output with a zener diode ahead of the base.
pub(super) fn grounded_emitter(network: &Network<'_>, base: NetId, ends: &Ends) -> Option<Comparison> {
    let circuit = network.circuit;
    if ends.cuts(circuit, base) || circuit.pin_count(base) > MOST_PINS {
        return None;
    }
    // From the base the string leads up to the output, so it is seen from its other end.
    if let Some(mut devices) = string(circuit, base, !ends.positive, &ends.output) {
        devices.reverse();
        let last = devices.first().and_then(|device| circuit.ends(*device)).into_iter().flatten();
        let net = last.into_iter().find(|net| ends.output.contains(net))?;
        let kind = string_kind(circuit, &devices);
        let reference = Reference { in_sense: true, ..Reference::held(kind, devices, net) };
        return Some(Comparison {
            sensing: base,
            comparing: base,
            sensed: Sensed { net, divider: None },
            reference,
            rising: false,
        });
    }
    let sensed = sensed(circuit, base, ends)?;
    let divided = sensed.divider.as_ref().is_some_and(|divider| !divider.lower.is_empty());
    let reference = Reference::held(ReferenceKind::BaseEmitter, Vec::new(), base);
    divided.then_some(Comparison { sensing: base, comparing: base, sensed, reference, rising: false })
}
