//! What can lie between two supply nets.

use crate::circuit::{Circuit, Device, DeviceId, DeviceKind, NetId, Pin, Polarity};
use crate::recognize::anode;

/// Resistors up to this many ohms are taken as part of a supply line (common practice: filter and sense resistors).
const LINE_RESISTOR: f64 = 100.0;

/// What lies between two supply nets.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(in crate::facts) enum Element {
    /// A closed link: no drop.
    Link,
    /// A resistor.
    Resistor,
    /// A ferrite, fuse or inductor.
    Bead,
    /// A diode; whether it is a Schottky diode.
    Diode { schottky: bool },
    /// A field-effect transistor whose body diode conducts and which is switched on by the supply itself: protection
    /// against a reversed supply.
    Transistor,
    /// The same, switched off by another supply that feeds the same net through a diode.
    Sharing,
    /// An integrated switch: a load switch, electronic fuse, ideal diode.
    IntegratedSwitch,
}

impl Element {
    /// Whether current passes one way only, so that several may feed one net.
    pub(super) fn is_gate(self) -> bool {
        matches!(self, Self::Diode { .. } | Self::Transistor | Self::Sharing | Self::IntegratedSwitch)
    }
}

/// The fitted series elements by which a supply net feeds others: the device, the fed net and what it is. A diode
/// conducts away from a positive net and towards a negative one.
pub(super) fn feeds(circuit: &Circuit, net: NetId, positive: bool) -> Vec<(DeviceId, NetId, Element)> {
    circuit
        .neighbours(net)
        .filter(|(_, to)| !circuit.net(*to).ground)
        .filter_map(|(device, to)| {
            let element = element(circuit.device(device))?;
            if matches!(element, Element::Diode { .. }) {
                let anode_net = circuit.net_of(device, anode(circuit.device(device))?)?;
                if (anode_net == net) != positive {
                    return None;
                }
            }
            Some((device, to, element))
        })
        .chain(transistors(circuit, net, positive))
        .chain(integrated(circuit, net))
        .collect()
}

/// Transistors by which a supply net feeds another through their body diode: a P channel from drain to source on a
/// positive supply, an N channel on a negative one, the gate held by resistors and zeners alone, or by a supply that
/// takes over through a diode.
fn transistors(circuit: &Circuit, net: NetId, positive: bool) -> Vec<(DeviceId, NetId, Element)> {
    let wanted = if positive { Polarity::P } else { Polarity::N };
    let found = circuit.devices_on(net).filter_map(|device| {
        let part = circuit.device(device);
        if part.kind != DeviceKind::Mosfet || part.polarity != Some(wanted) || !part.is_fitted() {
            return None;
        }
        let on =
            |name: &str| part.pins.iter().find(|pin| pin.name.eq_ignore_ascii_case(name)).and_then(|pin| pin.net);
        let (drain, source, gate) = (on("D")?, on("S")?, on("G")?);
        let passive = circuit.devices_on(gate).all(|other| {
            let kind = circuit.device(other).kind;
            other == device || matches!(kind, DeviceKind::Resistor | DeviceKind::Zener | DeviceKind::Capacitor)
        });
        if drain != net || source == net {
            return None;
        }
        if circuit.net(gate).ground || passive {
            return Some((device, source, Element::Transistor));
        }
        shares(circuit, gate, source).then_some((device, source, Element::Sharing))
    });
    found.collect()
}

/// Whether a diode leads from one net to another, either way: the sign of the supply has been looked at already.
fn shares(circuit: &Circuit, gate: NetId, source: NetId) -> bool {
    circuit.neighbours(gate).any(|(device, to)| {
        let kind = circuit.device(device).kind;
        to == source && matches!(kind, DeviceKind::Diode | DeviceKind::Schottky)
    })
}

/// Words by which a library describes a part that passes a supply on, switched or limited (lower case).
const SWITCHES: [&str; 9] = [
    "load switch",
    "power switch",
    "high-side switch",
    "high side switch",
    "distribution switch",
    "ideal diode",
    "efuse",
    "electronic fuse",
    "hot swap",
];

/// Integrated switches whose input lies on a net, with the nets of their outputs.
fn integrated(circuit: &Circuit, net: NetId) -> Vec<(DeviceId, NetId, Element)> {
    let mut found = Vec::new();
    for (device, pin) in circuit.fitted_on(net) {
        let part = circuit.device(device);
        let is_input = part.pins.get(pin).is_some_and(|pin| is_called(pin, &["IN", "VIN"]));
        if part.kind != DeviceKind::Integrated || !is_input || !is_switch(part) {
            continue;
        }
        for output in part.pins.iter().filter(|pin| is_called(pin, &["OUT", "VOUT"])) {
            let Some(to) = output.net.filter(|to| *to != net && !circuit.net(*to).ground) else { continue };
            if !found.iter().any(|(known, at, _)| *known == device && *at == to) {
                found.push((device, to, Element::IntegratedSwitch));
            }
        }
    }
    found
}

/// Whether a pin has one of these names, numbered or not: `OUT`, `OUT1`.
fn is_called(pin: &Pin, names: &[&str]) -> bool {
    let name = pin.name.trim_end_matches(|sign: char| sign.is_ascii_digit());
    names.iter().any(|wanted| name.eq_ignore_ascii_case(wanted))
}

fn is_switch(part: &Device) -> bool {
    let text = format!("{} {}", part.description, part.keywords).to_ascii_lowercase();
    SWITCHES.iter().any(|word| text.contains(word))
}

fn element(part: &Device) -> Option<Element> {
    match part.kind {
        DeviceKind::NetTie | DeviceKind::Switch => Some(Element::Link),
        DeviceKind::Ferrite | DeviceKind::Fuse | DeviceKind::Inductor => Some(Element::Bead),
        DeviceKind::Diode => Some(Element::Diode { schottky: false }),
        DeviceKind::Schottky => Some(Element::Diode { schottky: true }),
        DeviceKind::Resistor => {
            let amount = part.amount.as_ref()?.amount;
            (amount <= LINE_RESISTOR).then_some(Element::Resistor)
        }
        _ => None,
    }
}
