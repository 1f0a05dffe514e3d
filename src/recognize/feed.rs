//! What feeds a shunt reference.

use crate::circuit::{Circuit, DeviceKind, NetId, PinType, supply_name};

use super::model::Feed;
use super::walk::{Chain, chains};

/// Finds the resistors from a supply to the net that a shunt holds. `apart` are nets that cannot be the supply: the
/// shunt's other pole and its adjust net.
pub(super) fn read(circuit: &Circuit, held: NetId, apart: &[NetId]) -> Option<Feed> {
    let mut stops = apart.to_vec();
    stops.push(held);
    let mut found: Vec<Chain> = chains(circuit, held, &stops)
        .into_iter()
        .filter(|chain| !stops.contains(&chain.end) && !circuit.net(chain.end).ground)
        .collect();
    // The order of the file breaks ties, so the sort must be stable.
    found.sort_by_key(|chain| std::cmp::Reverse(supply_likeness(circuit, chain.end)));
    let from = found.first()?.end;
    let mut branches = found.into_iter().filter(|chain| chain.end == from).map(|chain| chain.devices);
    let resistors = branches.next()?;
    Some(Feed { resistors, parallel: branches.collect(), from })
}

/// How much a net looks like a supply.
fn supply_likeness(circuit: &Circuit, net: NetId) -> usize {
    let named = usize::from(supply_name(&circuit.net(net).name).is_some()) * 8;
    let mut power = 0;
    let mut entry = 0;
    for (device, pin) in circuit.fitted_on(net).take(256) {
        let device = circuit.device(device);
        match device.pins.get(pin).map(|pin| pin.kind) {
            Some(PinType::PowerOut) => power = 4,
            Some(PinType::PowerIn) => power = power.max(2),
            _ => {}
        }
        if matches!(device.kind, DeviceKind::Connector | DeviceKind::Battery) {
            entry = 1;
        }
    }
    named + power + entry
}
