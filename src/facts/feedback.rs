//! How the resistors that set an adjustable part are wired.

use super::identity::of;
use super::{Definition, Facts, Subject, SubjectKind, Value, ValueKind};
use crate::circuit::DeviceId;
use crate::knowledge::AdjustSide;
use crate::quantity::{Dimension, Evidence, Grade, Quantity};
use crate::recognize::{Divider, Mode, Regulator, RegulatorKind};

pub(super) const DEFINITIONS: &[Definition] = &[
    flag(
        "adjust_on_ground",
        "the adjust pin of a part with its reference between output and adjust lies on ground",
        |facts, subject| set_by(facts, subject, AdjustSide::Output, returns_directly),
    ),
    flag(
        "adjust_on_output",
        "the adjust pin of a part with its reference between output and adjust lies on the output",
        |facts, subject| set_by(facts, subject, AdjustSide::Output, senses_directly),
    ),
    flag("feedback_on_output", "the feedback pin lies on the output itself", |facts, subject| {
        set_by(facts, subject, AdjustSide::Ground, senses_directly)
    }),
    flag("feedback_on_ground", "the feedback pin lies on ground", |facts, subject| {
        set_by(facts, subject, AdjustSide::Ground, returns_directly)
    }),
    flag("feedback_cut", "nothing leads from the output to the feedback pin, which a resistor pulls to ground", {
        |facts, subject| {
            set_by(facts, subject, AdjustSide::Ground, |divider| {
                divider.senses.is_none() && divider.upper.is_empty() && !divider.lower.is_empty()
            })
        }
    }),
    Definition {
        name: "exchanged_set_point",
        of: SubjectKind::Regulator,
        kind: ValueKind::Figure(Dimension::VOLTAGE),
        meaning: "the nominal set point with the two resistors of the divider exchanged, signed",
        defined_in: file!(),
        compute: |facts, subject| {
            adjustable(facts, subject, |regulator, divider| match facts.exchanged(regulator, divider) {
                Some(volts) => Value::Figure(Quantity::constant(Dimension::VOLTAGE, volts)),
                None => Value::inapplicable("no pair of resistors sets it"),
            })
        },
    },
    word("upper_resistors", "the resistors from the output to the adjust pin", |facts, subject| {
        adjustable(facts, subject, |_, divider| facts.resistors(&divider.upper, &divider.upper_parallel))
    }),
    word("lower_resistors", "the resistors from the adjust pin to ground", |facts, subject| {
        adjustable(facts, subject, |_, divider| facts.resistors(&divider.lower, &divider.lower_parallel))
    }),
];

const fn flag(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    Definition { name, of: SubjectKind::Regulator, kind: ValueKind::Flag, meaning, defined_in: file!(), compute }
}

const fn word(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    let kind = ValueKind::Word(&[]);
    Definition { name, of: SubjectKind::Regulator, kind, meaning, defined_in: file!(), compute }
}

fn adjustable(facts: &Facts<'_>, subject: Subject, compute: impl FnOnce(&Regulator, &Divider) -> Value) -> Value {
    of(facts, subject, |regulator| match &regulator.divider {
        Some(divider) if regulator.mode == Mode::Adjustable && regulator.kind != RegulatorKind::Switching => {
            compute(regulator, divider)
        }
        _ => Value::inapplicable("no resistors set it"),
    })
}

/// A flag of a series part whose reference lies on this side; the part file tells that, or a guess by its pins.
fn set_by(facts: &Facts<'_>, subject: Subject, side: AdjustSide, holds: fn(&Divider) -> bool) -> Value {
    adjustable(facts, subject, |regulator, divider| {
        if regulator.kind != RegulatorKind::Series || facts.adjust_side(regulator) != side {
            return Value::inapplicable("its reference lies elsewhere");
        }
        if facts.programmed_output(regulator).is_some() {
            return Value::inapplicable("its pins program it");
        }
        let told = facts.first_family(regulator, |family| family.adjust).is_some();
        // A resistor to ground at the set pin of an unknown part may be all that it needs.
        if !told && side == AdjustSide::Ground {
            return Value::inapplicable("nothing tells where its reference lies");
        }
        let what = facts.about(regulator, "where the reference lies");
        let evidence = if told {
            Evidence::new(Grade::Published, what, "its part file").at_most(regulator.identity.grade)
        } else {
            Evidence::new(Grade::Assumed, what, "by its pins").settled_by(facts.which_family(regulator))
        };
        Value::Flag(super::Flag { holds: holds(divider), evidence: Some(evidence) })
    })
}

fn returns_directly(divider: &Divider) -> bool {
    divider.returns.is_some() && divider.lower.is_empty() && divider.upper.is_empty()
}

fn senses_directly(divider: &Divider) -> bool {
    divider.senses.is_some() && divider.upper.is_empty() && divider.lower.is_empty()
}

impl Facts<'_> {
    /// A value without evidence: it only tells which remedy fits what the set point itself has decided.
    fn exchanged(&self, regulator: &Regulator, divider: &Divider) -> Option<f64> {
        if divider.trimmed || divider.upper.is_empty() || divider.lower.is_empty() {
            return None;
        }
        let mut other = regulator.clone();
        other.divider = Some(Divider {
            upper: divider.lower.clone(),
            upper_parallel: divider.lower_parallel.clone(),
            lower: divider.upper.clone(),
            lower_parallel: divider.upper_parallel.clone(),
            ..divider.clone()
        });
        self.set_point(&other).nominal()
    }

    fn resistors(&self, series: &[DeviceId], parallel: &[Vec<DeviceId>]) -> Value {
        let each = series.iter().chain(parallel.iter().flatten());
        let names: Vec<&str> = each.map(|device| self.circuit().device(*device).reference.as_str()).collect();
        match names.is_empty() {
            true => Value::inapplicable("there is none"),
            false => Value::word(names.join(", ")),
        }
    }
}
