//! Rectifiers behind a winding: bridges, pairs behind a centre tap, single diodes.

use std::collections::{BTreeMap, BTreeSet};

use crate::circuit::{Circuit, Device, DeviceId, DeviceKind, NetId};
use crate::knowledge::Sign;

/// How many nets are looked at between a winding and its rectifier: fuses, links, chokes.
const MOST_NETS: usize = 16;

/// A net that a rectifier feeds.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Rectified {
    /// The net, with the reservoir.
    pub net: NetId,
    /// The sign of its voltage against ground.
    pub sign: Sign,
    /// Its diodes or bridge, in natural order.
    pub devices: Vec<DeviceId>,
    /// How many diodes the current passes: two in a bridge, one elsewhere.
    pub drops: u8,
    /// Whether both half waves charge the reservoir.
    pub full_wave: bool,
    /// Whether ground is a centre tap, so that only half the winding's voltage counts.
    pub centre_tap: bool,
}

/// What the rectifiers behind a winding feed. `other` is the far end of the winding; none: it is ground.
#[must_use]
pub fn rectified(circuit: &Circuit, one: NetId, other: Option<NetId>) -> Vec<Rectified> {
    let near = Poles::of(circuit, one);
    let far = other.map(|other| Poles::of(circuit, other));
    let tapped = other.is_some_and(|other| has_grounded_tap(circuit, one, other));
    let outputs = [Sign::Positive, Sign::Negative].into_iter().flat_map(|sign| {
        let nets: BTreeSet<NetId> = near.fed(sign).chain(far.iter().flat_map(|far| far.fed(sign))).collect();
        nets.into_iter().map(move |net| (net, sign)).collect::<Vec<_>>()
    });
    outputs
        .filter(|(net, _)| !circuit.net(*net).ground)
        .filter_map(|(net, sign)| {
            let charges = [near.devices(net, sign), far.as_ref().and_then(|far| far.devices(net, sign))];
            let mut devices: BTreeSet<DeviceId> = charges.iter().flatten().copied().flatten().copied().collect();
            let both = charges.iter().all(Option::is_some);
            let (drops, full_wave) = if other.is_none() || tapped {
                (1, both)
            } else {
                // The current comes back by diodes from ground, those of the other sign.
                let returns = |poles: &Poles| poles.to_ground(circuit, opposite(sign));
                let back = [returns(&near), far.as_ref().map_or_else(Vec::new, returns)];
                let [from_near, from_far] = &back;
                let one_way = charges.first().is_some_and(Option::is_some) && !from_far.is_empty();
                let other_way = charges.last().is_some_and(Option::is_some) && !from_near.is_empty();
                if !one_way && !other_way {
                    return None;
                }
                devices.extend(back.iter().flatten().copied());
                (2, one_way && other_way)
            };
            let devices = devices.into_iter().collect();
            Some(Rectified { net, sign, devices, drops, full_wave, centre_tap: tapped })
        })
        .collect()
}

fn opposite(sign: Sign) -> Sign {
    match sign {
        Sign::Positive => Sign::Negative,
        Sign::Negative => Sign::Positive,
    }
}

/// The nets that diodes at one end of a winding lead to, by the sign that they charge them to.
#[derive(Debug, Default)]
struct Poles {
    positive: BTreeMap<NetId, BTreeSet<DeviceId>>,
    negative: BTreeMap<NetId, BTreeSet<DeviceId>>,
}

impl Poles {
    fn of(circuit: &Circuit, end: NetId) -> Self {
        let mut poles = Self::default();
        for net in joined(circuit, end) {
            for (device, pin) in circuit.fitted_on(net) {
                poles.add(circuit, device, pin);
            }
        }
        poles
    }

    fn add(&mut self, circuit: &Circuit, device: DeviceId, pin: usize) {
        let part = circuit.device(device);
        match part.kind {
            DeviceKind::Bridge => {
                let output = |name: &str| part.pins.iter().find(|pin| pin.name == name).and_then(|pin| pin.net);
                let is_winding = part.pins.get(pin).is_some_and(|pin| !matches!(pin.name.as_str(), "+" | "-"));
                if is_winding {
                    for (name, nets) in [("+", &mut self.positive), ("-", &mut self.negative)] {
                        if let Some(net) = output(name) {
                            nets.entry(net).or_default().insert(device);
                        }
                    }
                }
            }
            DeviceKind::Diode | DeviceKind::Schottky => {
                let Some(anode) = anode(part) else { return };
                let here = circuit.net_of(device, pin);
                let Some(there) = here.and_then(|here| circuit.other_end(device, here)) else { return };
                let nets = if anode == pin { &mut self.positive } else { &mut self.negative };
                nets.entry(there).or_default().insert(device);
            }
            _ => {}
        }
    }

    fn side(&self, sign: Sign) -> &BTreeMap<NetId, BTreeSet<DeviceId>> {
        match sign {
            Sign::Positive => &self.positive,
            Sign::Negative => &self.negative,
        }
    }

    fn fed(&self, sign: Sign) -> impl Iterator<Item = NetId> {
        self.side(sign).keys().copied()
    }

    fn devices(&self, net: NetId, sign: Sign) -> Option<&BTreeSet<DeviceId>> {
        self.side(sign).get(&net)
    }

    /// Diodes between ground and this end.
    fn to_ground(&self, circuit: &Circuit, sign: Sign) -> Vec<DeviceId> {
        let grounded = self.side(sign).iter().filter(|(net, _)| circuit.net(**net).ground);
        grounded.flat_map(|(_, devices)| devices.iter().copied()).collect()
    }
}

/// The index of a diode's anode pin; `None` where nothing tells it.
#[must_use]
pub fn anode(part: &Device) -> Option<usize> {
    let named = |name: &str| part.pins.iter().position(|pin| pin.name.eq_ignore_ascii_case(name));
    if let Some(anode) = named("A").or_else(|| named("anode")) {
        return Some(anode);
    }
    let cathode = named("K").or_else(|| named("C")).or_else(|| named("cathode"))?;
    (0..part.pins.len()).find(|index| *index != cathode)
}

/// The net with those that fuses, links, switches and chokes join to it.
fn joined(circuit: &Circuit, start: NetId) -> Vec<NetId> {
    let mut found = vec![start];
    let mut next = 0;
    while let Some(net) = found.get(next).copied() {
        next += 1;
        for (device, to) in circuit.neighbours(net) {
            let link = matches!(
                circuit.device(device).kind,
                DeviceKind::Fuse
                    | DeviceKind::NetTie
                    | DeviceKind::Switch
                    | DeviceKind::Inductor
                    | DeviceKind::Ferrite
            );
            if link && !circuit.net(to).ground && !found.contains(&to) && found.len() < MOST_NETS {
                found.push(to);
            }
        }
    }
    found
}

/// Whether a transformer with both ends of the winding has a third pin on ground.
fn has_grounded_tap(circuit: &Circuit, one: NetId, other: NetId) -> bool {
    let (one, other) = (joined(circuit, one), joined(circuit, other));
    one.iter().flat_map(|net| circuit.fitted_on(*net)).any(|(device, _)| {
        let part = circuit.device(device);
        let on = |nets: &[NetId]| part.pins.iter().any(|pin| pin.net.is_some_and(|net| nets.contains(&net)));
        matches!(part.kind, DeviceKind::Transformer | DeviceKind::Connector)
            && on(&other)
            && part.pins.iter().any(|pin| pin.net.is_some_and(|net| circuit.net(net).ground))
            && !has_return_diodes(circuit, &one)
    })
}

/// Whether diodes lead from ground to this end of a winding: then ground is the bridge's, not a tap's.
fn has_return_diodes(circuit: &Circuit, end: &[NetId]) -> bool {
    let Some(first) = end.first() else { return false };
    let poles = Poles::of(circuit, *first);
    [Sign::Positive, Sign::Negative].iter().any(|sign| !poles.to_ground(circuit, *sign).is_empty())
}
