//! A programmable shunt reference that compares, as an element of the circuit.

use super::super::family_figure::Ask;
use super::place::{Draft, not_modelled};
use super::recipe::{Kind, Recipe, Slot};
use crate::board::{DeviceModel, ModelKind};
use crate::circuit::DeviceId;
use crate::knowledge::Sign;
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range};
use crate::recognize::Regulator;
use crate::solve::ProgrammableShunt;

/// Where no model and no family tells: dynamic impedance in ohms and least cathode current in amperes (common practice).
const IMPEDANCE: (f64, f64, f64) = (0.05, 0.2, 0.5);
const LEAST_CURRENT: (f64, f64, f64) = (0.1e-3, 0.4e-3, 1e-3);
/// By how much the reference falls with each volt of the cathode, typical and at most (TI TL431 data sheet, recalled).
const SENSITIVITY: (f64, f64, f64) = (0.0, 1.4e-3, 2.7e-3);
/// Gain-bandwidth product with 230 Ω at the cathode, in hertz (the same sheet's small-signal amplification, recalled).
const BANDWIDTH: (f64, f64, f64) = (0.3e6, 1e6, 3e6);
/// The current of the reference pin, in amperes (the same sheet, recalled).
const PIN_CURRENT: (f64, f64, f64) = (0.0, 2e-6, 4e-6);
/// How far guesses may lie beyond their usual ends, as a factor.
const BEYOND: f64 = 4.0;

/// The figures of a programmable shunt reference, as [`ProgrammableShunt`] names them.
#[derive(Debug, Clone, Copy)]
pub(super) struct ShuntSlots {
    pub(super) reference: Slot,
    pub(super) impedance: Slot,
    pub(super) least_current: Slot,
    pub(super) sensitivity: Slot,
    pub(super) bandwidth: Slot,
    pub(super) pin_current: Slot,
}

impl ShuntSlots {
    pub(super) fn device(&self, values: &[f64]) -> ProgrammableShunt {
        let of = |slot| Recipe::of(values, slot);
        ProgrammableShunt {
            reference: of(self.reference),
            impedance: of(self.impedance),
            least_current: of(self.least_current),
            sensitivity: of(self.sensitivity),
            bandwidth: of(self.bandwidth),
            pin_current: of(self.pin_current),
        }
    }
}

impl Draft<'_, '_> {
    /// Adds a shunt reference that amplifies.
    pub(super) fn add_amplifying_shunt(
        &mut self,
        device: DeviceId,
        packaged: &Regulator,
    ) -> Result<(), Box<Evidence>> {
        let circuit = self.facts.circuit();
        let pin = packaged.roles.adjust.first().and_then(|pin| circuit.net_of(device, *pin));
        let (Some(output), Some(pin)) = (packaged.output_net, pin) else {
            return Err(not_modelled(self.facts, device, "its pins do not tell its terminals"));
        };
        let modelled = self.facts.modelled(device, ModelKind::Shunt);
        let model = modelled.as_ref().map(|modelled| &modelled.model);
        let volts = self.facts.reference(packaged).or_else(|| stated(model, "BV", Dimension::VOLTAGE));
        let Some(volts) = volts else { return Err(Box::new(self.facts.no_model(device, ModelKind::Shunt))) };
        if let Some(missing) = volts.missing_evidence().next() {
            return Err(Box::new(missing.clone()));
        }
        let open = |name: &str| {
            let found = modelled.as_ref()?.open.iter().find(|(own, _)| *own == name);
            found.map(|(_, quantity)| quantity.clone())
        };
        let impedance = open("RS").or_else(|| stated(model, "RS", Dimension::ONE)).filter(is_positive);
        let least = open("IBV").or_else(|| stated(model, "IBV", Dimension::ONE)).filter(is_positive);
        let usual = |noun, dimension, range| self.usual(packaged, noun, dimension, range);
        let impedance = impedance.unwrap_or_else(|| usual("dynamic impedance", Dimension::RESISTANCE, IMPEDANCE));
        let least = least.unwrap_or_else(|| usual("least cathode current", Dimension::CURRENT, LEAST_CURRENT));
        let ask = Ask {
            key: "adjust_current",
            noun: "reference pin current",
            dimension: Dimension::CURRENT,
            limits: Pair::NOT_NEGATIVE,
        };
        let current = self.facts.family_figure(packaged, ask);
        let current = current.unwrap_or_else(|| usual(ask.noun, ask.dimension, PIN_CURRENT));
        let sensitivity = usual("shift of the reference by the cathode", Dimension::ONE, SENSITIVITY);
        let bandwidth = usual("gain-bandwidth product", Dimension::FREQUENCY, BANDWIDTH);
        if let Some(modelled) = modelled {
            self.recipe.rests.push(modelled.evidence);
        }
        let mut slot = |quantity, dynamic| -> Slot { self.recipe.slot(quantity, dynamic) };
        let slots = ShuntSlots {
            reference: slot(volts, false),
            impedance: slot(impedance, false),
            least_current: slot(least, false),
            sensitivity: slot(sensitivity, false),
            bandwidth: slot(bandwidth, true),
            pin_current: slot(current.magnitude(), false),
        };
        let far = packaged.ground_net.and_then(|net| self.place(net));
        let own = self.place(output);
        let (cathode, anode) = if packaged.polarity == Sign::Positive { (own, far) } else { (far, own) };
        let nodes = vec![cathode, self.place(pin), anode];
        let name = circuit.device(device).reference.clone();
        self.add(&name, nodes, Kind::AmplifyingShunt(slots));
        Ok(())
    }

    /// A figure of a part that is only known by what is usual: low, nominal, high.
    pub(super) fn usual(
        &self,
        packaged: &Regulator,
        noun: &str,
        dimension: Dimension,
        (low, nominal, high): (f64, f64, f64),
    ) -> Quantity {
        let evidence = Evidence::new(Grade::Assumed, self.facts.about(packaged, noun), "usual");
        let limits = Pair::new(low / BEYOND, high * BEYOND);
        Quantity::given(dimension, Range::clamped(low, nominal, high), limits, evidence)
    }
}

/// A parameter that a model gives without a range.
fn stated(model: Option<&DeviceModel>, name: &'static str, dimension: Dimension) -> Option<Quantity> {
    model?.get(name).map(|range| Quantity::constant(dimension, range.nominal()))
}

fn is_positive(quantity: &Quantity) -> bool {
    quantity.worst().low() > 0.0
}
