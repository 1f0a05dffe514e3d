//! What a regulator needs before it can start, and whether that comes from itself.

use super::identity::of;
use super::{Definition, Facts, SubjectKind, Value, ValueKind};
use crate::circuit::{DeviceKind, NetId};
use crate::knowledge::AdjustSide;
use crate::recognize::{BuiltUp, ReferenceFeed, Regulator, RegulatorKind};

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
        meaning: "the reference that sets the output is fed only from that output, and nothing solved tells whether it starts",
        defined_in: file!(),
        compute: |facts, subject| of(facts, subject, |regulator| Value::flag(facts.referred_to_itself(regulator))),
    },
];

impl Facts<'_> {
    /// Whether parts with two ends lead from the input to the reference of a built-up regulator.
    fn is_lifted(&self, built: &BuiltUp) -> bool {
        let circuit = self.circuit();
        let mut nets = vec![built.reference.net];
        let mut next = 0;
        while let Some(net) = nets.get(next).copied() {
            next += 1;
            for (device, far) in circuit.neighbours(net) {
                let leads = matches!(
                    circuit.device(device).kind,
                    DeviceKind::Resistor
                        | DeviceKind::Diode
                        | DeviceKind::Schottky
                        | DeviceKind::Zener
                        | DeviceKind::Led
                );
                if leads && far == built.input {
                    return true;
                }
                let inside = !circuit.net(far).ground && !built.boundary.contains(&far) && far != built.output;
                if leads && inside && !nets.contains(&far) {
                    nets.push(far);
                }
            }
        }
        false
    }

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
    /// Of a built-up one the circuit tells, where it can be solved; else that its reference is fed from the output is all
    /// that is known.
    fn referred_to_itself(&self, regulator: &Regulator) -> bool {
        if let Some(built) = regulator.built_up.as_ref().filter(|built| !built.outboard) {
            let by_itself = built.feed == Some(ReferenceFeed::Output) && !self.is_lifted(built);
            return by_itself && !self.start_is_known(regulator);
        }
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
