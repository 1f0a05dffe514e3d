//! The current that is left for the reference inside a built-up regulator.

use super::super::{Facts, Value};
use super::recipe::{Change, Recipe, View};
use crate::circuit::DeviceKind;
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Table};
use crate::recognize::{ReferenceKind, Regulator, RegulatorKind};
use crate::solve::SolveError;

/// The current of its knee, below which a zener diode does not hold its voltage, amperes: low, nominal, high (common
/// practice: stated as 0.25 to 1 mA for diodes of 0.3 to 1 W, 50 uA for those made for low currents).
const KNEE: (f64, f64, f64) = (0.05e-3, 0.25e-3, 1e-3);
/// The same of diodes in forward direction, and of light-emitting ones among them (common practice).
const FORWARD: (f64, f64, f64) = (0.01e-3, 0.1e-3, 0.5e-3);
/// What no reference does without, amperes (common practice: the leakage at which zener diodes are specified below their
/// voltage).
const NOTHING: f64 = 1e-6;

impl Facts<'_> {
    /// The packaged shunt that is the reference of a built-up regulator.
    pub(in crate::facts) fn shunt_inside(&self, regulator: &Regulator) -> Option<&Regulator> {
        let built = self.own_circuit(regulator)?;
        if built.reference.kind != ReferenceKind::Shunt {
            return None;
        }
        let own =
            |one: &&Regulator| one.kind == RegulatorKind::Shunt && built.reference.devices.contains(&one.device);
        self.design().regulators.iter().find(own)
    }

    /// The current through the reference of a built-up regulator, over its inputs, loads and what is not known.
    pub(in crate::facts) fn solved_bias(&self, regulator: &Regulator) -> Value {
        let Some(built) = self.own_circuit(regulator) else {
            return Value::inapplicable("neither a shunt reference nor built up from single parts");
        };
        let kind = built.reference.kind;
        if !matches!(kind, ReferenceKind::Zener | ReferenceKind::Diodes | ReferenceKind::Shunt) {
            return Value::inapplicable("its reference needs no bias");
        }
        // What is missing is told once, by the check on headroom.
        let whole = self.circuit_of(regulator).is_some_and(|recipe| recipe.is_ok());
        let Some(first) = built.reference.devices.first().filter(|_| whole) else {
            return Value::inapplicable("its circuit is not whole");
        };
        let name = self.circuit().device(*first).reference.as_str();
        self.solved_figure(regulator, "reference bias", Dimension::CURRENT, |recipe| recipe.reference_bias(name))
    }

    /// The current that a string of zener diodes or diodes needs.
    pub(in crate::facts) fn knee(&self, regulator: &Regulator) -> Value {
        let Some(built) = self.own_circuit(regulator) else {
            return Value::inapplicable("neither a shunt reference nor built up from single parts");
        };
        let (low, nominal, high) = match built.reference.kind {
            ReferenceKind::Zener => KNEE,
            ReferenceKind::Diodes => FORWARD,
            ReferenceKind::Shunt => return Value::inapplicable("what its amplifier needs is not known"),
            _ => return Value::inapplicable("its reference needs no bias"),
        };
        let devices = built.reference.devices.iter().map(|device| self.circuit().device(*device));
        let zener = devices.clone().find(|part| part.kind == DeviceKind::Zener);
        let Some(part) = zener.or(devices.clone().next()) else {
            return Value::inapplicable("its reference needs no bias");
        };
        let what = format!("minimum current of {}", part.reference);
        let settle = Settle::new(Table::Part, &self.part_of(regulator).reference, "bias_min", "0.25 mA");
        let declared = self.board().part(&self.part_of(regulator).reference);
        if let Some(least) = declared.and_then(|part| part.figures.get("bias_min")) {
            return Value::Figure(least.quantity(Dimension::CURRENT, what));
        }
        let evidence = Evidence::new(Grade::Assumed, what, "usual").settled_by(settle);
        let range = Range::clamped(low, nominal, high);
        Value::Figure(Quantity::given(Dimension::CURRENT, range, Pair::new(NOTHING, f64::INFINITY), evidence))
    }
}

impl Recipe {
    /// The current through the part of the reference that has a name, a magnitude in amperes; `None` where it does not lie
    /// on the reference's net.
    fn reference_bias(&self, name: &str) -> Result<Option<Quantity>, SolveError> {
        let change = Change { sensed: Some(name.to_owned()), ..Change::default() };
        let nominals = self.nominals();
        let made = self.make(&nominals, View::Bare, &change)?;
        if made.sense.is_none() {
            return Ok(None);
        }
        let middle = self.live(&made, &nominals, None)?;
        let found = self.explore(
            Dimension::CURRENT,
            |_, one| !one.dynamic,
            |values| {
                let made = self.make(values, View::Bare, &change)?;
                let solved = self.live(&made, values, Some(&middle))?;
                Ok(made.sense.and_then(|sense| solved.current(sense)).map_or(f64::NAN, f64::abs))
            },
        );
        found.map(Some)
    }
}
