//! From what is drawn to a circuit: the parts of the cut-out, those that join its ends, its supplies and its load.

use std::collections::BTreeMap;

use super::super::{Facts, RailOrigin};
use super::memory::Memory;
use super::models::is_dynamic;
use super::recipe::{At, BankSlots, Draw, Element, Kind, Parameter, Recipe, Slot};
use crate::board::{LoadKind, ModelKind};
use crate::circuit::{DeviceId, NetId};
use crate::knowledge::Sign;
use crate::quantity::{Dimension, Evidence, Grade, Quantity, Range};
use crate::recognize::{BuiltUp, Regulator, Side};

/// Seconds in which an input rises where nothing is declared: fast ramps can hide a dead state.
const USUAL_RISE: f64 = 0.1;

/// A recipe as it grows.
pub(super) struct Draft<'f, 'a> {
    pub(super) facts: &'f Facts<'a>,
    pub(super) built: &'f BuiltUp,
    pub(super) recipe: Recipe,
    places: BTreeMap<NetId, usize>,
}

impl Facts<'_> {
    /// The circuit of a built-up regulator.
    ///
    /// # Errors
    /// What is missing for it.
    pub(super) fn recipe(&self, regulator: &Regulator, built: &BuiltUp) -> Result<Recipe, Box<Evidence>> {
        let input = self.input_voltage(regulator);
        let load = self.load(regulator);
        for figure in [&input, &load] {
            if let Some(missing) = figure.missing_evidence().next() {
                return Err(Box::new(missing.clone()));
            }
        }
        let open = Evidence::new(Grade::Assumed, self.about(regulator, "circuit"), "its input or output is open");
        let (Some(input_net), Some(output_net)) = (regulator.source_net(), regulator.output_net) else {
            return Err(Box::new(open));
        };
        let fixed = |quantity| Parameter { quantity, dynamic: false, offset: false };
        let recipe = Recipe {
            name: self.part_of(regulator).reference.clone(),
            nodes: Vec::new(),
            elements: Vec::new(),
            parameters: vec![fixed(input), fixed(load)],
            bank: Vec::new(),
            rests: vec![self.as_drawn(regulator, built)],
            input: 0,
            output: 0,
            reference: None,
            draw: self.draw_of(regulator),
            negative: regulator.polarity == Sign::Negative,
            wanted: self.output_voltage(regulator).nominal().map_or(f64::NAN, f64::abs),
            rise: self.rise_of(input_net),
            memory: Memory::default(),
        };
        let mut draft = Draft { facts: self, built, recipe, places: BTreeMap::new() };
        draft.recipe.input = draft.place(input_net).unwrap_or_default();
        draft.recipe.output = draft.place(output_net).unwrap_or_default();
        draft.recipe.reference = draft.place(built.reference.net);
        for (device, _) in &built.cut_out {
            draft.add_part(*device)?;
        }
        draft.add_op_amps()?;
        draft.add_joining(regulator)?;
        draft.add_supplies(regulator)?;
        draft.add_bank(regulator, output_net);
        draft.break_loop();
        Ok(draft.recipe)
    }

    /// That the circuit is as drawn, as an exact figure that results rest on.
    fn as_drawn(&self, regulator: &Regulator, built: &BuiltUp) -> Quantity {
        let names: Vec<&str> =
            built.cut_out.iter().map(|(device, _)| self.circuit().device(*device).reference.as_str()).collect();
        let source = format!("solved from {} as drawn", names.join(", "));
        let evidence = Evidence::new(Grade::Drawn, self.about(regulator, "circuit"), source);
        Quantity::fact(Dimension::ONE, Range::exactly(0.0), evidence)
    }

    /// How the load draws: resistive, at the rail's nominal voltage, where nothing else is declared.
    fn draw_of(&self, regulator: &Regulator) -> Draw {
        let name = self.output_name(regulator).unwrap_or_default();
        let kind = self.board().load(&name).and_then(|load| load.kind.as_ref()).map(|kind| kind.value);
        if kind == Some(LoadKind::Constant) {
            return Draw::Constant;
        }
        let declared = self.board().rail(&name).and_then(|rail| rail.voltage.as_ref());
        let volts = declared
            .map(|voltage| voltage.value.nominal())
            .or_else(|| self.named_voltage(regulator))
            .or_else(|| self.output_voltage(regulator).nominal());
        Draw::Resistive(volts.map_or(f64::NAN, f64::abs))
    }

    /// The seconds in which the supply behind a net rises.
    fn rise_of(&self, input: NetId) -> (f64, f64) {
        let mut net = input;
        // So many series elements lie between a supply and a regulator at most.
        for _ in 0..16 {
            let name = &self.circuit().net(net).name;
            let own = self.board().supplies.iter().find(|entry| entry.nodes.value.nets().any(|own| own == name));
            if let Some(rise) = own.and_then(|supply| supply.rise.as_ref()) {
                return (rise.value.low().max(1e-6), rise.value.high().max(1e-6));
            }
            match self.rail(net).origin {
                RailOrigin::Through { from, .. } if from != net => net = from,
                _ => break,
            }
        }
        (USUAL_RISE, USUAL_RISE)
    }
}

impl Draft<'_, '_> {
    /// The node of a net.
    pub(super) fn place(&mut self, net: NetId) -> At {
        let circuit = self.facts.circuit();
        if circuit.net(net).ground {
            return None;
        }
        if let Some(known) = self.places.get(&net) {
            return Some(*known);
        }
        let place = self.node(&circuit.net(net).name);
        self.places.insert(net, place);
        Some(place)
    }

    /// A node of its own.
    pub(super) fn node(&mut self, name: &str) -> usize {
        self.recipe.nodes.push(name.to_owned());
        self.recipe.nodes.len() - 1
    }

    /// Whether a net has a node.
    pub(super) fn has(&self, net: NetId) -> bool {
        self.facts.circuit().net(net).ground || self.places.contains_key(&net)
    }

    pub(super) fn add(&mut self, name: &str, nodes: Vec<At>, kind: Kind) {
        // A part with all its ends on one node does nothing.
        if nodes.windows(2).all(|pair| pair.first() == pair.last()) {
            return;
        }
        self.recipe.elements.push(Element { name: name.to_owned(), nodes, kind });
    }

    /// Adds a part by its model; of amplifiers the offset is marked, of references a set point may be the voltage.
    pub(super) fn add_model(
        &mut self,
        device: DeviceId,
        kind: ModelKind,
        nodes: Vec<At>,
        volts: Option<Quantity>,
    ) -> Result<(), Box<Evidence>> {
        let name = self.facts.circuit().device(device).reference.clone();
        let none = || Box::new(self.facts.no_model(device, kind));
        let mut modelled = self.facts.modelled(device, kind).ok_or_else(none)?;
        self.recipe.rests.push(modelled.evidence);
        let holds = matches!(modelled.model.kind(), ModelKind::Zener | ModelKind::Shunt);
        if holds && let Some(nominal) = volts.as_ref().and_then(Quantity::nominal) {
            modelled.model.put("BV", Range::exactly(nominal));
        }
        if holds && modelled.model.get("BV").is_none() {
            return Err(none());
        }
        let mut slots: Vec<(&'static str, Slot)> = Vec::new();
        for (parameter, quantity) in modelled.open {
            let slot = self.recipe.slot(quantity, is_dynamic(parameter));
            if parameter == "VOS" {
                self.recipe.mark_offset(slot);
            }
            slots.push((parameter, slot));
        }
        if let Some(volts) = volts.filter(|_| holds) {
            let slot = self.recipe.slot(volts, false);
            slots.insert(0, ("BV", slot));
        }
        self.add(&name, nodes, Kind::Model { model: modelled.model, slots });
        Ok(())
    }

    /// The supplies at which the circuit is cut out, other than its own input and output.
    fn add_supplies(&mut self, regulator: &Regulator) -> Result<(), Box<Evidence>> {
        let ends = [regulator.source_net(), regulator.input_net, regulator.output_net];
        for net in &self.built.boundary {
            let circuit = self.facts.circuit();
            if ends.contains(&Some(*net)) || circuit.net(*net).ground || !self.has(*net) || self.is_driven(*net) {
                continue;
            }
            // What lies on the output's line is held by the pass transistor, through the parts that join it.
            if self.built.output_line.contains(net) {
                continue;
            }
            let place = self.place(*net);
            let name = circuit.net(*net).name.clone();
            let upstream = ends.iter().flatten().any(|end| self.is_one_supply(*net, *end));
            if upstream {
                let input = Some(self.recipe.input);
                self.add(&format!("the way to {name}"), vec![place, input], Kind::Link);
                continue;
            }
            let volts = self.facts.rail(*net).voltage;
            if let Some(missing) = volts.missing_evidence().next() {
                return Err(Box::new(missing.clone()));
            }
            let slot = self.recipe.slot(volts, false);
            self.add(&name, vec![place, None], Kind::Source(slot));
        }
        Ok(())
    }

    /// Whether a net of the boundary is held by a part of the circuit that is no mere load: by a line resistor.
    fn is_driven(&self, net: NetId) -> bool {
        let joined = |element: &Element| matches!(element.kind, Kind::Link | Kind::Resistor(_));
        let place = self.places.get(&net).copied();
        let ends = [Some(self.recipe.input), Some(self.recipe.output)];
        net == self.built.input
            && self.recipe.elements.iter().any(|element| {
                joined(element) && element.nodes.contains(&place) && element.nodes.iter().any(|at| ends.contains(at))
            })
    }

    /// Whether a net is the input's supply before or behind series elements.
    fn is_one_supply(&self, net: NetId, input: NetId) -> bool {
        let through = |one: NetId, other: NetId| match self.facts.rail(one).origin {
            RailOrigin::Through { from, .. } => from == other,
            _ => false,
        };
        net != input && (through(net, input) || through(input, net))
    }

    /// The output's capacitors.
    fn add_bank(&mut self, regulator: &Regulator, output: NetId) {
        let Some(bank) = self.facts.bank_of(regulator, Side::Output) else { return };
        let bulk = self.facts.bulk(regulator);
        for branch in bank.branches.iter().filter(|branch| branch.through.is_empty()) {
            let farads = self.facts.effective_capacitance(branch.capacitor, output);
            let ohms = self.facts.branch_esr(branch);
            if farads.is_missing() || ohms.is_missing() || farads.nominal().is_none_or(|farads| farads <= 0.0) {
                continue;
            }
            let is_bulk = bulk.iter().any(|one| one.capacitor == branch.capacitor);
            let (farads, ohms) = (self.recipe.slot(farads, true), self.recipe.slot(ohms, true));
            self.recipe.bank.push(BankSlots { farads, ohms, bulk: is_bulk });
        }
    }
}

/// The error that a part is none that the solver has a model for: none that could be declared would help.
pub(super) fn not_modelled(facts: &Facts<'_>, device: DeviceId, why: &str) -> Box<Evidence> {
    let reference = &facts.circuit().device(device).reference;
    Box::new(Evidence::new(Grade::Assumed, format!("model of {reference}"), why))
}
