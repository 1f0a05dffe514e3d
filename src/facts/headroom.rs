//! What is left across a regulator.

use super::family_figure::Ask;
use super::identity::of;
use super::{Definition, Facts, Subject, SubjectKind, Value, ValueKind};
use crate::knowledge::Sign;
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Settle, Slope, Table};
use crate::recognize::{Regulator, RegulatorKind};
use crate::solve::LINE_STEP;

pub(super) const DEFINITIONS: &[Definition] = &[
    volts("input_voltage", "the input against ground, signed", |facts, subject| {
        of(facts, subject, |regulator| Value::Figure(facts.input_voltage(regulator)))
    }),
    volts(
        "input_magnitude",
        "the magnitude of the input voltage, zero where it has the wrong sign",
        |facts, subject| of(facts, subject, |regulator| Value::Figure(facts.input_magnitude(regulator))),
    ),
    volts("headroom", "the input's magnitude less the output to hold, as one figure", |facts, subject| {
        series(facts, subject, |regulator| Value::Figure(facts.headroom(regulator, subject)))
    }),
    volts("highest_headroom", "what is left at the highest input above the lowest set point", |facts, subject| {
        series(facts, subject, |regulator| Value::Figure(facts.highest_headroom(regulator)))
    }),
    volts(
        "line_headroom",
        "what is left above the regulated output when the input lies a tenth below its nominal, within its range",
        |facts, subject| series(facts, subject, |regulator| Value::Figure(facts.line_headroom(regulator))),
    ),
    Definition {
        name: "rail_may_sag",
        of: SubjectKind::Regulator,
        kind: ValueKind::Flag,
        meaning: "the output net is declared as one that may fall with its input",
        defined_in: file!(),
        compute: |facts, subject| {
            series(facts, subject, |regulator| {
                let rail = facts.output_name(regulator).and_then(|name| facts.board().rail(&name));
                Value::flag(rail.is_some_and(|rail| rail.may_sag.as_ref().is_some_and(|may| may.value)))
            })
        },
    },
    volts("lowest_input", "the lowest input magnitude at which the part works at all", |facts, subject| {
        series(facts, subject, |regulator| match facts.lowest_input(regulator) {
            Some(lowest) => Value::Figure(lowest),
            None => Value::inapplicable("no lowest input is known"),
        })
    }),
];

const fn volts(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    let kind = ValueKind::Figure(Dimension::VOLTAGE);
    Definition { name, of: SubjectKind::Regulator, kind, meaning, defined_in: file!(), compute }
}

fn series(facts: &Facts<'_>, subject: Subject, compute: impl FnOnce(&Regulator) -> Value) -> Value {
    of(facts, subject, |regulator| match regulator.kind {
        RegulatorKind::Series | RegulatorKind::Reference => compute(regulator),
        _ => Value::inapplicable("nothing passes through it"),
    })
}

impl Facts<'_> {
    pub(super) fn input_voltage(&self, regulator: &Regulator) -> Quantity {
        match regulator.source_net() {
            Some(net) => self.rail(net).voltage,
            None => {
                let part = &self.part_of(regulator).reference;
                let evidence = Evidence::new(Grade::Assumed, self.about(regulator, "input voltage"), "no input net")
                    .settled_by(Settle::new(Table::Part, part, "pins", "{ 1 = \"input\" }"));
                Quantity::missing(Dimension::VOLTAGE, Pair::ANY, evidence)
            }
        }
    }

    /// Magnitudes are in the regulator's own sense: a negative part's input is mirrored.
    pub(super) fn input_magnitude(&self, regulator: &Regulator) -> Quantity {
        let input = self.input_voltage(regulator);
        if regulator.polarity == Sign::Negative { input.negated() } else { input }
    }

    fn headroom(&self, regulator: &Regulator, subject: Subject) -> Quantity {
        let input = self.input_magnitude(regulator);
        let Some(held) = self.figure(subject, "held_output") else { return input };
        let inputs = [(&input, Slope::Rising), (&held, Slope::Falling)];
        Quantity::monotone(Dimension::VOLTAGE, &inputs, |v| match v {
            [input, held] => input - held,
            _ => f64::NAN,
        })
    }

    /// At the kindest end of every fact: a part that has too little even there never regulates.
    fn highest_headroom(&self, regulator: &Regulator) -> Quantity {
        let input = self.input_magnitude(regulator).at_high();
        input.minus(&self.output_voltage(regulator).magnitude().at_low())
    }

    /// The input moves by a tenth of its nominal value, but not out of what is declared for it.
    fn line_headroom(&self, regulator: &Regulator) -> Quantity {
        let input = self.input_magnitude(regulator);
        let held = self.steady_output(regulator);
        let Some(nominal) = input.nominal() else { return input };
        let inputs = [(&input, Slope::Rising), (&held, Slope::Falling)];
        Quantity::monotone(Dimension::VOLTAGE, &inputs, |v| match v {
            [input, held] => input.max(nominal * (1.0 - LINE_STEP)) - held,
            _ => f64::NAN,
        })
    }

    fn lowest_input(&self, regulator: &Regulator) -> Option<Quantity> {
        let limits = Pair::NOT_NEGATIVE;
        let ask = Ask { key: "input_min", noun: "lowest input", dimension: Dimension::VOLTAGE, limits };
        self.family_figure(regulator, ask).map(|lowest| lowest.magnitude())
    }
}
