//! Figures of two boards beside each other.

use super::Change;
use crate::facts::{DEFINITIONS, Facts, Subject, SubjectKind, Value, ValueKind};
use crate::quantity::{Dimension, Quantity};

/// How far two values may lie apart, as a part of the larger, and be the same: a sum in another order differs less.
const RELATIVE: f64 = 1e-6;
/// How far two values near zero may lie apart, in their unit: what rounding leaves of a difference of volts or amperes.
const NEAR_ZERO: f64 = 1e-12;
/// The same of farads and henries, which are small numbers by themselves.
const NEAR_ZERO_SMALL: f64 = 1e-18;

/// Names that tell what a regulator is, which is compared apart.
const IDENTITY: [&str; 3] = ["kind", "mode", "polarity"];

/// What a name stands for, as far as boards are compared in it.
#[derive(Debug, Clone, PartialEq)]
pub enum Shown {
    /// A figure; it may be missing.
    Figure(Quantity),
    /// Yes or no.
    Flag(bool),
    /// A word of a fixed set.
    Word(String),
}

/// The figures of a regulator that changed, in the order of the definitions. Names of parts and nets are no figures, and
/// what a figure rests on is not compared: both change with numbers.
pub(super) fn changed(old: &Facts<'_>, new: &Facts<'_>, was: Subject, is: Subject) -> Vec<Change<Shown>> {
    let of_regulators = DEFINITIONS.iter().flat_map(|file| file.iter()).filter(|entry| {
        entry.of == SubjectKind::Regulator
            && !IDENTITY.contains(&entry.name)
            && !matches!(entry.kind, ValueKind::Word([]) | ValueKind::Group(_))
    });
    of_regulators
        .filter_map(|entry| {
            let (was, is) = (shown(old.value(was, entry.name)), shown(new.value(is, entry.name)));
            (!is_same(was.as_ref(), is.as_ref())).then_some(Change { name: entry.name, was, is })
        })
        .collect()
}

fn shown(value: Value) -> Option<Shown> {
    match value {
        Value::Figure(figure) => Some(Shown::Figure(figure)),
        Value::Flag(flag) => Some(Shown::Flag(flag.holds)),
        Value::Word(word) => Some(Shown::Word(word.word)),
        Value::Group(_) | Value::Inapplicable(_) => None,
    }
}

fn is_same(one: Option<&Shown>, other: Option<&Shown>) -> bool {
    match (one, other) {
        (Some(Shown::Figure(one)), Some(Shown::Figure(other))) => is_same_figure(one, other),
        (one, other) => one == other,
    }
}

fn is_same_figure(one: &Quantity, other: &Quantity) -> bool {
    let dimension = one.dimension();
    if dimension != other.dimension() {
        return false;
    }
    match (one.shown(), other.shown()) {
        (None, None) => true,
        (Some(a), Some(b)) => {
            let scale = [a.low(), a.nominal(), a.high(), b.low(), b.nominal(), b.high()];
            // A clipped bound stands for none and says nothing of the scale.
            let scale = scale.iter().map(|value| value.abs()).filter(|value| *value < 1e300).fold(0.0, f64::max);
            [(a.low(), b.low()), (a.nominal(), b.nominal()), (a.high(), b.high())]
                .iter()
                .all(|(one, other)| is_near(*one, *other, scale, dimension))
        }
        _ => false,
    }
}

/// Whether two values of a dimension are the same but for rounding.
pub(super) fn is_same_value(one: f64, other: f64, dimension: Dimension) -> bool {
    is_near(one, other, one.abs().max(other.abs()), dimension)
}

fn is_near(one: f64, other: f64, scale: f64, dimension: Dimension) -> bool {
    let small = dimension == Dimension::CAPACITANCE || dimension == Dimension::INDUCTANCE;
    let floor = if small { NEAR_ZERO_SMALL } else { NEAR_ZERO };
    // Of infinite bounds the difference is no number.
    one.total_cmp(&other).is_eq() || (one - other).abs() <= (scale * RELATIVE).max(floor)
}
