//! Figures of a supply net.

use super::{Definition, Facts, Subject, SubjectKind, Value, ValueKind};
use crate::circuit::NetId;
use crate::quantity::Dimension;

pub(super) const DEFINITIONS: &[Definition] = &[
    entry("subject", ValueKind::Word(&[]), "the net's name", |facts, subject| {
        of(subject, |net| Value::word(&facts.circuit().net(net).name))
    }),
    entry(
        "voltage",
        ValueKind::Figure(Dimension::VOLTAGE),
        "its voltage against ground, signed",
        |facts, subject| of(subject, |net| Value::Figure(facts.rail(net).voltage)),
    ),
    entry(
        "load",
        ValueKind::Figure(Dimension::CURRENT),
        "what is drawn from it and from what it feeds",
        |facts, subject| of(subject, |net| Value::Figure(facts.draw(net))),
    ),
];

const fn entry(
    name: &'static str,
    kind: ValueKind,
    meaning: &'static str,
    compute: fn(&Facts<'_>, Subject) -> Value,
) -> Definition {
    Definition { name, of: SubjectKind::Net, kind, meaning, defined_in: file!(), compute }
}

pub(super) fn of(subject: Subject, compute: impl FnOnce(NetId) -> Value) -> Value {
    match subject {
        Subject::Net(net) => compute(net),
        _ => Value::inapplicable("not a net"),
    }
}
