//! The bypass or noise pin, and pins that must be left open.

use super::identity::of;
use super::open_pins::listed;
use super::{Definition, Facts, Subject, SubjectKind, Value, ValueKind};
use crate::circuit::{DeviceKind, NetId, Pin};
use crate::knowledge::{CapacitorDemand, Cited, MinimumKind};
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range};
use crate::recognize::{Regulator, RegulatorKind};

/// Names of pins that makers keep for themselves.
const BARRED: &[&str] = &["DNC", "DNU", "DO NOT CONNECT", "DO_NOT_CONNECT", "DO NOT USE", "DO_NOT_USE"];

pub(super) const DEFINITIONS: &[Definition] = &[
    entry("bypass_pins", ValueKind::Word(&[]), "the bypass or noise pins", |facts, subject| {
        bypass(facts, subject, |regulator| {
            let pins = &facts.part_of(regulator).pins;
            let named: Vec<&Pin> = regulator.roles.bypass.iter().filter_map(|index| pins.get(*index)).collect();
            Value::word(listed(&named))
        })
    }),
    entry(
        "bypass_kind",
        ValueKind::Word(super::demand::KINDS),
        "how binding the bypass capacitor is",
        |facts, subject| {
            demand(facts, subject, |_, demand| {
                Value::word(match demand.kind {
                    MinimumKind::Required => "required",
                    MinimumKind::Recommended => "recommended",
                    MinimumKind::Recalled => "recalled",
                    MinimumKind::Optional => "optional",
                })
            })
        },
    ),
    farads("bypass_capacitance", "capacitance at the bypass pin as drawn", |facts, subject| {
        bypass(facts, subject, |regulator| match facts.bypass_net(regulator) {
            Some(net) if facts.circuit().net(net).ground => Value::inapplicable("the bypass pin lies on ground"),
            net => Value::Figure(facts.bypass_drawn(regulator, net)),
        })
    }),
    farads("minimum_bypass_capacitance", "the least bypass capacitance that the sheet names", |facts, subject| {
        demand(facts, subject, |regulator, demand| match &demand.minimum {
            Some(minimum) => facts.bypass_limit(regulator, minimum, "least bypass capacitance"),
            None => Value::inapplicable("the sheet names no minimum"),
        })
    }),
    farads("maximum_bypass_capacitance", "the largest bypass capacitance that the sheet allows", |facts, subject| {
        demand(facts, subject, |regulator, demand| match &demand.maximum {
            Some(maximum) => facts.bypass_limit(regulator, maximum, "largest bypass capacitance"),
            None => Value::inapplicable("the sheet names no maximum"),
        })
    }),
    entry("bypass_on_ground", ValueKind::Flag, "the bypass pin lies on ground", |facts, subject| {
        demand(facts, subject, |regulator, _| {
            let net = facts.bypass_net(regulator);
            Value::flag(net.is_some_and(|net| facts.circuit().net(net).ground))
        })
    }),
    entry("barred_pin_used", ValueKind::Flag, "a pin that must be left open is connected", |facts, subject| {
        linear(facts, subject, |regulator| Value::flag(!facts.barred(regulator).is_empty()))
    }),
    entry(
        "barred_pins",
        ValueKind::Word(&[]),
        "the pins that must be left open and are connected",
        |facts, subject| linear(facts, subject, |regulator| Value::word(listed(&facts.barred(regulator)))),
    ),
];

const fn entry(
    name: &'static str,
    kind: ValueKind,
    meaning: &'static str,
    compute: fn(&Facts<'_>, Subject) -> Value,
) -> Definition {
    Definition { name, of: SubjectKind::Regulator, kind, meaning, defined_in: file!(), compute }
}

const fn farads(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    entry(name, ValueKind::Figure(Dimension::CAPACITANCE), meaning, compute)
}

fn linear(facts: &Facts<'_>, subject: Subject, compute: impl FnOnce(&Regulator) -> Value) -> Value {
    of(facts, subject, |regulator| match regulator.kind {
        RegulatorKind::Switching => Value::inapplicable("a switching converter"),
        _ => compute(regulator),
    })
}

fn bypass(facts: &Facts<'_>, subject: Subject, compute: impl FnOnce(&Regulator) -> Value) -> Value {
    linear(facts, subject, |regulator| match regulator.roles.bypass.is_empty() {
        true => Value::inapplicable("it has no bypass pin"),
        false => compute(regulator),
    })
}

/// Computes what the sheet asks at a bypass pin of its own; capacitors at adjust pins are no such.
fn demand(facts: &Facts<'_>, subject: Subject, compute: impl FnOnce(&Regulator, &CapacitorDemand) -> Value) -> Value {
    bypass(facts, subject, |regulator| {
        match facts.first_family(regulator, |family| family.bypass_capacitor.as_ref()) {
            Some((_, demand)) => compute(regulator, demand),
            None => Value::inapplicable("its part file names no bypass capacitor"),
        }
    })
}

impl Facts<'_> {
    fn bypass_net(&self, regulator: &Regulator) -> Option<NetId> {
        regulator.roles.bypass.iter().find_map(|pin| self.circuit().net_of(regulator.device, *pin))
    }

    /// The capacitors between the bypass pin and ground, or the output, which some sheets take instead.
    fn bypass_drawn(&self, regulator: &Regulator, net: Option<NetId>) -> Quantity {
        let what = self.about(regulator, "bypass capacitor");
        let circuit = self.circuit();
        let far =
            |end: NetId| circuit.net(end).ground || [regulator.output_net, regulator.ground_net].contains(&Some(end));
        let each: Vec<Quantity> = net
            .into_iter()
            .flat_map(|net| circuit.neighbours(net))
            .filter(|(device, end)| circuit.device(*device).kind == DeviceKind::Capacitor && far(*end))
            .map(|(device, _)| self.drawn_capacitance(device))
            .collect();
        let source = if each.is_empty() { "none is drawn" } else { "as drawn" };
        let none = Evidence::new(Grade::Drawn, what, source);
        let start = Quantity::fact(Dimension::CAPACITANCE, Range::exactly(0.0), none);
        each.iter().fold(start, |sum, one| sum.plus(one))
    }

    fn bypass_limit(&self, regulator: &Regulator, limit: &Cited<f64>, noun: &str) -> Value {
        let evidence = self.cited(regulator, &limit.source, limit.recalled, self.about(regulator, noun));
        let range = Range::exactly(limit.value);
        Value::Figure(Quantity::given(Dimension::CAPACITANCE, range, Pair::NOT_NEGATIVE, evidence))
    }

    /// The pins that are called *do not connect* and lie on a net with another part.
    fn barred(&self, regulator: &Regulator) -> Vec<&Pin> {
        let circuit = self.circuit();
        let barred = |pin: &&Pin| BARRED.iter().any(|name| pin.name.eq_ignore_ascii_case(name));
        let joined = |pin: &&Pin| {
            pin.net.is_some_and(|net| circuit.fitted_on(net).any(|(device, _)| device != regulator.device))
        };
        self.part_of(regulator).pins.iter().filter(barred).filter(joined).collect()
    }
}
