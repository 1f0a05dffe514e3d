//! What the output is meant to be: a declared rail, or the name of its net.

use super::identity::of;
use super::{Definition, Facts, Subject, SubjectKind, Value, ValueKind};
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Table};
use crate::recognize::Regulator;

pub(super) const DEFINITIONS: &[Definition] = &[
    volts(
        "declared_voltage",
        "what the board file says that the output net is meant to be, signed",
        |facts, subject| of(facts, subject, |regulator| facts.declared_target(regulator)),
    ),
    volts("declared_low", "the lower end of what is declared for the output net, signed", |facts, subject| {
        of(facts, subject, |regulator| facts.declared_end(regulator, Range::low))
    }),
    volts("declared_high", "the upper end of what is declared for the output net, signed", |facts, subject| {
        of(facts, subject, |regulator| facts.declared_end(regulator, Range::high))
    }),
    volts(
        "declared_nominal",
        "a declaration of one value for the output net, signed; no limits follow from it",
        |facts, subject| of(facts, subject, |regulator| facts.declared_single(regulator)),
    ),
    volts(
        "name_voltage",
        "what the output net's name says, where the set point is not taken from it",
        |facts, subject| of(facts, subject, |regulator| facts.named_target(regulator)),
    ),
    volts("set_point_nominal", "the set point from nominal values alone, signed", |facts, subject| {
        of(facts, subject, |regulator| facts.nominal_set_point(regulator))
    }),
];

const fn volts(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    let kind = ValueKind::Figure(Dimension::VOLTAGE);
    Definition { name, of: SubjectKind::Regulator, kind, meaning, defined_in: file!(), compute }
}

impl Facts<'_> {
    fn declared_target(&self, regulator: &Regulator) -> Value {
        let Some(name) = self.output_name(regulator) else { return Value::inapplicable("the output is open") };
        match self.board().rail(&name).and_then(|rail| rail.voltage.as_ref()) {
            Some(voltage) => {
                Value::Figure(voltage.quantity(Dimension::VOLTAGE, format!("declared voltage of {name}")))
            }
            None => Value::inapplicable(format!("no voltage is declared for {name}")),
        }
    }

    /// An end of the declared range. A single value is no range: no part would ever lie within it.
    fn declared_end(&self, regulator: &Regulator, end: fn(Range) -> f64) -> Value {
        self.declared_as(regulator, |range| (!range.is_exact()).then(|| end(range)), "no range is declared")
    }

    fn declared_single(&self, regulator: &Regulator) -> Value {
        self.declared_as(regulator, |range| range.is_exact().then(|| range.nominal()), "no single value is declared")
    }

    fn declared_as(&self, regulator: &Regulator, pick: impl Fn(Range) -> Option<f64>, otherwise: &str) -> Value {
        let Some(name) = self.output_name(regulator) else { return Value::inapplicable("the output is open") };
        let declared = self.board().rail(&name).and_then(|rail| rail.voltage.as_ref());
        match declared.and_then(|voltage| Some((voltage, pick(voltage.value)?))) {
            Some((voltage, exact)) => {
                let evidence = voltage.evidence(format!("declared voltage of {name}"));
                Value::Figure(Quantity::fact(Dimension::VOLTAGE, Range::exactly(exact), evidence))
            }
            None => Value::inapplicable(format!("{otherwise} for {name}")),
        }
    }

    fn named_target(&self, regulator: &Regulator) -> Value {
        let Some(volts) = self.named_voltage(regulator) else {
            return Value::inapplicable("the net's name says no voltage");
        };
        let from_name = regulator.nominal.as_ref().is_some_and(|nominal| nominal.grade == Grade::Inferred);
        let trimmed = regulator.divider.as_ref().is_some_and(|divider| divider.trimmed);
        if from_name || trimmed {
            return Value::inapplicable("the set point is taken from the net's name");
        }
        let name = self.output_name(regulator).unwrap_or_default();
        let settle = Settle::new(Table::Rail, &name, "voltage", "5 V ± 5 %");
        let evidence =
            Evidence::new(Grade::Inferred, format!("voltage in the name of {name}"), "net name").settled_by(settle);
        Value::Figure(Quantity::given(Dimension::VOLTAGE, Range::exactly(volts), Pair::ANY, evidence))
    }

    /// Guesses and tolerances at nominal: names are compared with nominals.
    fn nominal_set_point(&self, regulator: &Regulator) -> Value {
        let set_point = self.set_point(regulator);
        let Some(nominal) = set_point.nominal() else { return Value::Figure(set_point) };
        let evidence = Evidence::new(
            set_point.grade().unwrap_or(Grade::Drawn),
            self.about(regulator, "nominal set point"),
            "nominal values",
        );
        let exact = Quantity::given(Dimension::VOLTAGE, Range::exactly(nominal), Pair::ANY, evidence);
        Value::Figure(exact.also_resting_on(&set_point))
    }
}
