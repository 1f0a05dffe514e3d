//! The network of a built-up regulator, cut out at supplies and ground, with what each part of it does.

use std::collections::BTreeMap;

use crate::circuit::{Circuit, DeviceId, DeviceKind, NetId};

use super::super::walk::{SAMPLE, chains};
use super::drive::Drive;
use super::model::Duty;
use super::pass::Stage;
use super::sense::Ends;

/// How many parts a network has at most.
const LARGEST: usize = 64;

/// The parts of a regulator and the nets at which they are cut out.
pub(super) fn cut_out(
    circuit: &Circuit,
    stage: &Stage,
    drive: &Drive,
    ends: &Ends,
) -> (Vec<(DeviceId, Duty)>, Vec<NetId>) {
    let known = duties(circuit, stage, drive, ends);
    let mut nets: Vec<NetId> = drive.path.clone();
    nets.extend(stage.transistors.iter().map(|one| one.control));
    if let Some(amplifier) = &drive.amplifier {
        nets.extend([amplifier.sensing, amplifier.comparing]);
    }
    nets.push(drive.reference.net);
    let mut parts: Vec<DeviceId> = known.keys().copied().collect();
    // What the known parts lie on belongs to the network too, but not the rails.
    let mut boundary: Vec<NetId> = Vec::new();
    let mut next = 0;
    let mut inner: Vec<NetId> = Vec::new();
    let from_parts = parts.iter().filter(|part| is_open(circuit, **part));
    nets.extend(from_parts.flat_map(|part| circuit.device(*part).pins.iter().filter_map(|pin| pin.net)));
    while let Some(net) = nets.get(next).copied() {
        next += 1;
        if inner.contains(&net) || boundary.contains(&net) {
            continue;
        }
        if ends.cuts(circuit, net) {
            boundary.push(net);
            continue;
        }
        inner.push(net);
        for device in circuit.devices_on(net).take(SAMPLE).filter(|device| circuit.device(*device).is_fitted()) {
            if parts.contains(&device) || parts.len() >= LARGEST || !belongs(circuit, device) {
                continue;
            }
            parts.push(device);
            if is_open(circuit, device) {
                nets.extend(circuit.device(device).pins.iter().filter_map(|pin| pin.net));
            }
        }
    }
    parts.sort_unstable();
    boundary.sort_unstable();
    let mut found: Vec<(DeviceId, Duty)> =
        parts.into_iter().map(|part| (part, known.get(&part).copied().unwrap_or(Duty::Network))).collect();
    found.sort_by_key(|(device, duty)| (*duty, *device));
    (found, boundary)
}

/// Whether a part is taken in where it lies on an inner net.
fn belongs(circuit: &Circuit, device: DeviceId) -> bool {
    !matches!(circuit.device(device).kind, DeviceKind::Mechanical | DeviceKind::Connector | DeviceKind::Integrated)
}

/// Whether all nets of a part belong together: those of an op-amp with several units do not.
fn is_open(circuit: &Circuit, device: DeviceId) -> bool {
    !matches!(circuit.device(device).kind, DeviceKind::OpAmp | DeviceKind::Integrated | DeviceKind::Connector)
}

/// What is known of single parts; the first duty of a part counts.
fn duties(circuit: &Circuit, stage: &Stage, drive: &Drive, ends: &Ends) -> BTreeMap<DeviceId, Duty> {
    let mut known = BTreeMap::new();
    let mut note = |device: DeviceId, duty: Duty| {
        known.entry(device).or_insert(duty);
    };
    stage.transistors.iter().for_each(|one| note(one.device, Duty::Pass));
    drive.amplifier.iter().flat_map(|amplifier| &amplifier.devices).for_each(|one| note(*one, Duty::Amplifier));
    drive.drivers.iter().for_each(|one| note(one.device, Duty::Driver));
    drive.reference.devices.iter().for_each(|one| note(*one, Duty::Reference));
    if let Some(divider) = drive.sensed.as_ref().and_then(|sensed| sensed.divider.as_ref()) {
        let parallel = divider.upper_parallel.iter().chain(&divider.lower_parallel).flatten();
        divider.upper.iter().chain(&divider.lower).chain(parallel).for_each(|one| note(*one, Duty::Divider));
    }
    let stops: Vec<NetId> = ends.input.iter().chain(&ends.output).copied().collect();
    for chain in chains(circuit, drive.reference.net, &stops) {
        if !circuit.net(chain.end).ground && ends.cuts(circuit, chain.end) {
            chain.devices.iter().for_each(|one| note(*one, Duty::Feed));
        }
    }
    known
}
