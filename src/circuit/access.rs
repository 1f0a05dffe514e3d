//! Asking the circuit: who is on which net.

use std::collections::HashSet;

use petgraph::visit::EdgeRef;

use super::model::{Circuit, Device, DeviceId, DeviceKind, Fitted, Net, NetId, Node, Pin, PinType};

impl Circuit {
    /// All devices, in order of the file; parts that only nets name come last.
    pub fn devices(&self) -> impl ExactSizeIterator<Item = DeviceId> + '_ {
        self.devices.iter().copied()
    }

    /// All nets, in order of the file.
    pub fn nets(&self) -> impl ExactSizeIterator<Item = NetId> + '_ {
        self.nets.iter().copied()
    }

    /// Whether nothing of the netlist was lost. Of a damaged one, a pin without a net may have had one.
    #[must_use]
    pub fn is_whole(&self) -> bool {
        self.whole
    }

    /// A device.
    ///
    /// # Panics
    /// When the id belongs to another circuit.
    #[must_use]
    pub fn device(&self, id: DeviceId) -> &Device {
        match self.graph.node_weight(id.0) {
            Some(Node::Device(device)) => device,
            _ => unreachable!("ids of devices are made by the circuit that they belong to"),
        }
    }

    /// A net.
    ///
    /// # Panics
    /// When the id belongs to another circuit.
    #[must_use]
    pub fn net(&self, id: NetId) -> &Net {
        match self.graph.node_weight(id.0) {
            Some(Node::Net(net)) => net,
            _ => unreachable!("ids of nets are made by the circuit that they belong to"),
        }
    }

    /// The device with this reference, exactly as written; the first where several have it.
    #[must_use]
    pub fn device_named(&self, reference: &str) -> Option<DeviceId> {
        self.by_reference.get(reference).copied()
    }

    /// The net with this name, exactly as written; the first where several have it.
    #[must_use]
    pub fn net_named(&self, name: &str) -> Option<NetId> {
        self.nets_named(name).first().copied()
    }

    /// All nets with this name, in order of the file.
    #[must_use]
    pub fn nets_named(&self, name: &str) -> &[NetId] {
        self.by_name.get(name).map_or(&[], Vec::as_slice)
    }

    /// The pins on a net, in order of the file: device and index in [`Device::pins`].
    pub fn pins_on(&self, net: NetId) -> impl Iterator<Item = (DeviceId, usize)> + '_ {
        // Edges are added last to first, so petgraph, which lists the newest first, gives them in order of the file.
        self.graph.edges(net.0).map(move |edge| {
            let device = if edge.source() == net.0 { edge.target() } else { edge.source() };
            (DeviceId(device), *edge.weight())
        })
    }

    /// The pins on a net that belong to parts that are on the board.
    pub fn fitted_on(&self, net: NetId) -> impl Iterator<Item = (DeviceId, usize)> + '_ {
        self.pins_on(net).filter(|(device, _)| self.device(*device).is_fitted())
    }

    /// The devices on a net, each once, fitted or not.
    pub fn devices_on(&self, net: NetId) -> impl Iterator<Item = DeviceId> + '_ {
        let mut seen = HashSet::new();
        self.pins_on(net).map(|(device, _)| device).filter(move |device| seen.insert(*device))
    }

    /// How many pins are on a net.
    #[must_use]
    pub fn pin_count(&self, net: NetId) -> usize {
        self.graph.edges(net.0).count()
    }

    /// The pins of a device with their index.
    pub fn pins_of(&self, device: DeviceId) -> impl ExactSizeIterator<Item = (usize, &Pin)> + '_ {
        self.device(device).pins.iter().enumerate()
    }

    /// The net that a pin is on.
    #[must_use]
    pub fn net_of(&self, device: DeviceId, pin: usize) -> Option<NetId> {
        self.device(device).pins.get(pin).and_then(|pin| pin.net)
    }

    /// The other net of a part whose connected pins lie on exactly two nets, one of them this one.
    #[must_use]
    pub fn other_end(&self, device: DeviceId, net: NetId) -> Option<NetId> {
        match self.device(device).ends? {
            [one, other] if one == net => Some(other),
            [one, other] if other == net => Some(one),
            _ => None,
        }
    }

    /// The two nets of a part whose connected pins lie on exactly two.
    #[must_use]
    pub fn ends(&self, device: DeviceId) -> Option<[NetId; 2]> {
        self.device(device).ends
    }

    /// The fitted two-ended parts on a net, each once, with the net at their other end.
    pub fn neighbours(&self, net: NetId) -> impl Iterator<Item = (DeviceId, NetId)> + '_ {
        self.devices_on(net)
            .filter(|device| self.device(*device).is_fitted())
            .filter_map(move |device| Some((device, self.other_end(device, net)?)))
    }

    /// The nets that are grounds, in order of the file.
    pub fn grounds(&self) -> impl Iterator<Item = NetId> + '_ {
        self.nets().filter(|net| self.net(*net).ground)
    }

    /// Makes every net with one of these names a ground, and gives the names that no net has.
    pub fn mark_ground<'a>(&mut self, names: impl IntoIterator<Item = &'a str>) -> Vec<&'a str> {
        let mut missing = Vec::new();
        for name in names {
            let Some(nets) = self.by_name.get(name) else {
                missing.push(name);
                continue;
            };
            for id in nets {
                if let Some(Node::Net(net)) = self.graph.node_weight_mut(id.0) {
                    net.ground = true;
                }
            }
        }
        missing
    }
}

impl Net {
    /// Whether its name was made from a pin or a code, so that it changes with references and codes.
    #[must_use]
    pub fn has_made_name(&self) -> bool {
        self.name.is_empty() || super::is_made_up(&self.name)
    }
}

impl Device {
    /// Whether the part is on the board.
    #[must_use]
    pub fn is_fitted(&self) -> bool {
        self.fitted == Fitted::Yes
    }

    /// The text of a field or property, whatever the case of its name, without blanks around it; `None` where it is
    /// missing or empty.
    #[must_use]
    pub fn field(&self, name: &str) -> Option<&str> {
        self.fields
            .iter()
            .filter(|field| field.name.trim().eq_ignore_ascii_case(name))
            .map(|field| field.value.trim())
            .find(|value| !value.is_empty())
    }

    /// The index of the pin with this number.
    #[must_use]
    pub fn pin_numbered(&self, number: &str) -> Option<usize> {
        self.pins.iter().position(|pin| pin.number == number)
    }

    /// The indices of the pins with this name, whatever its case.
    pub fn pins_named<'a>(&'a self, name: &'a str) -> impl Iterator<Item = usize> + 'a {
        let named = move |(index, pin): (usize, &Pin)| pin.name.eq_ignore_ascii_case(name).then_some(index);
        self.pins.iter().enumerate().filter_map(named)
    }

    /// The part name without what rescue libraries hang on it.
    #[must_use]
    pub fn symbol(&self) -> &str {
        super::kind::symbol_name(&self.library, &self.part)
    }
}

impl DeviceKind {
    /// Whether it is a passive part with a value in ohms, farads or henries.
    #[must_use]
    pub fn has_amount(self) -> bool {
        matches!(self, Self::Resistor | Self::Potentiometer | Self::ResistorNetwork | Self::Thermistor)
            || matches!(self, Self::Capacitor | Self::Inductor)
    }
}

impl PinType {
    /// Whether it takes or gives power by its drawn type.
    #[must_use]
    pub fn is_power(self) -> bool {
        matches!(self, Self::PowerIn | Self::PowerOut)
    }
}
