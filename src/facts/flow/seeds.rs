//! Where power enters: declared supplies, outputs of regulators, rectifiers, cells, nets with a supply's name.

use crate::board::{SupplyEntry, SupplyNodes};
use crate::circuit::{Circuit, DeviceKind, NetId, supply_name};
use crate::facts::Facts;
use crate::facts::battery::battery;
use crate::knowledge::Sign;
use crate::quantity::Range;
use crate::recognize::{Rectified, RegulatorId, rectified};

/// How far a supply that is only named may lie from its name; wider from [`HIGH_SUPPLY`] volts up.
const NAMED: f64 = 0.05;
/// The same for supplies of [`HIGH_SUPPLY`] volts and more, which are rarely regulated where they enter.
const NAMED_HIGH: f64 = 0.10;
/// Volts from which a named supply is taken to the wider tolerance.
const HIGH_SUPPLY: f64 = 9.0;

/// What gives a net its voltage.
#[derive(Debug, Clone)]
pub(super) enum Seed {
    /// `[[supply]]`, by its place in the board file; whether its sign is turned by the order of its two nets.
    Declared {
        entry: usize,
        turned: bool,
    },
    /// A field on a part, by its place in the board's parts.
    Field(usize),
    /// The rectifier behind an alternating supply, by its place in the board file.
    Rectified {
        entry: usize,
        rectifier: Rectified,
    },
    Regulator(RegulatorId),
    /// The net's name, a pin's name or a cell, with what it was taken for.
    Named {
        range: Range,
        source: String,
    },
}

/// How the voltage of a supply of about this many volts could be declared: a template, not a value.
pub(in crate::facts) fn supply_example(volts: f64) -> &'static str {
    match volts {
        volts if volts < 0.0 => "-12.6 .. -11.4 V",
        volts if volts < 9.0 => "4.75 .. 5.25 V",
        _ => "10.8 .. 14.4 V",
    }
}

/// The sources that do not hang on a name alone, each with about how many volts it has.
pub(super) fn first(facts: &Facts<'_>) -> Vec<(NetId, Seed, f64)> {
    let mut found = declared(facts);
    found.extend(fields(facts));
    found.extend(regulated(facts));
    found
}

fn declared(facts: &Facts<'_>) -> Vec<(NetId, Seed, f64)> {
    let circuit = facts.circuit();
    let mut found: Vec<(NetId, Seed, f64)> = Vec::new();
    for (index, entry) in facts.board().supplies.iter().enumerate() {
        if entry.ac.is_some() {
            add_rectified(facts, index, entry, &mut found);
            continue;
        }
        let Some(volts) = direct(entry) else { continue };
        let Some((name, turned)) = poles(circuit, &entry.nodes.value) else { continue };
        let volts = if turned { -volts } else { volts };
        for net in circuit.nets_named(name) {
            found.push((*net, Seed::Declared { entry: index, turned }, volts));
        }
    }
    found
}

/// The nominal voltage of a direct supply.
fn direct(entry: &SupplyEntry) -> Option<f64> {
    let standard = || entry.standard.as_ref()?.value.found.as_ref().map(|found| found.range.nominal());
    entry.voltage.as_ref().map(|voltage| voltage.value.nominal()).or_else(standard)
}

/// The net of a supply against ground, and whether its sign is turned.
fn poles<'e>(circuit: &Circuit, nodes: &'e SupplyNodes) -> Option<(&'e str, bool)> {
    let grounded = |name: &str| circuit.net_named(name).is_some_and(|net| circuit.net(net).ground);
    match nodes {
        SupplyNodes::Net(name) => Some((name, false)),
        SupplyNodes::Between(one, other) if grounded(other) => Some((one, false)),
        SupplyNodes::Between(one, other) if grounded(one) => Some((other, true)),
        SupplyNodes::Between(..) => None,
    }
}

/// What the rectifiers behind an alternating supply feed. Two windings that charge one net by half waves each are the
/// halves of one behind a centre tap: both half waves charge it.
fn add_rectified(facts: &Facts<'_>, index: usize, entry: &SupplyEntry, found: &mut Vec<(NetId, Seed, f64)>) {
    let circuit = facts.circuit();
    let grounded = |name: &str| circuit.net_named(name).is_some_and(|net| circuit.net(net).ground);
    let (one, other) = match &entry.nodes.value {
        SupplyNodes::Net(name) => (name, None),
        SupplyNodes::Between(one, other) if grounded(other) => (one, None),
        SupplyNodes::Between(one, other) if grounded(one) => (other, None),
        SupplyNodes::Between(one, other) => (one, circuit.net_named(other)),
    };
    let volts = entry.ac.as_ref().map_or(0.0, |ac| ac.value.nominal());
    let Some(one) = circuit.net_named(one) else { return };
    for rectifier in rectified(circuit, one, other) {
        let net = rectifier.net;
        let known = found.iter_mut().find_map(|(known, seed, _)| match seed {
            Seed::Rectified { rectifier, .. } if *known == net => Some(rectifier),
            _ => None,
        });
        match known {
            Some(known) => known.full_wave = true,
            None => {
                let volts = if rectifier.sign == Sign::Negative { -volts } else { volts };
                found.push((net, Seed::Rectified { entry: index, rectifier }, volts));
            }
        }
    }
}

/// Supply voltages that fields on connectors and batteries state.
fn fields(facts: &Facts<'_>) -> Vec<(NetId, Seed, f64)> {
    let parts = facts.board().parts.iter().enumerate();
    let stated = parts.filter_map(|(index, part)| {
        let voltage = part.supply_voltage.as_ref()?;
        let net = supply_pin(facts.circuit(), &part.reference.value)?;
        Some((net, Seed::Field(index), voltage.value.nominal()))
    });
    stated.collect()
}

/// The one net on which a part takes or gives power: that of its `+` pin, else the only one that is no ground.
pub(super) fn supply_pin(circuit: &Circuit, reference: &str) -> Option<NetId> {
    let part = circuit.device(circuit.device_named(reference)?);
    let live = |net: &NetId| !circuit.net(*net).ground;
    let plus = part.pins.iter().find(|pin| pin.name.contains('+')).and_then(|pin| pin.net).filter(live);
    plus.or_else(|| {
        let mut nets: Vec<NetId> = part.pins.iter().filter_map(|pin| pin.net).filter(live).collect();
        let powered = part.pins.iter().filter(|pin| pin.kind.is_power()).filter_map(|pin| pin.net).filter(live);
        let mut powered: Vec<NetId> = powered.collect();
        for nets in [&mut nets, &mut powered] {
            nets.sort_unstable();
            nets.dedup();
        }
        match (nets.as_slice(), powered.as_slice()) {
            ([only], _) | (_, [only]) => Some(*only),
            _ => None,
        }
    })
}

fn regulated(facts: &Facts<'_>) -> Vec<(NetId, Seed, f64)> {
    facts
        .regulators()
        .filter_map(|(id, regulator)| Some((id, regulator, regulator.output_net?)))
        .filter(|(_, _, net)| !facts.circuit().net(*net).ground)
        .filter_map(|(id, regulator, net)| {
            let voltage = facts.output_voltage(regulator);
            let volts = voltage.nominal().unwrap_or(0.0);
            (!voltage.is_missing()).then_some((net, Seed::Regulator(id), volts))
        })
        .collect()
}

/// The nets that nothing feeds and whose name, or a pin or cell on them, tells a voltage.
pub(super) fn named(facts: &Facts<'_>, is_fed: impl Fn(NetId) -> bool) -> Vec<(NetId, Seed, f64)> {
    let circuit = facts.circuit();
    let free = circuit.nets().filter(|net| !is_fed(*net) && !circuit.net(*net).ground);
    let named = free.filter_map(|net| {
        let (range, source) = told(facts, net)?;
        Some((net, Seed::Named { range, source }, range.nominal()))
    });
    named.collect()
}

/// The voltage that a net's name, a pin or a cell on it tells, with its source.
fn told(facts: &Facts<'_>, net: NetId) -> Option<(Range, String)> {
    let name = &facts.circuit().net(net).name;
    let last = name.rsplit('/').next().unwrap_or(name);
    standard(facts, last, "net name")
        .or_else(|| battery(facts, net, name))
        .or_else(|| {
            let volts = supply_name(name)?.volts;
            let tolerance = if volts.abs() >= HIGH_SUPPLY { NAMED_HIGH } else { NAMED };
            Some((Range::with_tolerance(volts, tolerance), "net name".to_owned()))
        })
        .or_else(|| connector_pin(facts, net))
}

/// A name that a standard supply goes by.
fn standard(facts: &Facts<'_>, name: &str, told_by: &str) -> Option<(Range, String)> {
    let supplies = &facts.knowledge().supplies;
    let supply =
        supplies.iter().find(|supply| supply.nets.iter().any(|pattern| pattern.eq_ignore_ascii_case(name)))?;
    Some((supply.voltage.value, format!("{told_by}, taken as {}", supply.name)))
}

/// A connector whose pin is called like a standard supply: the bus pin of a USB receptacle.
fn connector_pin(facts: &Facts<'_>, net: NetId) -> Option<(Range, String)> {
    let circuit = facts.circuit();
    circuit.fitted_on(net).find_map(|(device, pin)| {
        let part = circuit.device(device);
        let name = part.pins.get(pin).map(|pin| pin.name.as_str()).filter(|name| !name.is_empty())?;
        let told_by = || format!("pin {name} of {}", part.reference);
        (part.kind == DeviceKind::Connector).then(|| standard(facts, name, &told_by()))?
    })
}
