//! A transistor that takes over the current of a packaged regulator: its base lies on the regulator's input, which a
//! resistor feeds, its collector on the regulator's output.

use crate::circuit::NetId;
use crate::knowledge::Sign;

use super::super::model::{Regulator, RegulatorKind};
use super::cut_out::cut_out;
use super::drive::Drive;
use super::model::{BuiltUp, Reference, ReferenceFeed, ReferenceKind};
use super::network::Network;
use super::pass::stages;
use super::transistor::Transistor;

/// The outboard transistor of a packaged regulator.
pub(super) fn outboard(network: &Network<'_>, regulator: &Regulator) -> Option<BuiltUp> {
    let (input, output) = (regulator.input_net?, regulator.output_net?);
    if regulator.kind != RegulatorKind::Series || regulator.built_up.is_some() {
        return None;
    }
    let positive = regulator.polarity == Sign::Positive;
    let bypasses = |one: &&Transistor| one.n != positive && near(network, one.control, input);
    let passes: Vec<&Transistor> = network.collectors(output).filter(bypasses).collect();
    let pass = passes.first()?;
    let (stage, ends) = stages(network, pass).into_iter().find(|(stage, _)| !stage.follower)?;
    // The transistor takes over what its base-emitter resistor cannot carry.
    let fed = network.circuit.neighbours(input).any(|(_, far)| ends.input.contains(&far));
    if !fed {
        return None;
    }
    let devices = vec![regulator.device];
    let reference = Reference::held(ReferenceKind::Packaged, devices, output);
    let drive = Drive { amplifier: None, sensed: None, reference, drivers: Vec::new(), path: vec![input] };
    let (cut_out, boundary) = cut_out(network.circuit, &stage, &drive, &ends);
    Some(BuiltUp {
        pass: passes.iter().map(|one| one.device).collect(),
        outboard: true,
        follower: false,
        base_emitter_drops: stage.base_emitter_drops,
        gate_source_drops: stage.gate_source_drops,
        input: stage.input,
        output,
        output_line: ends.output.clone(),
        amplifier: None,
        divider: None,
        reference: drive.reference,
        feed: Some(ReferenceFeed::Internal),
        cut_out,
        boundary,
    })
}

/// Whether two nets are one, or joined by one part.
fn near(network: &Network<'_>, one: NetId, other: NetId) -> bool {
    one == other || network.circuit.neighbours(one).any(|(_, far)| far == other)
}
