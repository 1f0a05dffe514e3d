//! Finding built-up regulators and adding them to what was found.

use crate::circuit::{Circuit, DeviceId, NetId};
use crate::knowledge::Sign;
use crate::quantity::Grade;

use super::super::find::Found;
use super::super::model::{Identity, Mode, NotJudged, Regulator, RegulatorKind, Roles};
use super::cut_out::cut_out;
use super::drive::{Drive, drive};
use super::model::{BuiltUp, Duty};
use super::network::Network;
use super::outboard::outboard;
use super::pass::{Stage, stages};
use super::reference::feed;
use super::sense::Ends;
use super::supply::carries_power;

/// Adds the built-up regulators of a board, and to packaged ones the transistor that takes over their current.
pub(in crate::recognize) fn add(circuit: &Circuit, ignored: &dyn Fn(&str) -> bool, found: &mut Found) {
    let network = Network::new(circuit, found);
    let outboards: Vec<Option<BuiltUp>> = found.regulators.iter().map(|one| outboard(&network, one)).collect();
    let mut built: Vec<Regulator> = Vec::new();
    for pass in &network.transistors {
        let bypassing = outboards.iter().flatten().any(|one| one.pass.contains(&pass.device));
        let mut ways = stages(&network, pass).into_iter();
        let way = ways.find_map(|(stage, ends)| Some((drive(&network, &stage, &ends)?, stage, ends)));
        let Some((drive, stage, ends)) = way.filter(|_| !bypassing) else { continue };
        if ignored(&circuit.device(pass.device).reference) {
            let reason = "ignored by the board file".to_owned();
            found.not_judged.push(NotJudged { device: pass.device, reason });
            continue;
        }
        let regulator = regulator(&network, &stage, drive, &ends);
        match built.iter_mut().find(|known| is_parallel(known, &regulator)) {
            Some(known) => join(known, regulator),
            None => built.push(regulator),
        }
    }
    for (regulator, outboard) in found.regulators.iter_mut().zip(outboards) {
        regulator.built_up = outboard.map(Box::new);
    }
    // A shunt that drives a pass transistor is a part of that regulator.
    let amplifies = |device: DeviceId| {
        let amplifiers = built.iter().filter_map(|one| one.built_up.as_ref()?.amplifier.as_ref());
        amplifiers.flat_map(|amplifier| &amplifier.devices).any(|one| *one == device)
    };
    found.not_judged.retain(|one| !amplifies(one.device));
    found.regulators.extend(built);
}

/// Whether two entries are transistors in parallel of one regulator.
fn is_parallel(known: &Regulator, other: &Regulator) -> bool {
    let (Some(one), Some(two)) = (&known.built_up, &other.built_up) else { return false };
    one.amplifier == two.amplifier && one.reference == two.reference && one.output == two.output
}

fn join(known: &mut Regulator, other: Regulator) {
    let (Some(one), Some(two)) = (&mut known.built_up, other.built_up) else { return };
    // Those that carry the load current come first.
    let new: Vec<DeviceId> = two.pass.into_iter().filter(|device| !one.pass.contains(device)).collect();
    one.pass.splice(1..1, new);
    for (device, duty) in two.cut_out {
        match one.cut_out.iter_mut().find(|known| known.0 == device) {
            Some(known) => known.1 = known.1.min(duty),
            None => one.cut_out.push((device, duty)),
        }
    }
    one.cut_out.sort_by_key(|(device, duty): &(DeviceId, Duty)| (*duty, *device));
}

fn regulator(network: &Network<'_>, stage: &Stage, drive: Drive, ends: &Ends) -> Regulator {
    let circuit = network.circuit;
    let pass = stage.transistors.first().map(|one| one.device);
    let powered = |nets: &[NetId]| nets.iter().copied().find(|net| carries_power(circuit, *net));
    let input = powered(&ends.input).unwrap_or(stage.input);
    let sensed = drive.sensed.as_ref().map(|sensed| sensed.net);
    let output = sensed.or_else(|| powered(&ends.output)).unwrap_or(stage.output);
    let (cut_out, boundary) = cut_out(circuit, stage, &drive, ends);
    let feed = feed(network, &drive.reference, ends);
    let divider = drive.sensed.and_then(|sensed| sensed.divider);
    let ground = divider.as_ref().and_then(|divider| divider.returns);
    let ground = ground.or_else(|| boundary.iter().copied().find(|net| circuit.net(*net).ground));
    let drops = |bipolar: bool| {
        let own = if bipolar { stage.base_emitter_drops } else { stage.gate_source_drops };
        own + drive.drivers.iter().filter(|one| one.bipolar == bipolar).count()
    };
    let built = BuiltUp {
        pass: stage.transistors.iter().map(|one| one.device).collect(),
        outboard: false,
        follower: stage.follower,
        base_emitter_drops: drops(true),
        gate_source_drops: drops(false),
        input,
        output,
        output_line: ends.output.clone(),
        amplifier: drive.amplifier,
        divider: divider.clone(),
        reference: drive.reference,
        feed,
        cut_out,
        boundary,
    };
    let device = pass.unwrap_or_else(|| unreachable!("a stage has a pass transistor"));
    Regulator {
        device,
        output_index: 0,
        identity: identity(circuit, device),
        kind: RegulatorKind::Series,
        polarity: if ends.positive { Sign::Positive } else { Sign::Negative },
        mode: if divider.is_some() { Mode::Adjustable } else { Mode::Fixed },
        pass: Some(stage.pass),
        nominal: None,
        roles: roles(circuit, stage),
        input_net: Some(input),
        output_net: Some(output),
        ground_net: ground,
        divider,
        feed: None,
        built_up: Some(Box::new(built)),
    }
}

fn identity(circuit: &Circuit, device: DeviceId) -> Identity {
    Identity {
        families: Vec::new(),
        name: circuit.device(device).value.clone(),
        told_by: "how it is wired".to_owned(),
        grade: Grade::Drawn,
        remarks: Vec::new(),
    }
}

/// The power terminals of the pass transistor.
fn roles(circuit: &Circuit, stage: &Stage) -> Roles {
    let Some(pass) = stage.transistors.first() else { return Roles::default() };
    let pins =
        |net: NetId| circuit.pins_of(pass.device).filter(|(_, pin)| pin.net == Some(net)).map(|(at, _)| at).collect();
    Roles { input: pins(stage.input), output: pins(stage.output), ..Roles::default() }
}
