//! The voltages of supply nets: declared, regulated, named, and carried through series elements.

use std::collections::hash_map::Entry;
use std::collections::{HashMap, VecDeque};

use super::Facts;
use super::battery::battery;
use super::feeds::{feeds, supply_example};
use crate::board::{SupplyEntry, SupplyNodes};
use crate::circuit::{DeviceId, DeviceKind, NetId, supply_name};
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Slope, Table};
use crate::recognize::{Regulator, RegulatorId, RegulatorKind};

/// How far a supply that is only named may lie from its name; wider from [`HIGH_SUPPLY`] volts up.
const NAMED: f64 = 0.05;
/// The same for supplies of [`HIGH_SUPPLY`] volts and more, which are rarely regulated where they enter.
const NAMED_HIGH: f64 = 0.10;
/// Volts from which a named supply is taken to the wider tolerance.
const HIGH_SUPPLY: f64 = 9.0;

/// Where the voltage of a net comes from.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum RailOrigin {
    /// It is the ground.
    Ground,
    /// A declared supply.
    Declared,
    /// The output of a regulator.
    Regulator(RegulatorId),
    /// A series element that another net feeds.
    Through {
        /// The element.
        device: DeviceId,
        /// The net that feeds it.
        from: NetId,
    },
    /// Its name, or a cell on it.
    Named,
    /// Nothing.
    Unknown,
}

/// A net's voltage against ground and where it comes from.
#[derive(Debug, Clone)]
pub struct Rail {
    /// Volts, signed; missing where nothing tells it.
    pub voltage: Quantity,
    /// Where it comes from.
    pub origin: RailOrigin,
}

/// The nets whose voltage is known.
#[derive(Debug)]
pub(super) struct Rails {
    known: HashMap<NetId, Rail>,
}

impl Rails {
    /// Whether the net's voltage is declared, regulated, named or carried on.
    pub(super) fn is_known(&self, net: NetId) -> bool {
        self.known.contains_key(&net)
    }

    pub(super) fn rail(&self, facts: &Facts<'_>, net: NetId) -> Rail {
        if let Some(rail) = self.known.get(&net) {
            return rail.clone();
        }
        let name = &facts.circuit().net(net).name;
        if facts.circuit().net(net).ground {
            return Rail { voltage: Quantity::constant(Dimension::VOLTAGE, 0.0), origin: RailOrigin::Ground };
        }
        let evidence = Evidence::new(Grade::Assumed, format!("voltage of {name}"), "nothing tells it")
            .settled_by(supply_of(name));
        Rail { voltage: Quantity::missing(Dimension::VOLTAGE, Pair::ANY, evidence), origin: RailOrigin::Unknown }
    }
}

fn supply_of(net: &str) -> Settle {
    let volts = supply_name(net).map_or(0.0, |name| name.volts);
    Settle::new(Table::Supply, net, "voltage", supply_example(volts))
}

/// Voltages spread from the nets that have one of their own: first from declared supplies and regulator outputs,
/// then, where these do not reach, from the nets that carry a supply's name.
pub(super) fn propagate(facts: &Facts<'_>) -> Rails {
    let mut rails = Rails { known: HashMap::new() };
    let mut queue = VecDeque::new();
    for (net, rail) in declared(facts).into_iter().chain(regulated(facts)) {
        if let Entry::Vacant(free) = rails.known.entry(net) {
            free.insert(rail);
            queue.push_back(net);
        }
    }
    spread(facts, &mut rails, &mut queue);
    for net in facts.circuit().nets() {
        if rails.known.contains_key(&net) || facts.circuit().net(net).ground {
            continue;
        }
        if let Some(rail) = named(facts, net) {
            rails.known.insert(net, rail);
            queue.push_back(net);
        }
    }
    spread(facts, &mut rails, &mut queue);
    rails
}

fn declared(facts: &Facts<'_>) -> Vec<(NetId, Rail)> {
    let circuit = facts.circuit();
    let mut found = Vec::new();
    for entry in &facts.board().supplies {
        let (name, sign) = match &entry.nodes.value {
            SupplyNodes::Net(name) => (name, 1.0),
            SupplyNodes::Between(one, other) => {
                let grounded = |name: &str| circuit.net_named(name).is_some_and(|net| circuit.net(net).ground);
                if grounded(other) {
                    (one, 1.0)
                } else if grounded(one) {
                    (other, -1.0)
                } else {
                    continue;
                }
            }
        };
        let Some(voltage) = supply_voltage(entry, name) else { continue };
        for net in circuit.nets_named(name) {
            let voltage = sagging(facts, entry, voltage.scaled(sign), *net);
            found.push((*net, Rail { voltage, origin: RailOrigin::Declared }));
        }
    }
    found
}

fn supply_voltage(entry: &SupplyEntry, name: &str) -> Option<Quantity> {
    let what = format!("voltage of {name}");
    if let Some(voltage) = &entry.voltage {
        return Some(voltage.quantity(Dimension::VOLTAGE, what));
    }
    let standard = entry.standard.as_ref()?;
    let found = standard.value.found.as_ref()?;
    let mut evidence = standard.evidence(what);
    evidence.source = format!("{} ({})", evidence.source, found.source);
    if found.recalled {
        evidence = evidence.at_most(Grade::Inferred).settled_by(supply_of(name));
    }
    Some(Quantity::fact(Dimension::VOLTAGE, found.range, evidence))
}

/// The supply less what its own resistance takes at the load.
fn sagging(facts: &Facts<'_>, entry: &SupplyEntry, voltage: Quantity, net: NetId) -> Quantity {
    let Some(resistance) = &entry.resistance else { return voltage };
    let name = &facts.circuit().net(net).name;
    let resistance = resistance.quantity(Dimension::RESISTANCE, format!("source resistance of {name}"));
    let drop = resistance.times(&facts.drawn_from(net, None));
    if voltage.nominal().unwrap_or(0.0) >= 0.0 { voltage.minus(&drop) } else { voltage.plus(&drop) }
}

fn regulated(facts: &Facts<'_>) -> Vec<(NetId, Rail)> {
    facts
        .regulators()
        .filter_map(|(id, regulator)| Some((id, regulator, regulator.output_net?)))
        .filter(|(_, _, net)| !facts.circuit().net(*net).ground)
        .filter_map(|(id, regulator, net)| {
            let voltage = facts.output_voltage(regulator);
            (!voltage.is_missing()).then_some((net, Rail { voltage, origin: RailOrigin::Regulator(id) }))
        })
        .collect()
}

/// Carries voltages on to the nets behind series elements that have none of their own.
fn spread(facts: &Facts<'_>, rails: &mut Rails, queue: &mut VecDeque<NetId>) {
    while let Some(net) = queue.pop_front() {
        let Some(rail) = rails.known.get(&net).cloned() else { continue };
        if rail.voltage.is_missing() {
            continue;
        }
        let positive = rail.voltage.nominal().unwrap_or(0.0) >= 0.0;
        for (device, to, element) in feeds(facts.circuit(), net, positive) {
            if is_protection(facts, net, to) {
                continue;
            }
            let origin = RailOrigin::Through { device, from: net };
            let voltage = facts.behind((net, &rail.voltage), device, element, to);
            match rails.known.get(&to) {
                None => {
                    rails.known.insert(to, Rail { voltage, origin });
                    queue.push_back(to);
                }
                Some(other) if is_second_feed(facts, other, device) => {
                    let voltage = either(&other.voltage, &voltage);
                    rails.known.insert(to, Rail { voltage, origin: other.origin });
                }
                Some(_) => {}
            }
        }
    }
}

/// A link from a part's own output to its input protects the part against a charged output, and the inductor of a
/// converter leads back to its switch pin: neither feeds anything.
fn is_protection(facts: &Facts<'_>, from: NetId, to: NetId) -> bool {
    let switched = |regulator: &Regulator| {
        regulator.kind == RegulatorKind::Switching
            && facts.part_of(regulator).pins.iter().any(|pin| pin.net == Some(to))
    };
    // Many parts share an input, few an output.
    facts.feeding(from).any(|regulator| regulator.input_net == Some(to) || switched(regulator))
}

/// Whether a net that one diode or transistor feeds is fed by another one too.
fn is_second_feed(facts: &Facts<'_>, rail: &Rail, device: DeviceId) -> bool {
    let gate = |device| {
        let kind = facts.circuit().device(device).kind;
        matches!(kind, DeviceKind::Diode | DeviceKind::Schottky | DeviceKind::Mosfet)
    };
    matches!(rail.origin, RailOrigin::Through { device: first, .. } if first != device && gate(first) && gate(device))
}

/// Either of two supplies behind diodes may be the one that is there: the range over both.
fn either(one: &Quantity, other: &Quantity) -> Quantity {
    let inputs = [(one, Slope::Rising), (other, Slope::Rising)];
    let low = Quantity::monotone(Dimension::VOLTAGE, &inputs, |v| v.iter().copied().fold(f64::INFINITY, f64::min));
    let high =
        Quantity::monotone(Dimension::VOLTAGE, &inputs, |v| v.iter().copied().fold(f64::NEG_INFINITY, f64::max));
    low.hull(&high)
}

/// The voltage that a net's name, or a cell on it, tells.
fn named(facts: &Facts<'_>, net: NetId) -> Option<Rail> {
    let name = &facts.circuit().net(net).name;
    let (range, source) = standard_by_name(facts, name).or_else(|| battery(facts, net, name)).or_else(|| {
        let volts = supply_name(name)?.volts;
        let tolerance = if volts.abs() >= HIGH_SUPPLY { NAMED_HIGH } else { NAMED };
        Some((Range::with_tolerance(volts, tolerance), "net name".to_owned()))
    })?;
    let evidence = Evidence::new(Grade::Inferred, format!("voltage of {name}"), source).settled_by(supply_of(name));
    Some(Rail { voltage: Quantity::fact(Dimension::VOLTAGE, range, evidence), origin: RailOrigin::Named })
}

/// A net that is called like a standard supply.
fn standard_by_name(facts: &Facts<'_>, name: &str) -> Option<(Range, String)> {
    let last = name.rsplit('/').next().unwrap_or(name);
    let supply = facts
        .knowledge()
        .supplies
        .iter()
        .find(|supply| supply.nets.iter().any(|pattern| pattern.eq_ignore_ascii_case(last)))?;
    Some((supply.voltage.value, format!("net name, taken as {}", supply.name)))
}
