//! Series elements between supply nets, and what flows through them.

use std::collections::HashSet;

use super::{Facts, RailOrigin};
use crate::circuit::{Circuit, Device, DeviceId, DeviceKind, NetId, Polarity};
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Table};
use crate::recognize::RegulatorKind;

/// Resistors up to this many ohms are taken as part of a supply line (common practice: filter and sense resistors).
const LINE_RESISTOR: f64 = 100.0;
/// Series resistance of ferrites, fuses and small inductors in ohms: low, nominal, high (common practice).
const BEAD: (f64, f64, f64) = (0.0, 0.05, 0.5);
/// Forward drop of a Schottky diode in volts: low, nominal, high (common practice).
const SCHOTTKY: (f64, f64, f64) = (0.15, 0.35, 0.6);
/// Forward drop of a silicon diode in volts: low, nominal, high (common practice).
const SILICON: (f64, f64, f64) = (0.5, 0.75, 1.1);
/// What a reverse-polarity transistor drops in volts: low, nominal, high; at most its body diode.
const TRANSISTOR: (f64, f64, f64) = (0.0, 0.03, 0.2);
/// The same where the gate hangs on another supply: between the two neither is on and the body diode carries the load.
const SHARING: (f64, f64, f64) = (0.0, 0.03, 1.1);
/// No diode of a supply line drops more than this many volts.
const DIODE_LIMIT: f64 = 2.0;
/// How many loads a sum names one by one; more are one figure.
const NAMED_LOADS: usize = 12;

/// How the voltage of a supply of about this many volts could be declared: a template, not a value.
pub(super) fn supply_example(volts: f64) -> &'static str {
    match volts {
        volts if volts < 0.0 => "-12.6 .. -11.4 V",
        volts if volts < 9.0 => "4.75 .. 5.25 V",
        _ => "10.8 .. 14.4 V",
    }
}

/// What lies between two supply nets.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Element {
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

/// The index of a diode's anode pin; `None` where nothing tells it.
pub(super) fn anode(part: &Device) -> Option<usize> {
    let named = |name: &str| part.pins.iter().position(|pin| pin.name.eq_ignore_ascii_case(name));
    if let Some(anode) = named("A").or_else(|| named("anode")) {
        return Some(anode);
    }
    let cathode = named("K").or_else(|| named("C")).or_else(|| named("cathode"))?;
    (0..part.pins.len()).find(|index| *index != cathode)
}

impl Facts<'_> {
    /// The voltage behind a series element by which `near`, at the voltage `from`, feeds `to`.
    pub(super) fn behind(
        &self,
        (near, from): (NetId, &Quantity),
        device: DeviceId,
        element: Element,
        to: NetId,
    ) -> Quantity {
        let volts = from.nominal().unwrap_or(0.0);
        let drop = match element {
            Element::Link => return from.clone(),
            Element::Resistor => self.resistance(device).times(&self.drawn_from(to, Some(near))),
            Element::Bead => self.bead(device, to, volts).times(&self.drawn_from(to, Some(near))),
            Element::Diode { schottky } => {
                self.forward_drop(device, if schottky { SCHOTTKY } else { SILICON }, to, volts)
            }
            Element::Transistor => self.forward_drop(device, TRANSISTOR, to, volts),
            Element::Sharing => self.forward_drop(device, SHARING, to, volts),
        };
        if volts >= 0.0 { from.minus(&drop) } else { from.plus(&drop) }
    }

    fn bead(&self, device: DeviceId, to: NetId, volts: f64) -> Quantity {
        let (low, nominal, high) = BEAD;
        let range = Range::clamped(low, nominal, high);
        let evidence = self.assumed_of(device, "resistance", to, volts);
        Quantity::given(Dimension::RESISTANCE, range, Pair::NOT_NEGATIVE, evidence)
    }

    fn forward_drop(&self, device: DeviceId, usual: (f64, f64, f64), to: NetId, volts: f64) -> Quantity {
        let (low, nominal, high) = usual;
        let range = Range::clamped(low, nominal, high);
        let evidence = self.assumed_of(device, "forward drop", to, volts);
        Quantity::given(Dimension::VOLTAGE, range, Pair::new(0.0, DIODE_LIMIT), evidence)
    }

    fn assumed_of(&self, device: DeviceId, noun: &str, to: NetId, volts: f64) -> Evidence {
        let circuit = self.circuit();
        let what = format!("{noun} of {}", circuit.device(device).reference);
        let settle = Settle::new(Table::Supply, &circuit.net(to).name, "voltage", supply_example(volts));
        Evidence::new(Grade::Assumed, what, "usual for its kind").settled_by(settle)
    }

    /// What flows into a net: what is declared for it and behind it, else a guess by the ratings of the regulators
    /// that it feeds.
    #[must_use]
    pub fn draw(&self, net: NetId) -> Quantity {
        let upstream = match self.rail(net).origin {
            RailOrigin::Through { from, .. } => Some(from),
            _ => None,
        };
        self.drawn_from(net, upstream)
    }

    /// The same, for a net that `upstream` feeds: what hangs on that is not drawn from the net.
    pub(super) fn drawn_from(&self, net: NetId, upstream: Option<NetId>) -> Quantity {
        if let Some(declared) = self.declared_draw(net, upstream) {
            return declared;
        }
        let fed: Vec<_> = self
            .fed_by(net)
            .filter(|regulator| regulator.kind == RegulatorKind::Series)
            .map(|regulator| self.load(regulator))
            .collect();
        self.sum(&fed, net)
    }

    /// The declared loads on a net, on the nets behind its series elements, and behind the linear regulators that
    /// these feed. `None` where neither the net nor one behind a series element has a declared load.
    pub(super) fn declared_draw(&self, net: NetId, upstream: Option<NetId>) -> Option<Quantity> {
        // Boards without declared loads need no walk at all.
        if self.board().loads.is_empty() {
            return None;
        }
        let circuit = self.circuit();
        let mut seen: HashSet<NetId> = upstream.into_iter().chain([net]).collect();
        let mut queue = vec![(net, true)];
        let (mut loads, mut direct) = (Vec::new(), false);
        while let Some((at, near)) = queue.pop() {
            if let Some(load) = self.declared_load(&circuit.net(at).name) {
                loads.push(load);
                direct |= near;
            }
            // A protection diode leads back to the input; nothing is drawn through it.
            seen.extend(self.feeding(at).filter_map(|regulator| regulator.input_net));
            let behind = feeds(circuit, at, true).into_iter().map(|(_, to, _)| (to, near));
            let regulated = self
                .fed_by(at)
                .filter(|regulator| regulator.kind != RegulatorKind::Switching)
                .filter_map(|regulator| regulator.output_net)
                .map(|to| (to, false));
            let next: Vec<_> = behind.chain(regulated).filter(|(to, _)| seen.insert(*to)).collect();
            queue.extend(next);
        }
        direct.then(|| self.sum(&loads, net))
    }

    fn sum(&self, loads: &[Quantity], net: NetId) -> Quantity {
        if loads.len() <= NAMED_LOADS {
            let zero = Quantity::constant(Dimension::CURRENT, 0.0);
            return loads.iter().fold(zero, |sum, load| sum.plus(load));
        }
        let bounds = |pick: &dyn Fn(Range) -> f64| loads.iter().filter_map(Quantity::shown).map(pick).sum::<f64>();
        let range = Range::clamped(bounds(&Range::low), bounds(&Range::nominal), bounds(&Range::high));
        let grade = loads.iter().filter_map(Quantity::grade).max().unwrap_or(Grade::Assumed);
        let name = &self.circuit().net(net).name;
        let evidence = Evidence::new(grade, format!("load on {name}"), format!("{} loads", loads.len()))
            .settled_by(Settle::new(Table::Load, name, "current", "2 .. 180 mA"));
        Quantity::given(Dimension::CURRENT, range, Pair::NOT_NEGATIVE, evidence)
    }
}
