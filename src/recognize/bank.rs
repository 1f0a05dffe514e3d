//! The capacitors on a net.
//!
//! A capacitor counts where its other end lies on ground, through a small resistor in either order, and behind ferrites
//! and the like. The search goes only a few parts deep and never along a ground, so its cost is that of the pins near
//! the net.

use std::collections::{BTreeSet, VecDeque};

use crate::circuit::{Circuit, DeviceId, DeviceKind, NetId};

use super::model::{Bank, Branch};
use super::order::natural;

/// A resistor up to this many ohms in series with a capacitor is its ESR; above, the two are a filter or a timer.
const SERIES_OHMS: f64 = 100.0;
/// A resistor up to this many ohms between two nets is a shunt or a link; beyond it the bank goes on.
const LINK_OHMS: f64 = 1.0;
/// How many ferrites, links and diodes deep the search goes.
const DEEPEST: usize = 3;
/// How many nets are looked at for one bank.
const MOST_NETS: usize = 24;

/// On which side of a regulator a bank lies.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Side {
    /// At the output (or anywhere but an input): diodes end the bank.
    Output,
    /// At an input: capacitors ahead of a series diode are listed too, marked.
    Input,
}

/// The capacitors between a net and ground.
#[must_use]
pub fn bank(circuit: &Circuit, net: NetId) -> Bank {
    bank_to(circuit, net, &[], Side::Output)
}

/// The capacitors between a net and ground, where `returns` count as ground too (the net of a regulator's ground pin,
/// whatever its name).
#[must_use]
pub fn bank_to(circuit: &Circuit, net: NetId, returns: &[NetId], side: Side) -> Bank {
    let mut search = Search {
        circuit,
        start: net,
        returns,
        side,
        seen: BTreeSet::from([net]),
        found: BTreeSet::new(),
        bank: Bank { net, branches: Vec::new(), dangling: Vec::new(), leaves_board: false },
    };
    let mut queue = VecDeque::from([(net, Vec::new(), false)]);
    while let Some((net, through, behind_diode)) = queue.pop_front() {
        search.look_at(net, &through, behind_diode, &mut queue);
    }
    let mut bank = search.bank;
    let order = |device: &DeviceId| natural(&circuit.device(*device).reference);
    bank.branches.sort_by_cached_key(|branch| order(&branch.capacitor));
    bank.dangling.sort_by_cached_key(order);
    bank
}

type Step = (NetId, Vec<DeviceId>, bool);

struct Search<'a> {
    circuit: &'a Circuit,
    start: NetId,
    returns: &'a [NetId],
    side: Side,
    seen: BTreeSet<NetId>,
    found: BTreeSet<DeviceId>,
    bank: Bank,
}

impl Search<'_> {
    fn is_return(&self, net: NetId) -> bool {
        net != self.start && (self.returns.contains(&net) || self.circuit.net(net).ground)
    }

    fn look_at(&mut self, net: NetId, through: &[DeviceId], behind_diode: bool, queue: &mut VecDeque<Step>) {
        let circuit = self.circuit;
        for device in circuit.devices_on(net) {
            let part = circuit.device(device);
            if !part.is_fitted() || self.found.contains(&device) {
                continue;
            }
            match part.kind {
                DeviceKind::Capacitor => self.capacitor(device, net, through, behind_diode),
                DeviceKind::Resistor => self.resistor(device, net, through, behind_diode, queue),
                DeviceKind::Ferrite | DeviceKind::Inductor | DeviceKind::Fuse | DeviceKind::NetTie => {
                    self.go_on(device, net, through, behind_diode, queue);
                }
                DeviceKind::Diode | DeviceKind::Schottky if self.side == Side::Input && self.feeds(device, net) => {
                    self.go_on(device, net, through, true, queue);
                }
                DeviceKind::Connector if !behind_diode => self.bank.leaves_board = true,
                _ => {}
            }
        }
    }

    fn add(&mut self, capacitor: DeviceId, series: Vec<DeviceId>, through: &[DeviceId], behind_diode: bool) {
        if self.found.insert(capacitor) {
            self.bank.branches.push(Branch { capacitor, series, through: through.to_vec(), behind_diode });
        }
    }

    fn capacitor(&mut self, device: DeviceId, net: NetId, through: &[DeviceId], behind_diode: bool) {
        let Some(other) = self.circuit.other_end(device, net) else {
            // A capacitor with one end on no net connects nothing; one with both ends on this net neither.
            let nets: BTreeSet<NetId> = self.circuit.device(device).pins.iter().filter_map(|pin| pin.net).collect();
            if nets.len() == 1 && self.found.insert(device) {
                self.bank.dangling.push(device);
            }
            return;
        };
        if self.is_return(other) {
            self.add(device, Vec::new(), through, behind_diode);
        } else if self.is_island(other) {
            if self.found.insert(device) {
                self.bank.dangling.push(device);
            }
        } else if let Some(resistor) = self.partner(other, device, DeviceKind::Resistor)
            && self.ohms(resistor).is_some_and(|ohms| ohms <= SERIES_OHMS)
            && self.circuit.other_end(resistor, other).is_some_and(|end| self.is_return(end))
        {
            self.add(device, vec![resistor], through, behind_diode);
        }
    }

    fn resistor(
        &mut self,
        device: DeviceId,
        net: NetId,
        through: &[DeviceId],
        behind: bool,
        queue: &mut VecDeque<Step>,
    ) {
        let Some(ohms) = self.ohms(device) else { return };
        let Some(other) = self.circuit.other_end(device, net) else { return };
        if ohms <= SERIES_OHMS
            && let Some(capacitors) = self.capacitors_only(other, device)
        {
            for capacitor in capacitors {
                self.add(capacitor, vec![device], through, behind);
            }
        } else if ohms <= LINK_OHMS {
            self.go_on(device, net, through, behind, queue);
        }
    }

    fn go_on(
        &mut self,
        device: DeviceId,
        net: NetId,
        through: &[DeviceId],
        behind: bool,
        queue: &mut VecDeque<Step>,
    ) {
        let Some(other) = self.circuit.other_end(device, net) else { return };
        let open = through.len() < DEEPEST && self.seen.len() < MOST_NETS && !self.is_return(other);
        if open && self.seen.insert(other) {
            let mut longer = through.to_vec();
            longer.push(device);
            queue.push_back((other, longer, behind));
        }
    }

    fn ohms(&self, resistor: DeviceId) -> Option<f64> {
        self.circuit.device(resistor).amount.as_ref().map(|value| value.amount)
    }

    /// Nothing but capacitors is on the net.
    fn is_island(&self, net: NetId) -> bool {
        self.circuit.pin_count(net) <= 64
            && self.circuit.devices_on(net).all(|device| {
                let device = self.circuit.device(device);
                !device.is_fitted() || device.kind == DeviceKind::Capacitor
            })
    }

    /// The only other part on a net, where it is of this kind.
    fn partner(&self, net: NetId, than: DeviceId, kind: DeviceKind) -> Option<DeviceId> {
        let mut others = self
            .circuit
            .devices_on(net)
            .take(8)
            .filter(|device| *device != than && self.circuit.device(*device).is_fitted());
        let partner = others.next().filter(|device| self.circuit.device(*device).kind == kind)?;
        others.next().is_none().then_some(partner)
    }

    /// The capacitors to ground on a net, where it joins nothing else but the resistor.
    fn capacitors_only(&self, net: NetId, resistor: DeviceId) -> Option<Vec<DeviceId>> {
        if self.is_return(net) || self.circuit.pin_count(net) > 16 {
            return None;
        }
        let mut capacitors = Vec::new();
        for device in self.circuit.devices_on(net).filter(|device| *device != resistor) {
            let part = self.circuit.device(device);
            if !part.is_fitted() {
                continue;
            }
            let grounded = self.circuit.other_end(device, net).is_some_and(|other| self.is_return(other));
            if part.kind != DeviceKind::Capacitor || !grounded {
                return None;
            }
            capacitors.push(device);
        }
        (!capacitors.is_empty()).then_some(capacitors)
    }

    /// Whether a diode lets current into the net, or out of it where the net is a negative rail: either way the net is
    /// fed through it. A cathode on a positive net feeds it; an anode on a net named negative does.
    fn feeds(&self, diode: DeviceId, net: NetId) -> bool {
        let device = self.circuit.device(diode);
        let on_net = |names: &[&str]| {
            device
                .pins
                .iter()
                .any(|pin| pin.net == Some(net) && names.iter().any(|name| pin.name.eq_ignore_ascii_case(name)))
        };
        let named =
            device.pins.iter().any(|pin| ["K", "A", "C"].iter().any(|name| pin.name.eq_ignore_ascii_case(name)));
        let negative =
            crate::circuit::supply_name(&self.circuit.net(self.start).name).is_some_and(|name| name.volts < 0.0);
        match (named, negative) {
            // Symbols without pin names number the cathode first.
            (false, false) => device.pins.first().is_some_and(|pin| pin.net == Some(net)),
            (false, true) => device.pins.get(1).is_some_and(|pin| pin.net == Some(net)),
            (true, false) => on_net(&["K", "C"]),
            (true, true) => on_net(&["A"]),
        }
    }
}
