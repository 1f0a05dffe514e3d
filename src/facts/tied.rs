//! Outputs that lie on one net.

use super::net::of;
use super::{Definition, Facts, Subject, SubjectKind, Value, ValueKind};
use crate::board::SupplyNodes;
use crate::circuit::NetId;
use crate::quantity::{Dimension, Quantity};
use crate::recognize::{Regulator, RegulatorId, RegulatorKind};

pub(super) const DEFINITIONS: &[Definition] = &[
    entry(
        "outputs",
        ValueKind::Group(SubjectKind::Regulator),
        "the regulators whose output lies on it",
        |facts, subject| {
            of(subject, |net| Value::Group(facts.drivers(net).map(|(id, _)| Subject::Regulator(id)).collect()))
        },
    ),
    entry("output_parts", ValueKind::Word(&[]), "the parts whose output lies on it", |facts, subject| {
        of(subject, |net| Value::word(facts.driving_parts(net).join(" and ")))
    }),
    entry("outputs_tied", ValueKind::Flag, "the outputs of several parts lie on it", |facts, subject| {
        of(subject, |net| Value::flag(facts.driving_parts(net).len() > 1))
    }),
    entry("outputs_alike", ValueKind::Flag, "the parts whose outputs lie on it have one value", |facts, subject| {
        of(subject, |net| {
            let value = |regulator: &Regulator| &facts.part_of(regulator).value;
            let first = facts.drivers(net).next().map(|(_, regulator)| value(regulator));
            Value::flag(facts.drivers(net).all(|(_, regulator)| Some(value(regulator)) == first))
        })
    }),
    entry(
        "outputs_apart",
        ValueKind::Figure(Dimension::ONE),
        "how far the set points of linear parts that are always on lie apart, relative",
        |facts, subject| {
            of(subject, |net| match facts.apart(net) {
                Some(apart) => Value::Figure(apart),
                None => Value::inapplicable("no two such parts are on it"),
            })
        },
    ),
    entry("supply_tied", ValueKind::Flag, "a declared supply and the output of a linear part lie on it", {
        |facts, subject| {
            of(subject, |net| {
                let linear = facts.drivers(net).any(|(_, regulator)| regulator.kind != RegulatorKind::Switching);
                Value::flag(linear && facts.has_own_supply(net))
            })
        }
    }),
];

const fn entry(
    name: &'static str,
    kind: ValueKind,
    meaning: &'static str,
    compute: fn(&Facts<'_>, Subject) -> Value,
) -> Definition {
    Definition { name, of: SubjectKind::Net, kind, meaning, defined_in: file!(), compute }
}

impl<'a> Facts<'a> {
    /// The regulators that drive a net: a shunt only takes from it, and a part that is bridged drives nothing.
    fn drivers(&self, net: NetId) -> impl Iterator<Item = (RegulatorId, &'a Regulator)> + use<'_, 'a> {
        self.feeding_ids(net).filter(|(_, regulator)| {
            regulator.kind != RegulatorKind::Shunt && regulator.input_net != regulator.output_net
        })
    }

    /// Their references, each once.
    fn driving_parts(&self, net: NetId) -> Vec<&'a str> {
        let mut parts: Vec<&str> = Vec::new();
        for (_, regulator) in self.drivers(net) {
            let reference = self.part_of(regulator).reference.as_str();
            if !parts.contains(&reference) {
                parts.push(reference);
            }
        }
        parts
    }

    /// The largest distance between the set points of two parts, over the higher of the two.
    fn apart(&self, net: NetId) -> Option<Quantity> {
        let always = |(_, regulator): &(RegulatorId, &Regulator)| {
            regulator.kind != RegulatorKind::Switching && regulator.roles.enable.is_empty()
        };
        let found: Vec<(&str, Quantity)> = self
            .drivers(net)
            .filter(always)
            .map(|(_, regulator)| (self.part_of(regulator).reference.as_str(), self.set_point(regulator)))
            .filter(|(_, volts)| !volts.is_missing())
            .collect();
        let mut widest: Option<(f64, Quantity)> = None;
        for (index, (part, one)) in found.iter().enumerate() {
            for (_, other) in found.iter().skip(index + 1).filter(|(other, _)| other != part) {
                let highest = one.nominal()?.abs().max(other.nominal()?.abs());
                let distance = (one.nominal()? - other.nominal()?).abs() / highest;
                if highest > 0.0 && widest.as_ref().is_none_or(|(known, _)| distance > *known) {
                    let scale = Quantity::constant(Dimension::VOLTAGE, highest).reciprocal();
                    widest = Some((distance, one.minus(other).magnitude().times(&scale)));
                }
            }
        }
        widest.map(|(_, apart)| apart)
    }

    /// Whether the board file declares a supply on this very net.
    fn has_own_supply(&self, net: NetId) -> bool {
        let name = &self.circuit().net(net).name;
        let here = |nodes: &SupplyNodes| matches!(nodes, SupplyNodes::Net(net) if net == name);
        self.board().supplies.iter().any(|entry| here(&entry.nodes.value))
    }
}
