//! What a regulator needs before it can start, and whether that comes from itself.

use super::identity::of;
use super::{Definition, Facts, SubjectKind, Value, ValueKind};
use crate::circuit::NetId;
use crate::knowledge::AdjustSide;
use crate::recognize::{Regulator, RegulatorKind};

pub(super) const DEFINITIONS: &[Definition] = &[
    Definition {
        name: "bias_from_own_output",
        of: SubjectKind::Regulator,
        kind: ValueKind::Flag,
        meaning: "the bias supply pin hangs on nothing but the output that it makes",
        defined_in: file!(),
        compute: |facts, subject| {
            of(facts, subject, |regulator| match regulator.roles.bias.is_empty() {
                true => Value::inapplicable("no bias supply pin"),
                false => Value::flag(facts.biased_by_itself(regulator)),
            })
        },
    },
    Definition {
        name: "reference_from_own_output",
        of: SubjectKind::Regulator,
        kind: ValueKind::Flag,
        meaning: "the reference that sets the output is fed only from that output",
        defined_in: file!(),
        compute: |facts, subject| of(facts, subject, |regulator| Value::flag(facts.referred_to_itself(regulator))),
    },
];

impl Facts<'_> {
    fn biased_by_itself(&self, regulator: &Regulator) -> bool {
        let nets: Vec<NetId> =
            regulator.roles.bias.iter().filter_map(|pin| self.circuit().net_of(regulator.device, *pin)).collect();
        !nets.is_empty() && nets.iter().all(|net| self.hangs_on_output(regulator, *net))
    }

    /// Whether a net is the regulator's own output, or is fed by nothing but a series element from it.
    fn hangs_on_output(&self, regulator: &Regulator, net: NetId) -> bool {
        let Some(output) = regulator.output_net else { return false };
        if regulator.input_net == Some(net) {
            return false;
        }
        net == output || matches!(self.rail(net).origin, super::RailOrigin::Through { from, .. } if from == output)
    }

    /// Whether a reference on the set or feedback pin is fed from the output. Parts that hold their reference
    /// between output and adjust pin have one of their own and start.
    fn referred_to_itself(&self, regulator: &Regulator) -> bool {
        if regulator.kind != RegulatorKind::Series || self.adjust_side(regulator) == AdjustSide::Output {
            return false;
        }
        let roles = &regulator.roles;
        let set = roles.adjust.iter().chain(&roles.other);
        let nets = set.filter_map(|pin| self.circuit().net_of(regulator.device, *pin));
        nets.flat_map(|net| self.feeding(net)).any(|reference| {
            matches!(reference.kind, RegulatorKind::Shunt | RegulatorKind::Reference)
                && reference.device != regulator.device
                && reference.input_net.is_some_and(|net| self.hangs_on_output(regulator, net))
        })
    }
}
