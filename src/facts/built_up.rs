//! The set point of a regulator built from single parts: its reference, and what divides the output.

use super::Facts;
use super::zener::zener_volts;
use crate::circuit::{DeviceId, DeviceKind};
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Slope, Table};
use crate::recognize::{AmplifierKind, BuiltUp, Divider, Junction, Reference, ReferenceKind, Regulator};

/// A base-emitter drop over temperature and current, volts (common practice: 0.65 V, −2 mV/K).
const BASE_EMITTER: (f64, f64, f64) = (0.5, 0.68, 0.9);
/// A gate-source voltage in conduction, volts (common practice: from logic-level parts to those for 10 V drive).
const GATE_SOURCE: (f64, f64, f64) = (1.0, 2.5, 5.0);
/// A diode, volts.
const DIODE: (f64, f64, f64) = (0.45, 0.65, 0.8);
/// A light-emitting diode, volts, red to blue.
const LED: (f64, f64, f64) = (1.5, 2.0, 3.5);
/// Tolerance of a zener diode over lots, current and temperature (common practice: 5 % at the test current).
const ZENER_TOLERANCE: f64 = 0.08;

impl Facts<'_> {
    /// The magnitude of the output of a regulator that no resistors set: it follows its reference, less junctions.
    pub(super) fn followed_output(&self, regulator: &Regulator) -> Option<Quantity> {
        let built = regulator.built_up.as_ref()?;
        let reference = self.reference(regulator)?;
        if built.reference.in_sense {
            return Some(reference.plus(&self.junction(regulator, "base-emitter drop", BASE_EMITTER, 1)));
        }
        if built.amplifier.is_some() {
            return Some(reference);
        }
        let base_emitter = self.junction(regulator, "base-emitter drop", BASE_EMITTER, built.base_emitter_drops);
        let gate_source = self.junction(regulator, "gate-source voltage", GATE_SOURCE, built.gate_source_drops);
        let drops = base_emitter.plus(&gate_source);
        let inputs = [(&reference, Slope::Rising), (&drops, Slope::Falling)];
        Some(Quantity::monotone(Dimension::VOLTAGE, &inputs, |v| match v {
            [reference, drops] => (reference - drops).max(0.0),
            _ => f64::NAN,
        }))
    }

    /// So many junctions in series; none is no guess.
    fn junction(&self, regulator: &Regulator, noun: &str, one: (f64, f64, f64), count: usize) -> Quantity {
        if count == 0 {
            return Quantity::constant(Dimension::VOLTAGE, 0.0);
        }
        let times = f64::from(u32::try_from(count).unwrap_or(u32::MAX));
        let range = Range::clamped(one.0 * times, one.1 * times, one.2 * times);
        let part = &self.part_of(regulator).reference;
        let evidence = Evidence::new(Grade::Assumed, self.about(regulator, noun), "usual").settled_by(Settle::new(
            Table::Part,
            part,
            "output_voltage",
            "5 V ± 5 %",
        ));
        Quantity::given(Dimension::VOLTAGE, range, Pair::NOT_NEGATIVE, evidence)
    }

    /// The magnitude that the sensed voltage is held at, where the whole reference or a divided part is compared.
    pub(super) fn built_up_reference(&self, regulator: &Regulator, built: &BuiltUp) -> Option<Quantity> {
        let held = self.compared_part(&built.reference, self.held_reference(regulator, built)?)?;
        let junction = built.amplifier.as_ref().map_or(Junction::None, |amplifier| amplifier.junction);
        let drop = || self.junction(regulator, "base-emitter drop", BASE_EMITTER, 1);
        Some(match junction {
            Junction::None => held,
            Junction::Adds => held.plus(&drop()),
            Junction::Takes => {
                let drop = drop();
                let inputs = [(&held, Slope::Rising), (&drop, Slope::Falling)];
                Quantity::monotone(Dimension::VOLTAGE, &inputs, |v| match v {
                    [held, drop] => (held - drop).max(0.0),
                    _ => f64::NAN,
                })
            }
        })
    }

    /// What an inverting amplifier makes of a reference of the other sign: `V R1 / R2`, R1 from the output, R2 from the
    /// reference.
    pub(super) fn weighed_output(&self, regulator: &Regulator, divider: &Divider) -> Option<Quantity> {
        let built = regulator.built_up.as_ref().filter(|built| !built.reference.whole)?;
        let feed = built.reference.divider.as_ref().filter(|feed| feed.lower.is_empty() && !feed.trimmed)?;
        let held = self.held_reference(regulator, built)?.magnitude();
        let upper = self.network(&divider.upper, &divider.upper_parallel)?;
        let from_reference = self.network(&feed.upper, &feed.upper_parallel)?;
        let inputs = [(&held, Slope::Rising), (&upper, Slope::Rising), (&from_reference, Slope::Falling)];
        Some(Quantity::monotone(Dimension::VOLTAGE, &inputs, |v| match v {
            [held, upper, from_reference] => held * upper / from_reference,
            _ => f64::NAN,
        }))
    }

    /// What resistors leave of a reference: `V R2 / (R1 + R2)`, R1 from the reference, R2 to ground.
    fn compared_part(&self, reference: &Reference, held: Quantity) -> Option<Quantity> {
        if reference.whole {
            return Some(held);
        }
        let divider = reference.divider.as_ref().filter(|divider| !divider.trimmed)?;
        let upper = self.network(&divider.upper, &divider.upper_parallel)?;
        let lower = self.network(&divider.lower, &divider.lower_parallel)?;
        let inputs = [(&held, Slope::Rising), (&upper, Slope::Falling), (&lower, Slope::Rising)];
        Some(Quantity::monotone(Dimension::VOLTAGE, &inputs, |v| match v {
            [held, upper, lower] => held * lower / (upper + lower),
            _ => f64::NAN,
        }))
    }

    /// The magnitude that the reference itself holds.
    fn held_reference(&self, regulator: &Regulator, built: &BuiltUp) -> Option<Quantity> {
        let reference = &built.reference;
        match reference.kind {
            ReferenceKind::BaseEmitter => Some(self.junction(regulator, "base-emitter drop", BASE_EMITTER, 1)),
            ReferenceKind::Zener | ReferenceKind::Diodes => {
                let each = reference.devices.iter().map(|device| self.diode_reference(*device));
                each.reduce(|sum, one| Some(sum?.plus(&one?)))?
            }
            ReferenceKind::Packaged => None,
            ReferenceKind::Shunt | ReferenceKind::Series | ReferenceKind::Rail => self.held_by(built),
        }
    }

    /// What a packaged reference holds; of a shunt that amplifies, the reference inside it.
    fn held_by(&self, built: &BuiltUp) -> Option<Quantity> {
        if let Some(amplifier) = built.amplifier.as_ref().filter(|one| one.kind == AmplifierKind::Shunt) {
            return self.reference(amplifier.shunt.as_ref()?);
        }
        let own = |one: &&Regulator| {
            built.reference.devices.contains(&one.device) && one.output_net == Some(built.reference.net)
        };
        let held = self.set_point(self.design().regulators.iter().find(own)?).magnitude();
        (!held.is_missing()).then_some(held)
    }

    /// What a zener diode or a diode of a reference holds: as its model says, by its number, or as usual.
    fn diode_reference(&self, device: DeviceId) -> Option<Quantity> {
        let part = self.circuit().device(device);
        let name = &part.reference;
        let what = format!("voltage of {name}");
        let declared = self.board().part(name).and_then(|part| part.model.as_ref());
        if let Some((model, volts)) = declared.and_then(|model| Some((model, model.value.get("BV")?))) {
            return Some(Quantity::fact(Dimension::VOLTAGE, volts, model.evidence(what)));
        }
        let settle = Settle::new(Table::Part, name, "model", "zener BV=5.6");
        let given = |range: Range, grade: Grade, source: String| {
            let evidence = Evidence::new(grade, what.clone(), source).settled_by(settle.clone());
            Some(Quantity::given(Dimension::VOLTAGE, range, Pair::NOT_NEGATIVE, evidence))
        };
        match part.kind {
            DeviceKind::Zener => {
                let told = zener_volts(part)?;
                given(Range::with_tolerance(told.0, ZENER_TOLERANCE), Grade::Inferred, told.1)
            }
            DeviceKind::Led => given(Range::clamped(LED.0, LED.1, LED.2), Grade::Assumed, "usual".to_owned()),
            _ => given(Range::clamped(DIODE.0, DIODE.1, DIODE.2), Grade::Assumed, "usual".to_owned()),
        }
    }
}
