//! A board as the matching sees it: devices and nets by number, joined by pins.

use std::collections::HashMap;

use crate::circuit::{Circuit, Device, DeviceId, DeviceKind, NetId};
use crate::netlist::Netlist;

/// The label of both pins of a part that can be turned round.
const EITHER: u32 = 0;

/// Numbers of pins as small numbers, the same on both boards.
#[derive(Debug, Default)]
pub(super) struct PinLabels(HashMap<String, u32>);

impl PinLabels {
    fn of(&mut self, number: &str) -> u32 {
        if let Some(known) = self.0.get(number) {
            return *known;
        }
        let label = u32::try_from(self.0.len()).unwrap_or(u32::MAX - 1) + 1;
        self.0.insert(number.to_owned(), label);
        label
    }
}

/// One end of a pin: its number as a label, and the net, or the device.
#[derive(Debug, Clone, Copy)]
pub(super) struct End {
    /// The pin's number.
    pub(super) number: u32,
    /// The same, or one label for both pins of a part that can be turned round.
    pub(super) label: u32,
    /// The place of what lies there.
    pub(super) at: usize,
}

/// A board: devices and nets in order of the file, each with its pins.
#[derive(Debug)]
pub(super) struct Graph<'a> {
    pub(super) netlist: &'a Netlist,
    pub(super) circuit: &'a Circuit,
    devices: Vec<DeviceId>,
    nets: Vec<NetId>,
    pins: Vec<Vec<End>>,
    nodes: Vec<Vec<End>>,
    device_places: HashMap<DeviceId, usize>,
    net_places: HashMap<NetId, usize>,
}

impl<'a> Graph<'a> {
    pub(super) fn new(netlist: &'a Netlist, circuit: &'a Circuit, labels: &mut PinLabels) -> Self {
        let devices: Vec<DeviceId> = circuit.devices().collect();
        let nets: Vec<NetId> = circuit.nets().collect();
        let device_places = devices.iter().enumerate().map(|(place, id)| (*id, place)).collect();
        let net_places: HashMap<NetId, usize> = nets.iter().enumerate().map(|(place, id)| (*id, place)).collect();
        let mut nodes: Vec<Vec<End>> = vec![Vec::new(); nets.len()];
        let mut pins: Vec<Vec<End>> = Vec::with_capacity(devices.len());
        for (place, id) in devices.iter().enumerate() {
            let device = circuit.device(*id);
            let turns = can_be_turned(device);
            let mut own = Vec::new();
            for pin in &device.pins {
                let Some(net) = pin.net.and_then(|net| net_places.get(&net)).copied() else { continue };
                let number = labels.of(&pin.number);
                let label = if turns { EITHER } else { number };
                own.push(End { number, label, at: net });
                if let Some(list) = nodes.get_mut(net) {
                    list.push(End { number, label, at: place });
                }
            }
            pins.push(own);
        }
        Self { netlist, circuit, devices, nets, pins, nodes, device_places, net_places }
    }

    pub(super) fn device_count(&self) -> usize {
        self.devices.len()
    }

    pub(super) fn net_count(&self) -> usize {
        self.nets.len()
    }

    pub(super) fn device_id(&self, place: usize) -> Option<DeviceId> {
        self.devices.get(place).copied()
    }

    pub(super) fn net_id(&self, place: usize) -> Option<NetId> {
        self.nets.get(place).copied()
    }

    pub(super) fn device_place(&self, id: DeviceId) -> Option<usize> {
        self.device_places.get(&id).copied()
    }

    pub(super) fn net_place(&self, id: NetId) -> Option<usize> {
        self.net_places.get(&id).copied()
    }

    pub(super) fn device(&self, place: usize) -> Option<&'a Device> {
        self.devices.get(place).map(|id| self.circuit.device(*id))
    }

    pub(super) fn reference(&self, place: usize) -> &'a str {
        self.device(place).map_or("", |device| device.reference.as_str())
    }

    /// The name of a net, where people gave it one.
    pub(super) fn given_name(&self, place: usize) -> Option<&'a str> {
        let net = self.circuit.net(*self.nets.get(place)?);
        (!net.has_made_name()).then_some(net.name.as_str())
    }

    pub(super) fn is_ground(&self, place: usize) -> bool {
        self.nets.get(place).is_some_and(|net| self.circuit.net(*net).ground)
    }

    /// The pins of a device with the places of their nets.
    pub(super) fn pins(&self, device: usize) -> &[End] {
        self.pins.get(device).map_or(&[], Vec::as_slice)
    }

    /// The pins on a net with the places of their devices.
    pub(super) fn nodes(&self, net: usize) -> &[End] {
        self.nodes.get(net).map_or(&[], Vec::as_slice)
    }
}

/// Whether it is the same part with its two pins exchanged.
fn can_be_turned(device: &Device) -> bool {
    let two_ended = match device.kind {
        DeviceKind::Resistor | DeviceKind::Inductor | DeviceKind::Ferrite | DeviceKind::Fuse => true,
        DeviceKind::Capacitor => !device.polarized,
        _ => false,
    };
    two_ended && device.pins.len() == 2
}
