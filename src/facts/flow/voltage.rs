//! The voltages of supply nets: declared, regulated, rectified, named, and carried on through series elements.

use std::collections::HashMap;

use super::current::Drawn;
use super::element::Element;
use super::seeds::{Seed, supply_example};
use crate::board::SupplyEntry;
use crate::circuit::{DeviceId, NetId, supply_name};
use crate::facts::Facts;
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Slope, Table};
use crate::recognize::RegulatorId;

/// How many series elements are followed upwards.
const LONGEST_PATH: usize = 64;

/// Where the voltage of a net comes from.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum RailOrigin {
    /// It is the ground.
    Ground,
    /// A declared supply.
    Declared,
    /// The output of a regulator.
    Regulator(RegulatorId),
    /// A rectifier behind a declared alternating supply; its first diode or its bridge.
    Rectified(Option<DeviceId>),
    /// A series element that another net feeds.
    Through {
        /// The element.
        device: DeviceId,
        /// The net that feeds it.
        from: NetId,
    },
    /// Its name, the name of a connector's pin, or a cell on it.
    Named,
    /// Nothing.
    Unknown,
}

/// A net's voltage against ground and where it comes from.
#[derive(Debug, Clone)]
pub struct Rail {
    /// Volts, signed; missing where nothing tells it. Of a rectified supply from the valley at the peak load to the
    /// peak.
    pub voltage: Quantity,
    /// Where it comes from.
    pub origin: RailOrigin,
}

/// The nets whose voltage is known.
#[derive(Debug)]
pub(in crate::facts) struct Rails {
    known: HashMap<NetId, Rail>,
}

impl Rails {
    /// Whether the net's voltage is declared, regulated, named or carried on.
    pub(in crate::facts) fn is_known(&self, net: NetId) -> bool {
        self.known.contains_key(&net)
    }

    pub(in crate::facts) fn rail(&self, facts: &Facts<'_>, net: NetId) -> Rail {
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

/// Voltages from the sources down to the nets behind series elements.
pub(in crate::facts) fn propagate(facts: &Facts<'_>) -> Rails {
    let mut rails = Rails { known: HashMap::new() };
    for net in facts.flow().downwards() {
        let rail = match facts.flow().seed(net) {
            Some(seed) => facts.source_voltage(net, seed),
            None => carried(facts, &rails, net),
        };
        if let Some(rail) = rail {
            rails.known.insert(net, rail);
        }
    }
    rails
}

/// What series elements bring to a net: behind several diodes either of the supplies may be the one that is there.
fn carried(facts: &Facts<'_>, rails: &Rails, net: NetId) -> Option<Rail> {
    let mut found: Option<Rail> = None;
    for (from, device, element) in facts.flow().feeders(net) {
        let Some(source) = rails.known.get(&from).filter(|rail| !rail.voltage.is_missing()) else { continue };
        let voltage = facts.behind(&source.voltage, device, element, net, Drawn::Peak);
        found = Some(match found {
            None => Rail { voltage, origin: RailOrigin::Through { device, from } },
            Some(first) => Rail { voltage: either(&first.voltage, &voltage), origin: first.origin },
        });
    }
    found
}

/// The range over two supplies.
fn either(one: &Quantity, other: &Quantity) -> Quantity {
    let inputs = [(one, Slope::Rising), (other, Slope::Rising)];
    let low = Quantity::monotone(Dimension::VOLTAGE, &inputs, |v| v.iter().copied().fold(f64::INFINITY, f64::min));
    let high =
        Quantity::monotone(Dimension::VOLTAGE, &inputs, |v| v.iter().copied().fold(f64::NEG_INFINITY, f64::max));
    low.hull(&high)
}

impl Facts<'_> {
    fn source_voltage(&self, net: NetId, seed: &Seed) -> Option<Rail> {
        let name = &self.circuit().net(net).name;
        let (voltage, origin) = match seed {
            Seed::Declared { entry, turned } => {
                let entry = self.board().supplies.get(*entry)?;
                let voltage = supply_voltage(entry, name)?;
                let voltage = if *turned { voltage.negated() } else { voltage };
                (self.sagging(entry, voltage, net), RailOrigin::Declared)
            }
            Seed::Field(part) => {
                let voltage = self.board().parts.get(*part)?.supply_voltage.as_ref()?;
                (voltage.quantity(Dimension::VOLTAGE, format!("voltage of {name}")), RailOrigin::Declared)
            }
            Seed::Rectified { entry, rectifier } => {
                let entry = self.board().supplies.get(*entry)?;
                (self.rectified(entry, rectifier)?, RailOrigin::Rectified(rectifier.devices.first().copied()))
            }
            Seed::Regulator(id) => {
                let regulator = self.design().regulators.get(id.0)?;
                (self.output_voltage(regulator), RailOrigin::Regulator(*id))
            }
            Seed::Named { range, source } => {
                let evidence = Evidence::new(Grade::Inferred, format!("voltage of {name}"), source.clone())
                    .settled_by(supply_of(name));
                (Quantity::fact(Dimension::VOLTAGE, *range, evidence), RailOrigin::Named)
            }
        };
        Some(Rail { voltage, origin })
    }

    /// The supply less what its own resistance takes at the load.
    fn sagging(&self, entry: &SupplyEntry, voltage: Quantity, net: NetId) -> Quantity {
        let Some(resistance) = &entry.resistance else { return voltage };
        let name = &self.circuit().net(net).name;
        let resistance = resistance.quantity(Dimension::RESISTANCE, format!("source resistance of {name}"));
        lowered(&voltage, &resistance.times(&self.draw(net)))
    }

    /// The nets from one up to where power enters, each with the element that feeds it.
    pub(in crate::facts) fn path_up(&self, net: NetId) -> Vec<(NetId, Option<DeviceId>)> {
        let mut path: Vec<(NetId, Option<DeviceId>)> = Vec::new();
        let mut at = net;
        while let RailOrigin::Through { device, from } = self.rail(at).origin {
            if path.len() >= LONGEST_PATH {
                break;
            }
            path.push((at, Some(device)));
            at = from;
        }
        path.push((at, None));
        path
    }

    /// The voltage of a net while the loads draw what heats: a rectified supply's mean, less what the elements on the
    /// way take at that load.
    pub(in crate::facts) fn heat_voltage(&self, net: NetId) -> Quantity {
        let mut path = self.path_up(net);
        let Some((source, _)) = path.pop() else { return self.rail(net).voltage };
        let mut voltage = match self.flow().seed(source) {
            Some(Seed::Rectified { entry, rectifier }) => {
                let entry = self.board().supplies.get(*entry);
                entry.and_then(|entry| self.rectified_mean(entry, rectifier))
            }
            _ => None,
        }
        .unwrap_or_else(|| self.rail(source).voltage);
        while let Some((to, device)) = path.pop() {
            let element = self.flow().feeders(to).find(|(_, known, _)| Some(*known) == device);
            if let Some((_, device, element)) = element {
                voltage = self.behind(&voltage, device, element, to, Drawn::Continuous);
            }
        }
        voltage
    }

    /// The voltage behind a series element that leads from a net of voltage `from` to `to`.
    fn behind(&self, from: &Quantity, device: DeviceId, element: Element, to: NetId, drawn: Drawn) -> Quantity {
        match self.series_drop(device, element, to, drawn) {
            None => from.clone(),
            Some(drop) => lowered(from, &drop),
        }
    }
}

/// A voltage brought nearer to ground by a drop.
fn lowered(voltage: &Quantity, drop: &Quantity) -> Quantity {
    if voltage.nominal().unwrap_or(0.0) >= 0.0 { voltage.minus(drop) } else { voltage.plus(drop) }
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
    let range: Range = found.range;
    Some(Quantity::fact(Dimension::VOLTAGE, range, evidence))
}
