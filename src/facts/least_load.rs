//! What flows from an output when its load draws least, and what the part needs to flow.

use super::family_figure::Ask;
use super::identity::of;
use super::{Definition, Facts, Subject, SubjectKind, Value, ValueKind};
use crate::circuit::{DeviceId, DeviceKind};
use crate::knowledge::AdjustSide;
use crate::quantity::{Dimension, Pair, Quantity, Slope};
use crate::recognize::{Divider, Mode, Regulator, RegulatorKind};

pub(super) const DEFINITIONS: &[Definition] = &[
    amperes(
        "least_load",
        "what flows from the output at least: the divider, resistors to ground and the idle load",
        |facts, subject| adjustable(facts, subject, |regulator| Value::Figure(facts.least_load(regulator))),
    ),
    amperes("minimum_load", "the load below which some parts lose regulation", |facts, subject| {
        adjustable(facts, subject, |regulator| facts.floor(regulator, Quantity::at_high))
    }),
    amperes("typical_minimum_load", "the load below which a typical part loses regulation", |facts, subject| {
        adjustable(facts, subject, |regulator| facts.floor(regulator, Quantity::at_low))
    }),
    amperes("divider_current", "the current through the divider that sets the output", |facts, subject| {
        adjustable(facts, subject, |regulator| match facts.divider_current(regulator) {
            Some(current) => Value::Figure(current),
            None => Value::inapplicable("no divider sets it"),
        })
    }),
    amperes("divider_current_minimum", "the least divider current that the sheet asks for", |facts, subject| {
        adjustable(facts, subject, |regulator| {
            facts.current(regulator, "divider_current_min", "least divider current")
        })
    }),
    Definition {
        name: "adjust_error",
        of: SubjectKind::Regulator,
        kind: ValueKind::Figure(Dimension::ONE),
        meaning: "what the adjust pin's current adds to the output, relative",
        defined_in: file!(),
        compute: |facts, subject| {
            adjustable(facts, subject, |regulator| match facts.adjust_error(regulator) {
                Some(error) => Value::Figure(error),
                None => Value::inapplicable("no adjust current is known, or no divider sets it"),
            })
        },
    },
];

const fn amperes(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    let kind = ValueKind::Figure(Dimension::CURRENT);
    Definition { name, of: SubjectKind::Regulator, kind, meaning, defined_in: file!(), compute }
}

fn adjustable(facts: &Facts<'_>, subject: Subject, compute: impl FnOnce(&Regulator) -> Value) -> Value {
    of(facts, subject, |regulator| match regulator.kind {
        RegulatorKind::Series if regulator.output_net.is_none() => Value::inapplicable("the output is open"),
        RegulatorKind::Series if regulator.mode == Mode::Adjustable => compute(regulator),
        _ => Value::inapplicable("no resistors set it"),
    })
}

impl Facts<'_> {
    fn current(&self, regulator: &Regulator, key: &'static str, noun: &'static str) -> Value {
        let ask = Ask { key, noun, dimension: Dimension::CURRENT, limits: Pair::NOT_NEGATIVE };
        match self.family_figure(regulator, ask) {
            Some(current) => Value::Figure(current),
            None => Value::inapplicable("its sheet names none"),
        }
    }

    /// Sheets give a typical value and the most that any part needs.
    fn floor(&self, regulator: &Regulator, end: fn(&Quantity) -> Quantity) -> Value {
        match self.current(regulator, "minimum_load", "minimum load") {
            Value::Figure(minimum) => Value::Figure(end(&minimum)),
            other => other,
        }
    }

    fn least_load(&self, regulator: &Regulator) -> Quantity {
        let load = self.load(regulator);
        let idle = if load.guesses().next().is_none() { load.at_low() } else { load };
        let drawn = idle.plus(&self.bleeders(regulator));
        match self.divider_current(regulator) {
            Some(current) => drawn.plus(&current),
            None => drawn,
        }
    }

    /// `Vref / R1` where the reference lies between output and adjust pin (TI LM317 data sheet), `Vfb / R2` where it lies
    /// between feedback pin and ground.
    fn divider_current(&self, regulator: &Regulator) -> Option<Quantity> {
        let divider = regulator.divider.as_ref()?;
        let across = match self.adjust_side(regulator) {
            AdjustSide::Output => self.network(&divider.upper, &divider.upper_parallel)?,
            AdjustSide::Ground => self.network(&divider.lower, &divider.lower_parallel)?,
            AdjustSide::SetCurrent => return None,
        };
        Some(quotient(&self.reference(regulator)?, &across))
    }

    /// Resistors from the output to ground beside the divider.
    fn bleeders(&self, regulator: &Regulator) -> Quantity {
        let none = Quantity::constant(Dimension::CURRENT, 0.0);
        let Some(net) = regulator.output_net else { return none };
        let circuit = self.circuit();
        let sets = |device: DeviceId| regulator.divider.as_ref().is_some_and(|divider| holds(divider, device));
        let output = self.output_voltage(regulator).magnitude();
        if output.is_missing() {
            return none;
        }
        circuit
            .neighbours(net)
            .filter(|(device, end)| {
                circuit.device(*device).kind == DeviceKind::Resistor && circuit.net(*end).ground && !sets(*device)
            })
            .map(|(device, _)| self.resistance(device))
            .filter(|resistance| !resistance.is_missing())
            .fold(none, |sum, resistance| sum.plus(&quotient(&output, &resistance)))
    }

    /// The pin's current through the resistor that it flows in, over the output: `Iadj R2 / V` (TI LM317 data sheet) or
    /// `Ifb R1 / V`.
    fn adjust_error(&self, regulator: &Regulator) -> Option<Quantity> {
        let divider = regulator.divider.as_ref()?;
        let resistance = match self.adjust_side(regulator) {
            AdjustSide::Output => self.network(&divider.lower, &divider.lower_parallel)?,
            AdjustSide::Ground => self.network(&divider.upper, &divider.upper_parallel)?,
            AdjustSide::SetCurrent => return None,
        };
        let Value::Figure(current) = self.current(regulator, "adjust_current", "adjust pin current") else {
            return None;
        };
        // The output itself follows from the same resistors: its nominal is near enough for a small share.
        let output = self.set_point(regulator).magnitude().nominal().filter(|volts| *volts > 0.0)?;
        let output = Quantity::constant(Dimension::VOLTAGE, output);
        let inputs = [(&current, Slope::Rising), (&resistance, Slope::Rising), (&output, Slope::Falling)];
        Some(Quantity::monotone(Dimension::ONE, &inputs, |v| match v {
            [current, resistance, output] => current * resistance / output,
            _ => f64::NAN,
        }))
    }
}

fn quotient(voltage: &Quantity, resistance: &Quantity) -> Quantity {
    let inputs = [(voltage, Slope::Rising), (resistance, Slope::Falling)];
    Quantity::monotone(Dimension::CURRENT, &inputs, |v| match v {
        [_, resistance] if *resistance <= 0.0 => f64::INFINITY,
        [voltage, resistance] => voltage / resistance,
        _ => f64::NAN,
    })
}

fn holds(divider: &Divider, device: DeviceId) -> bool {
    let parallel = divider.upper_parallel.iter().chain(&divider.lower_parallel).flatten();
    divider.upper.iter().chain(&divider.lower).chain(parallel).any(|other| *other == device)
}
