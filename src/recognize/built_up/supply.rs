//! Which nets are supplies, and which of them are one but for the resistors and beads between them.

use crate::circuit::{Circuit, DeviceKind, NetId, PinType, supply_name};

use super::super::walk::SAMPLE;

/// Up to so many ohms a resistor in a supply line senses a current or shares it (common practice).
const LINE_RESISTOR: f64 = 10.0;
/// So many nets are taken as one supply line at most.
const LINE: usize = 8;

/// Whether a net is a supply as such, whatever feeds it: by its name, or by the pins on it that take or give power.
pub(super) fn is_rail(circuit: &Circuit, net: NetId) -> bool {
    if circuit.net(net).ground {
        return true;
    }
    if let Some(name) = supply_name(&circuit.net(net).name) {
        return !name.reference;
    }
    circuit.fitted_on(net).take(SAMPLE).any(|(device, pin)| {
        let device = circuit.device(device);
        let power = device.pins.get(pin).is_some_and(|pin| pin.kind.is_power());
        device.kind == DeviceKind::Battery || power
    })
}

/// Whether a net looks as if power came in or was drawn there: a rail, or one with a connector, a rectifier or a
/// capacitor to ground. A net whose only way to ground is a small resistor carries a sensed current instead.
pub(super) fn carries_power(circuit: &Circuit, net: NetId) -> bool {
    if circuit.net(net).ground {
        return false;
    }
    if is_rail(circuit, net) {
        return true;
    }
    let sensed = circuit.neighbours(net).take(SAMPLE).any(|(device, far)| {
        circuit.net(far).ground && circuit.device(device).kind == DeviceKind::Resistor && is_small(circuit, device)
    });
    if sensed {
        return false;
    }
    let connector = circuit.fitted_on(net).take(SAMPLE).any(|(device, pin)| {
        let device = circuit.device(device);
        let kind = device.pins.get(pin).map(|pin| pin.kind);
        device.kind == DeviceKind::Connector || device.kind == DeviceKind::Bridge || kind == Some(PinType::PowerOut)
    });
    connector
        || circuit
            .neighbours(net)
            .take(SAMPLE)
            .any(|(device, far)| circuit.device(device).kind == DeviceKind::Capacitor && circuit.net(far).ground)
}

fn is_small(circuit: &Circuit, device: crate::circuit::DeviceId) -> bool {
    circuit.device(device).amount.as_ref().is_some_and(|amount| amount.amount <= LINE_RESISTOR)
}

/// A net with those that small resistors, beads, fuses and links join to it; the net itself comes first. A control net
/// is none of them, though a small resistor holds it at its supply.
pub(super) fn line(circuit: &Circuit, start: NetId, control: NetId) -> Vec<NetId> {
    let mut found = vec![start];
    let mut next = 0;
    while let Some(net) = found.get(next).copied() {
        next += 1;
        for (device, far) in circuit.neighbours(net).take(SAMPLE) {
            let joins = match circuit.device(device).kind {
                DeviceKind::Resistor => is_small(circuit, device),
                DeviceKind::Ferrite | DeviceKind::Fuse | DeviceKind::NetTie | DeviceKind::Inductor => true,
                _ => false,
            };
            if joins && far != control && !circuit.net(far).ground && !found.contains(&far) && found.len() < LINE {
                found.push(far);
            }
        }
    }
    found
}
