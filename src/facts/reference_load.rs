//! What a voltage reference bears at its output: current, and capacitance across a shunt.

use super::family_figure::Ask;
use super::identity::of;
use super::{Definition, Facts, Subject, SubjectKind, Value, ValueKind};
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range};
use crate::recognize::{Regulator, RegulatorKind};

pub(super) const DEFINITIONS: &[Definition] = &[
    entry(
        "reference_load_limit",
        Dimension::CURRENT,
        "the largest current that a series reference gives",
        |facts, subject| {
            of(facts, subject, |regulator| match regulator.kind {
                RegulatorKind::Reference => match facts.largest_load(regulator) {
                    Some(limit) => Value::Figure(limit),
                    None => Value::inapplicable("no largest load is known"),
                },
                _ => Value::inapplicable("not a series reference"),
            })
        },
    ),
    entry(
        "unstable_low",
        Dimension::CAPACITANCE,
        "the capacitance across a shunt reference from which it may oscillate",
        |facts, subject| shunt(facts, subject, Range::low),
    ),
    entry(
        "unstable_high",
        Dimension::CAPACITANCE,
        "the capacitance across a shunt reference above which it is stable again",
        |facts, subject| shunt(facts, subject, Range::high),
    ),
];

const fn entry(
    name: &'static str,
    dimension: Dimension,
    meaning: &'static str,
    compute: fn(&Facts<'_>, Subject) -> Value,
) -> Definition {
    let kind = ValueKind::Figure(dimension);
    Definition { name, of: SubjectKind::Regulator, kind, meaning, defined_in: file!(), compute }
}

fn shunt(facts: &Facts<'_>, subject: Subject, end: fn(Range) -> f64) -> Value {
    of(facts, subject, |regulator| match regulator.kind {
        RegulatorKind::Shunt => facts.unstable_end(regulator, end),
        _ => Value::inapplicable("not a shunt reference"),
    })
}

impl Facts<'_> {
    /// What a series reference gives at most.
    pub(super) fn largest_load(&self, regulator: &Regulator) -> Option<Quantity> {
        let limits = Pair::NOT_NEGATIVE;
        let ask = Ask { key: "reference_load", noun: "largest load", dimension: Dimension::CURRENT, limits };
        self.family_figure(regulator, ask)
    }

    /// One end of the band: makers give it as a curve over voltage and current, of which it is the widest part.
    fn unstable_end(&self, regulator: &Regulator, end: fn(Range) -> f64) -> Value {
        let ask = Ask {
            key: "unstable_capacitance",
            noun: "unstable capacitance",
            dimension: Dimension::CAPACITANCE,
            limits: Pair::NOT_NEGATIVE,
        };
        let band = self.family_figure(regulator, ask);
        let Some((band, range)) = band.as_ref().and_then(|band| Some((band, band.shown()?))) else {
            return Value::inapplicable("no unstable capacitance is known");
        };
        let evidence = band.evidence().next().cloned().unwrap_or_else(|| {
            Evidence::new(Grade::Assumed, self.about(regulator, "unstable capacitance"), "not told")
        });
        let exact = Range::exactly(end(range));
        Value::Figure(Quantity::given(Dimension::CAPACITANCE, exact, Pair::NOT_NEGATIVE, evidence))
    }
}
