//! Words about a regulator: what it is and where it lies.

use super::{Definition, Facts, Subject, SubjectKind, Value, ValueKind};
use crate::circuit::NetId;
use crate::knowledge::Sign;
use crate::recognize::{Mode, Regulator};

pub(super) const DEFINITIONS: &[Definition] = &[
    word("subject", &[], "the part's reference", |facts, subject| match subject {
        Subject::Regulator(_) => of(facts, subject, |regulator| Value::word(&facts.part_of(regulator).reference)),
        _ => Value::inapplicable("not a regulator"),
    }),
    word("kind", &["series", "shunt", "reference", "switching"], "what the part is", |facts, subject| {
        of(facts, subject, |regulator| Value::word(regulator.kind.name()))
    }),
    word("mode", &["fixed", "adjustable"], "whether its voltage is built in", |facts, subject| {
        of(facts, subject, |regulator| {
            Value::word(if regulator.mode == Mode::Fixed { "fixed" } else { "adjustable" })
        })
    }),
    word("polarity", &["positive", "negative"], "the sign of its output", |facts, subject| {
        of(facts, subject, |regulator| {
            Value::word(if regulator.polarity == Sign::Positive { "positive" } else { "negative" })
        })
    }),
    word("family", &[], "the part family that it was taken for", |facts, subject| {
        of(facts, subject, |regulator| match facts.families(regulator).next() {
            Some(family) => Value::word(&family.name),
            None => Value::inapplicable("no part family matches"),
        })
    }),
    word("input_net", &[], "the net of its input", |facts, subject| {
        of(facts, subject, |regulator| net_word(facts, regulator.input_net))
    }),
    word("output_net", &[], "the net of its output", |facts, subject| {
        of(facts, subject, |regulator| net_word(facts, regulator.output_net))
    }),
    word("ground_net", &[], "the net of its ground pin", |facts, subject| {
        of(facts, subject, |regulator| net_word(facts, regulator.ground_net))
    }),
];

const fn word(
    name: &'static str,
    words: &'static [&'static str],
    meaning: &'static str,
    compute: fn(&Facts<'_>, Subject) -> Value,
) -> Definition {
    let kind = ValueKind::Word(words);
    Definition { name, of: SubjectKind::Regulator, kind, meaning, defined_in: file!(), compute }
}

/// Computes a value for the regulator that a subject is.
pub(super) fn of(facts: &Facts<'_>, subject: Subject, compute: impl FnOnce(&Regulator) -> Value) -> Value {
    facts.regulator(subject).map_or_else(|| Value::inapplicable("not a regulator"), compute)
}

fn net_word(facts: &Facts<'_>, net: Option<NetId>) -> Value {
    net.map_or_else(|| Value::inapplicable("not connected"), |net| Value::word(&facts.circuit().net(net).name))
}
