//! A built-up regulator as a circuit to be solved, with a slot for each figure of it.

use std::sync::Arc;

use super::memory::Memory;
use super::series::SeriesSlots;
use super::shunt::ShuntSlots;
use crate::board::DeviceModel;
use crate::quantity::Quantity;
use crate::solve::{
    Bank, Capacitor, Circuit, CurrentSource, Device, DeviceId, GROUND, Node, Resistor, SeriesRc, SolveError,
    VoltageSource, from_model,
};

/// The least resistance that a link or a resistor has, in ohms.
const LEAST_RESISTANCE: f64 = 1e-3;
/// The least current that a load is taken to draw, in amperes.
const LEAST_LOAD: f64 = 1e-9;

/// A figure's place in the list of values.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub(super) struct Slot(usize);

/// The input's voltage, signed.
pub(super) const INPUT: Slot = Slot(0);
/// The load's current, a magnitude.
pub(super) const LOAD: Slot = Slot(1);

/// A figure of the circuit.
#[derive(Debug)]
pub(super) struct Parameter {
    pub(super) quantity: Quantity,
    /// Whether it counts only where something moves: capacitances, bandwidths.
    pub(super) dynamic: bool,
    /// The part whose offset it is, where it is one.
    pub(super) offset: bool,
}

/// A node: ground, or one by its number.
pub(super) type At = Option<usize>;

/// What lies between nodes.
#[derive(Debug)]
pub(super) enum Kind {
    /// Ohms.
    Resistor(Slot),
    /// A fuse, bead or choke: next to nothing at rest.
    Link,
    /// Farads; of a capacitor inside the circuit.
    Capacitor(Slot),
    /// A part with a model; its parameters that are not exact have slots.
    Model { model: DeviceModel, slots: Vec<(&'static str, Slot)> },
    /// A supply that is there from the start, volts.
    Source(Slot),
    /// A packaged series part between its input, ground and output.
    Series(SeriesSlots),
    /// A programmable shunt reference that compares: cathode, reference, anode.
    AmplifyingShunt(ShuntSlots),
    /// Where the loop is broken.
    Break,
}

/// A part of the circuit.
#[derive(Debug)]
pub(super) struct Element {
    pub(super) name: String,
    pub(super) nodes: Vec<At>,
    pub(super) kind: Kind,
}

/// A capacitor of the output bank: farads, and ohms in series.
#[derive(Debug, Clone, Copy)]
pub(super) struct BankSlots {
    pub(super) farads: Slot,
    pub(super) ohms: Slot,
    pub(super) bulk: bool,
}

/// How the load draws its current.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) enum Draw {
    /// As a resistor that draws it at so many volts.
    Resistive(f64),
    /// Whatever the voltage.
    Constant,
}

/// The circuit as it is drawn.
#[derive(Debug)]
pub(in crate::facts) struct Recipe {
    /// The part that it is the circuit of.
    pub(super) name: String,
    pub(super) nodes: Vec<String>,
    pub(super) elements: Vec<Element>,
    pub(super) parameters: Vec<Parameter>,
    pub(super) bank: Vec<BankSlots>,
    /// Exact figures that all of it rests on.
    pub(super) rests: Vec<Quantity>,
    pub(super) input: usize,
    pub(super) output: usize,
    /// The node that the reference holds.
    pub(super) reference: At,
    pub(super) draw: Draw,
    pub(super) negative: bool,
    /// What the output should be, as a magnitude in volts.
    pub(super) wanted: f64,
    /// Seconds in which the input rises, the shortest and the longest.
    pub(super) rise: (f64, f64),
    pub(super) memory: Memory,
}

/// What is changed about the circuit to see what decides.
#[derive(Debug, Clone, Default)]
pub(super) struct Change {
    /// Parts that are left out, by name.
    pub(super) without: Vec<String>,
    /// The room that amplifiers keep to their upper rail, volts.
    pub(super) top: Option<f64>,
    /// The part, by name, whose current from the reference's net is measured.
    pub(super) sensed: Option<String>,
}

/// How the circuit is looked at.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum View {
    /// At rest, and for its loop: without the output's capacitors.
    Bare,
    /// With them, and with a load that a starting output can carry.
    Whole,
}

/// The circuit, made for one set of values.
#[derive(Debug)]
pub(super) struct Made {
    pub(super) circuit: Circuit,
    pub(super) nodes: Vec<Node>,
    pub(super) input: DeviceId,
    pub(super) output: Node,
    pub(super) at_break: Option<DeviceId>,
    /// Where a current is measured, if one is.
    pub(super) sense: Option<DeviceId>,
}

impl Recipe {
    /// The value of a slot.
    pub(super) fn of(values: &[f64], slot: Slot) -> f64 {
        values.get(slot.0).copied().unwrap_or(f64::NAN)
    }

    /// The same values with another in a slot.
    pub(super) fn with(values: &[f64], slot: Slot, value: f64) -> Vec<f64> {
        let mut changed = values.to_vec();
        if let Some(own) = changed.get_mut(slot.0) {
            *own = value;
        }
        changed
    }

    /// Every figure at its nominal value.
    pub(super) fn nominals(&self) -> Vec<f64> {
        self.parameters.iter().map(|one| one.quantity.nominal().unwrap_or(f64::NAN)).collect()
    }

    /// A new figure of the circuit.
    pub(super) fn slot(&mut self, quantity: Quantity, dynamic: bool) -> Slot {
        self.parameters.push(Parameter { quantity, dynamic, offset: false });
        Slot(self.parameters.len() - 1)
    }

    /// Says that a slot is an amplifier's offset.
    pub(super) fn mark_offset(&mut self, slot: Slot) {
        if let Some(parameter) = self.parameters.get_mut(slot.0) {
            parameter.offset = true;
        }
    }

    /// Every figure with its slot.
    pub(super) fn slots(&self) -> impl Iterator<Item = (Slot, &Parameter)> {
        self.parameters.iter().enumerate().map(|(place, one)| (Slot(place), one))
    }

    /// The slots of amplifiers' offsets.
    pub(super) fn offsets(&self) -> impl Iterator<Item = (Slot, &Quantity)> {
        let all = self.parameters.iter().enumerate();
        all.filter(|(_, one)| one.offset).map(|(place, one)| (Slot(place), &one.quantity))
    }

    /// The circuit for a set of values.
    ///
    /// # Errors
    /// Where a value cannot be.
    pub(super) fn make(&self, values: &[f64], view: View, change: &Change) -> Result<Made, SolveError> {
        let mut circuit = Circuit::new();
        let nodes: Vec<Node> = self.nodes.iter().map(|name| circuit.node(name)).collect();
        let node = |at: At| at.and_then(|place| nodes.get(place).copied()).unwrap_or(GROUND);
        let (mut at_break, mut sense) = (None, None);
        for element in self.elements.iter().filter(|one| !change.without.contains(&one.name)) {
            let mut ends: Vec<Node> = element.nodes.iter().map(|at| node(*at)).collect();
            let held = element.nodes.iter().position(|at| *at == self.reference);
            if let Some(end) = held.and_then(|held| ends.get_mut(held))
                && change.sensed.as_ref() == Some(&element.name)
            {
                let behind = circuit.node("behind the measured current");
                sense = Some(circuit.add("the measured current", &[*end, behind], VoltageSource { volts: 0.0 })?);
                *end = behind;
            }
            if let Kind::Series(slots) = &element.kind {
                slots.add_to(&mut circuit, &element.name, &ends, values)?;
                continue;
            }
            let id = circuit.add_shared(&element.name, &ends, device(&element.kind, values, change))?;
            if matches!(element.kind, Kind::Break) {
                at_break = Some(id);
            }
        }
        let (input, output) = (node(Some(self.input)), node(Some(self.output)));
        let volts = Self::of(values, INPUT);
        let input = circuit.add("the input", &[input, GROUND], VoltageSource { volts })?;
        self.add_load(&mut circuit, output, Self::of(values, LOAD), view)?;
        if view == View::Whole {
            for (place, one) in self.bank.iter().enumerate() {
                let (farads, esr) = (Self::of(values, one.farads), Self::of(values, one.ohms));
                circuit.add(&format!("output capacitor {place}"), &[output, GROUND], Capacitor { farads, esr })?;
            }
        }
        Ok(Made { circuit, nodes, input, output, at_break, sense })
    }

    fn add_load(&self, circuit: &mut Circuit, output: Node, amperes: f64, view: View) -> Result<(), SolveError> {
        let amperes = amperes.max(LEAST_LOAD);
        match self.draw {
            // A load that draws its current from an output at zero would pull it below ground.
            Draw::Constant if view == View::Bare => {
                let amperes = if self.negative { -amperes } else { amperes };
                circuit.add("the load", &[output, GROUND], CurrentSource { amperes })?;
            }
            Draw::Constant => {
                circuit.add("the load", &[output, GROUND], Resistor { ohms: self.wanted.max(1.0) / amperes })?;
            }
            Draw::Resistive(volts) => {
                circuit.add("the load", &[output, GROUND], Resistor { ohms: volts / amperes })?;
            }
        }
        Ok(())
    }

    /// The output's capacitors for a loop, and the ESR of the bulk capacitor in ohms; `None` without any.
    pub(super) fn bank(&self, values: &[f64]) -> Option<(Bank, f64)> {
        let bulk: Vec<&BankSlots> = self.bank.iter().filter(|one| one.bulk).collect();
        let first = bulk.first()?;
        let farads = |one: &BankSlots| Self::of(values, one.farads);
        let ohms = |one: &BankSlots| Self::of(values, one.ohms).max(LEAST_RESISTANCE);
        let others = self.bank.iter().filter(|one| !one.bulk);
        let bank = Bank {
            bulk: bulk.iter().map(|one| farads(one)).sum(),
            others: others.map(|one| SeriesRc { farads: farads(one), ohms: ohms(one) }).collect(),
        };
        let count = f64::from(u32::try_from(bulk.len()).unwrap_or(u32::MAX));
        Some((bank, ohms(first) / count))
    }
}

fn device(kind: &Kind, values: &[f64], change: &Change) -> Arc<dyn Device> {
    match kind {
        Kind::Resistor(slot) => Arc::new(Resistor { ohms: Recipe::of(values, *slot).max(LEAST_RESISTANCE) }),
        Kind::Link => Arc::new(Resistor { ohms: LEAST_RESISTANCE }),
        Kind::Capacitor(slot) => Arc::new(Capacitor { farads: Recipe::of(values, *slot), esr: 0.0 }),
        Kind::Source(slot) => Arc::new(VoltageSource { volts: Recipe::of(values, *slot) }),
        Kind::AmplifyingShunt(slots) => Arc::new(slots.device(values)),
        Kind::Break | Kind::Series(_) => Arc::new(VoltageSource { volts: 0.0 }),
        Kind::Model { model, slots } => from_model(model, |name, range| {
            if let Some(top) = change.top.filter(|_| name == "TOP") {
                return top;
            }
            let slot = slots.iter().find(|(own, _)| *own == name);
            slot.map_or_else(|| range.nominal(), |(_, slot)| Recipe::of(values, *slot))
        }),
    }
}
