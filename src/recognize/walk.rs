//! Following resistors from a net.

use crate::circuit::{Circuit, DeviceId, DeviceKind, NetId};

/// Longest chain of resistors that is followed; real dividers have up to four.
const LONGEST: usize = 8;
/// A net with more pins than this is a rail, not the tap of a divider.
const TAP_PINS: usize = 64;

/// How many parts of a net are looked at where any of them can answer a question: on a rail with thousands of parts a
/// sample is enough, and the whole search stays linear in the board.
pub(super) const SAMPLE: usize = 1024;

/// Resistors in series from a net to another.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(super) struct Chain {
    pub(super) devices: Vec<DeviceId>,
    pub(super) end: NetId,
    /// Whether a potentiometer is among them.
    pub(super) trimmed: bool,
}

fn resistive(kind: DeviceKind) -> bool {
    matches!(kind, DeviceKind::Resistor | DeviceKind::Potentiometer | DeviceKind::Thermistor)
}

/// Whether current that comes in through one resistor can only go on through one other: the net joins nothing else
/// but capacitors, which carry no direct current. Gives that other resistor.
fn onward(circuit: &Circuit, net: NetId, from: DeviceId) -> Option<DeviceId> {
    if circuit.net(net).ground || circuit.pin_count(net) > TAP_PINS {
        return None;
    }
    let mut next = None;
    for device in circuit.devices_on(net).filter(|device| circuit.device(*device).is_fitted() && *device != from) {
        match circuit.device(device).kind {
            DeviceKind::Capacitor | DeviceKind::Mechanical => {}
            kind if resistive(kind) && next.is_none() => next = Some(device),
            _ => return None,
        }
    }
    next
}

/// The far nets of a resistor or potentiometer seen from a net.
fn far_ends(circuit: &Circuit, device: DeviceId, net: NetId) -> Vec<NetId> {
    if let Some(other) = circuit.other_end(device, net) {
        return vec![other];
    }
    if circuit.device(device).kind != DeviceKind::Potentiometer {
        return Vec::new();
    }
    // Three nets: from the wiper the current can reach both ends; from an end what counts is the wiper.
    let pins = &circuit.device(device).pins;
    let wiper = |name: &str, number: &str| {
        number == "2" || name.eq_ignore_ascii_case("W") || name.eq_ignore_ascii_case("WIPER")
    };
    let wiper_net = pins.iter().find(|pin| wiper(&pin.name, &pin.number)).and_then(|pin| pin.net);
    if wiper_net == Some(net) {
        let mut ends: Vec<NetId> = pins.iter().filter_map(|pin| pin.net).filter(|other| *other != net).collect();
        ends.dedup();
        ends
    } else {
        wiper_net.into_iter().collect()
    }
}

/// The chains of resistors that leave a net, each up to the first net that joins more than two resistors, or that is
/// one of `stops`.
pub(super) fn chains(circuit: &Circuit, from: NetId, stops: &[NetId]) -> Vec<Chain> {
    let mut found = Vec::new();
    for first in circuit.devices_on(from).take(SAMPLE) {
        let device = circuit.device(first);
        if !device.is_fitted() || !resistive(device.kind) {
            continue;
        }
        for end in far_ends(circuit, first, from) {
            found.push(follow(circuit, from, first, end, stops));
        }
    }
    found
}

fn follow(circuit: &Circuit, from: NetId, first: DeviceId, end: NetId, stops: &[NetId]) -> Chain {
    let trimmer = |device: DeviceId| circuit.device(device).kind == DeviceKind::Potentiometer;
    let mut chain = Chain { devices: vec![first], end, trimmed: trimmer(first) };
    while chain.devices.len() < LONGEST && !stops.contains(&chain.end) {
        let Some(last) = chain.devices.last().copied() else { break };
        let Some(next) = onward(circuit, chain.end, last) else { break };
        let Some(beyond) = far_ends(circuit, next, chain.end).first().copied() else { break };
        if beyond == from || chain.devices.contains(&next) {
            break;
        }
        chain.devices.push(next);
        chain.trimmed |= trimmer(next);
        chain.end = beyond;
    }
    chain
}

/// Whether chains are worth looking for on this net: a rail is no tap.
pub(super) fn is_tap(circuit: &Circuit, net: NetId) -> bool {
    !circuit.net(net).ground && circuit.pin_count(net) <= TAP_PINS
}
