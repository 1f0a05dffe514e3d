//! Each part of a cut-out as an element of the circuit.

use super::models::model_kind;
use super::place::{Draft, not_modelled};
use super::recipe::{At, Kind};
use crate::board::ModelKind;
use crate::circuit::{Circuit, DeviceId, DeviceKind, NetId, Pin};
use crate::knowledge::Sign;
use crate::quantity::Evidence;
use crate::recognize::{OpAmpUnit, Regulator, RegulatorKind, Transistor, anode, op_amps, transistors};

/// How many parts of a net are looked at.
const SAMPLE: usize = 256;

/// The nets of a part with two ends that lie apart.
fn ends(circuit: &Circuit, device: DeviceId) -> Option<[NetId; 2]> {
    circuit.ends(device).filter(|[one, other]| one != other)
}

impl Draft<'_, '_> {
    /// Adds a part of the cut-out.
    pub(super) fn add_part(&mut self, device: DeviceId) -> Result<(), Box<Evidence>> {
        let circuit = self.facts.circuit();
        let part = circuit.device(device);
        if let Some(packaged) = self.packaged(device) {
            return self.add_packaged(device, &packaged);
        }
        match part.kind {
            DeviceKind::Bipolar | DeviceKind::Mosfet => self.add_transistors(device),
            DeviceKind::Diode | DeviceKind::Schottky | DeviceKind::Zener | DeviceKind::Led => self.add_diode(device),
            DeviceKind::Resistor | DeviceKind::Capacitor => self.add_passive(device),
            DeviceKind::Inductor | DeviceKind::Ferrite | DeviceKind::Fuse | DeviceKind::NetTie => {
                if let Some(nets) = ends(circuit, device) {
                    let nodes = nets.map(|net| self.place(net)).to_vec();
                    self.add(&part.reference.clone(), nodes, Kind::Link);
                }
                Ok(())
            }
            DeviceKind::Potentiometer => Err(not_modelled(self.facts, device, "where it is set is not known")),
            DeviceKind::Switch => Err(not_modelled(self.facts, device, "whether it is closed is not known")),
            DeviceKind::Jfet | DeviceKind::OtherSemiconductor | DeviceKind::ResistorNetwork => {
                Err(not_modelled(self.facts, device, "there is no model of its kind"))
            }
            _ => Ok(()),
        }
    }

    /// The regulator or reference that a part is by itself.
    fn packaged(&self, device: DeviceId) -> Option<Regulator> {
        let amplifier = self.built.amplifier.as_ref().and_then(|amplifier| amplifier.shunt.as_deref());
        if let Some(shunt) = amplifier.filter(|shunt| shunt.device == device) {
            return Some(shunt.clone());
        }
        self.facts.in_part(device).find(|one| !one.is_built_up()).cloned()
    }

    fn add_packaged(&mut self, device: DeviceId, packaged: &Regulator) -> Result<(), Box<Evidence>> {
        let amplifies = self.built.amplifier.as_ref().is_some_and(|amplifier| amplifier.devices.contains(&device));
        let reference = self.facts.circuit().device(device).reference.clone();
        let Some(output) = packaged.output_net else { return Ok(()) };
        let ground = packaged.ground_net.and_then(|net| self.place(net));
        let output = self.place(output);
        match packaged.kind {
            RegulatorKind::Shunt if !amplifies => {
                let nodes = match packaged.polarity {
                    Sign::Positive => vec![ground, output],
                    Sign::Negative => vec![output, ground],
                };
                self.add_shunt(device, packaged, nodes)
            }
            RegulatorKind::Shunt => self.add_amplifying_shunt(device, packaged),
            RegulatorKind::Reference | RegulatorKind::Series if self.built.reference.devices.contains(&device) => {
                let Some(input) = packaged.input_net else {
                    return Err(not_modelled(self.facts, device, "its input is open"));
                };
                let volts = self.facts.set_point(packaged);
                if let Some(missing) = volts.missing_evidence().next() {
                    return Err(Box::new(missing.clone()));
                }
                let slots = self.series_slots(packaged, volts);
                let input = self.place(input);
                self.add(&reference, vec![input, ground, output], Kind::Series(slots));
                Ok(())
            }
            _ => Err(not_modelled(self.facts, device, "there is no model of its kind in a loop")),
        }
    }

    /// A shunt reference: by the model that is declared for it, else one that holds its set point.
    fn add_shunt(&mut self, device: DeviceId, packaged: &Regulator, nodes: Vec<At>) -> Result<(), Box<Evidence>> {
        if self.facts.declared_model(device, ModelKind::Shunt).is_some() {
            return self.add_model(device, ModelKind::Shunt, nodes, None);
        }
        let volts = self.facts.set_point(packaged).magnitude();
        if let Some(missing) = volts.missing_evidence().next() {
            return Err(Box::new(missing.clone()));
        }
        self.add_model(device, ModelKind::Shunt, nodes, Some(volts))
    }

    fn add_passive(&mut self, device: DeviceId) -> Result<(), Box<Evidence>> {
        let circuit = self.facts.circuit();
        let Some(nets) = ends(circuit, device) else { return Ok(()) };
        let part = circuit.device(device);
        let name = part.reference.clone();
        let nodes = nets.map(|net| self.place(net)).to_vec();
        if part.kind == DeviceKind::Capacitor {
            let farads = self.facts.unbiased_capacitance(device);
            if !farads.is_missing() {
                let slot = self.recipe.slot(farads, true);
                self.add(&name, nodes, Kind::Capacitor(slot));
            }
            return Ok(());
        }
        let ohms = self.facts.resistance(device);
        if let Some(missing) = ohms.missing_evidence().next() {
            return Err(Box::new(missing.clone()));
        }
        let slot = self.recipe.slot(ohms, false);
        self.add(&name, nodes, Kind::Resistor(slot));
        Ok(())
    }

    fn add_diode(&mut self, device: DeviceId) -> Result<(), Box<Evidence>> {
        let circuit = self.facts.circuit();
        let part = circuit.device(device);
        let Some(nets) = ends(circuit, device) else { return Ok(()) };
        let anode = anode(part).and_then(|pin| circuit.net_of(device, pin));
        let Some(anode) = anode else {
            return Err(not_modelled(self.facts, device, "its pins do not tell its direction"));
        };
        let cathode = nets.into_iter().find(|net| *net != anode).unwrap_or(anode);
        let nodes = vec![self.place(anode), self.place(cathode)];
        let zener = part.kind == DeviceKind::Zener;
        let kind = if zener { ModelKind::Zener } else { ModelKind::Diode };
        self.add_model(device, kind, nodes, None)
    }

    fn add_transistors(&mut self, device: DeviceId) -> Result<(), Box<Evidence>> {
        let all: Vec<Transistor> = transistors(self.facts.circuit(), device);
        if all.is_empty() {
            return Err(not_modelled(self.facts, device, "its pins do not tell its terminals"));
        }
        for one in all {
            if !self.is_inside(one) {
                continue;
            }
            let kind = model_kind(one);
            // Collector, base, emitter; drain, gate, source.
            let nodes = [one.collector, one.control, one.emitter].map(|net| self.place(net));
            if one.darlington && self.facts.declared_model(device, kind).is_none() {
                self.add_darlington(device, kind, nodes)?;
            } else {
                self.add_model(device, kind, nodes.to_vec(), None)?;
            }
        }
        Ok(())
    }

    /// Of two transistors in one package the one that belongs to this circuit.
    fn is_inside(&self, one: Transistor) -> bool {
        let cut = |net: NetId| self.facts.circuit().net(net).ground || self.built.boundary.contains(&net);
        // An outboard transistor lies between three supplies.
        self.built.outboard || !(cut(one.control) && cut(one.collector) && cut(one.emitter))
    }

    /// Adds the amplifiers that drive a net of this circuit, each unit of a part for itself; the others of the part belong
    /// elsewhere.
    pub(super) fn add_op_amps(&mut self) -> Result<(), Box<Evidence>> {
        let circuit = self.facts.circuit();
        let output = self.built.amplifier.as_ref().map(|amplifier| amplifier.output);
        let devices = self.built.cut_out.iter().map(|(device, _)| *device);
        let mut waiting: Vec<OpAmpUnit> = devices.flat_map(|device| op_amps(circuit, device)).collect();
        // The inputs of one may be driven by another.
        while let Some(at) = waiting.iter().position(|unit| output == Some(unit.output) || self.has(unit.output)) {
            let unit = waiting.remove(at);
            let [upper, lower] = self.supply_pins(unit.device);
            let nodes = vec![self.place(unit.plus), self.place(unit.minus), upper, lower, self.place(unit.output)];
            self.add_model(unit.device, ModelKind::OpAmp, nodes, None)?;
        }
        Ok(())
    }

    /// The nodes of an amplifier's supply pins; where they are not drawn, the regulator's input and ground.
    fn supply_pins(&mut self, device: DeviceId) -> [At; 2] {
        let circuit = self.facts.circuit();
        let pins = &circuit.device(device).pins;
        let on = |names: &[&str]| {
            let named = |pin: &&Pin| names.iter().any(|name| pin.name.trim().eq_ignore_ascii_case(name));
            pins.iter().find(named).and_then(|pin| pin.net)
        };
        let upper = on(&["V+", "VCC", "VDD", "VS+", "+VS", "VP", "+V", "V+_2"]);
        let lower = on(&["V-", "VEE", "VSS", "GND", "VS-", "-VS", "VN", "-V"]);
        let (high, low) =
            if self.recipe.negative { (None, Some(self.recipe.input)) } else { (Some(self.recipe.input), None) };
        [upper.map_or(high, |net| self.place(net)), lower.map_or(low, |net| self.place(net))]
    }

    /// Adds the parts outside the cut-out that lie between two of its nets: a leak across the pass transistor, a diode
    /// from the output back to the input, a resistor in the line.
    pub(super) fn add_joining(&mut self, regulator: &Regulator) -> Result<(), Box<Evidence>> {
        let circuit = self.facts.circuit();
        let mut nets: Vec<NetId> = self.built.boundary.clone();
        nets.extend([regulator.input_net, regulator.output_net].into_iter().flatten());
        nets.extend([self.built.input, self.built.output]);
        nets.sort_unstable();
        nets.dedup();
        let mut parts: Vec<DeviceId> = Vec::new();
        for net in nets.into_iter().filter(|net| !circuit.net(*net).ground) {
            for (device, far) in circuit.neighbours(net).take(SAMPLE) {
                let inside = self.built.cut_out.iter().any(|(own, _)| *own == device);
                let known = self.has(net) && self.has(far) && !parts.contains(&device);
                if known && !inside && self.joins(device, [net, far]) {
                    parts.push(device);
                }
            }
        }
        parts.sort_unstable();
        for device in parts {
            self.add_part(device)?;
        }
        Ok(())
    }

    /// Whether a part between two of the circuit's nets counts: what lies from a supply to ground loads that alone.
    fn joins(&mut self, device: DeviceId, nets: [NetId; 2]) -> bool {
        let part = self.facts.circuit().device(device);
        let kind = match part.kind {
            DeviceKind::Resistor => part.amount.is_some(),
            DeviceKind::Diode
            | DeviceKind::Schottky
            | DeviceKind::Inductor
            | DeviceKind::Ferrite
            | DeviceKind::Fuse
            | DeviceKind::NetTie => true,
            _ => false,
        };
        let [one, other] = nets.map(|net| self.place(net));
        let fixed = |at: At| at.is_none() || at == Some(self.recipe.input);
        kind && !(fixed(one) && fixed(other))
    }
}
