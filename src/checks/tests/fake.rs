//! Names and values for tests.

use std::collections::BTreeMap;

use crate::checks::Figures;
use crate::facts::{Subject, SubjectKind, Value, ValueKind};
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Table};
use crate::recognize::RegulatorId;

pub(super) const V: ValueKind = ValueKind::Figure(Dimension::VOLTAGE);
pub(super) const A: ValueKind = ValueKind::Figure(Dimension::CURRENT);
pub(super) const F: ValueKind = ValueKind::Figure(Dimension::CAPACITANCE);
pub(super) const OHM: ValueKind = ValueKind::Figure(Dimension::RESISTANCE);
const REGULATOR: SubjectKind = SubjectKind::Regulator;
const NET: ValueKind = ValueKind::Word(&[]);
const MINIMUM: ValueKind = ValueKind::Word(&["required", "recommended", "recalled", "optional"]);

/// Names as the figures define them.
pub(super) const NAMES: &[(SubjectKind, &str, ValueKind)] = &[
    (REGULATOR, "kind", ValueKind::Word(&["series", "shunt", "reference", "switching"])),
    (REGULATOR, "mode", ValueKind::Word(&["fixed", "adjustable"])),
    (REGULATOR, "input_net", NET),
    (REGULATOR, "output_net", NET),
    (REGULATOR, "ground_net", NET),
    (REGULATOR, "input_voltage", V),
    (REGULATOR, "output_voltage", V),
    (REGULATOR, "set_point", V),
    (REGULATOR, "set_point_nominal", V),
    (REGULATOR, "declared_voltage", V),
    (REGULATOR, "declared_low", V),
    (REGULATOR, "declared_high", V),
    (REGULATOR, "name_voltage", V),
    (REGULATOR, "held_output", V),
    (REGULATOR, "load", A),
    (REGULATOR, "headroom", V),
    (REGULATOR, "highest_headroom", V),
    (REGULATOR, "dropout", V),
    (REGULATOR, "input_capacitor_kind", MINIMUM),
    (REGULATOR, "input_capacitor_if_far", ValueKind::Flag),
    (REGULATOR, "input_capacitor_behind_diode", ValueKind::Flag),
    (REGULATOR, "has_input_capacitor", ValueKind::Flag),
    (REGULATOR, "drawn_input_capacitance", F),
    (REGULATOR, "minimum_input_capacitance", F),
    (REGULATOR, "minimum_kind", MINIMUM),
    (REGULATOR, "minimum_basis", ValueKind::Word(&["nominal", "effective"])),
    (REGULATOR, "drawn_equals_minimum", ValueKind::Flag),
    (REGULATOR, "drawn_capacitance", F),
    (REGULATOR, "output_capacitance", F),
    (REGULATOR, "minimum_capacitance", F),
    (REGULATOR, "maximum_capacitance", F),
    (REGULATOR, "ceramic_allowed", ValueKind::Flag),
    (REGULATOR, "bulk_is_ceramic", ValueKind::Flag),
    (REGULATOR, "bulk_esr", OHM),
    (REGULATOR, "phase_margin", ValueKind::Figure(Dimension::ANGLE)),
    (REGULATOR, "esr_low", OHM),
    (REGULATOR, "esr_high", OHM),
    (REGULATOR, "enable_open", ValueKind::Flag),
    (REGULATOR, "enable_from_own_output", ValueKind::Flag),
    (REGULATOR, "enable_active", ValueKind::Word(&["high", "low"])),
    (REGULATOR, "enable_when_open", ValueKind::Word(&["on", "off", "undefined", "unknown"])),
    (REGULATOR, "enable_voltage", V),
    (REGULATOR, "enable_on", V),
    (REGULATOR, "reference_from_own_output", ValueKind::Flag),
    (REGULATOR, "reference_bias", A),
    (REGULATOR, "reference_bias_highest", A),
    (REGULATOR, "reference_is_judged_itself", ValueKind::Flag),
    (REGULATOR, "bias_minimum", A),
    (REGULATOR, "bias_maximum", A),
    (REGULATOR, "output_capacitors", ValueKind::Group(SubjectKind::Capacitor)),
    (SubjectKind::Capacitor, "esr", OHM),
    (SubjectKind::Capacitor, "capacitance", F),
];

/// Subjects with made-up values; what is not set does not apply.
#[derive(Debug, Default, Clone)]
pub(super) struct Board {
    values: BTreeMap<(Subject, String), Value>,
}

pub(super) fn regulator(index: usize) -> Subject {
    Subject::Regulator(RegulatorId(index))
}

impl Board {
    pub(super) fn with(mut self, subject: Subject, name: &str, value: Value) -> Self {
        self.values.insert((subject, name.to_owned()), value);
        self
    }

    /// The same with a figure, word or flag of `U1`.
    pub(super) fn u1(self, name: &str, value: Value) -> Self {
        self.with(regulator(0), name, value)
    }
}

impl Figures for Board {
    fn value(&self, subject: Subject, name: &str) -> Value {
        self.values.get(&(subject, name.to_owned())).cloned().unwrap_or_else(|| Value::inapplicable("not set"))
    }

    fn label(&self, subject: Subject) -> String {
        match subject {
            Subject::Regulator(RegulatorId(index)) => format!("U{}", index + 1),
            other => format!("{other:?}"),
        }
    }

    fn likeness(&self, _: Subject) -> String {
        String::new()
    }
}

/// A fact `low .. high`; its key is `what`.
pub(super) fn fact(dimension: Dimension, low: f64, high: f64, what: &str) -> Value {
    let evidence = Evidence::new(Grade::Declared, what, "test");
    Value::Figure(Quantity::fact(dimension, Range::between(low, high), evidence))
}

/// A guess over a range, within limits.
pub(super) fn guess(dimension: Dimension, range: [f64; 3], limits: Pair, what: &str) -> Value {
    let range = Range::new(range[0], range[1], range[2]).unwrap();
    let settle = Settle::new(Table::Part, what, "esr", "\"20 mΩ\"");
    let evidence = Evidence::new(Grade::Assumed, what, "test").settled_by(settle);
    Value::Figure(Quantity::given(dimension, range, limits, evidence))
}

/// A figure that nothing tells.
pub(super) fn unknown(dimension: Dimension, limits: Pair, target: &str) -> Value {
    let settle = Settle::new(Table::Supply, target, "voltage", "\"4.5 .. 5.5 V\"");
    let evidence = Evidence::new(Grade::Assumed, format!("voltage of {target}"), "nothing").settled_by(settle);
    Value::Figure(Quantity::missing(dimension, limits, evidence))
}
