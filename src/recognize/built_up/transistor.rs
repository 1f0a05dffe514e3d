//! Transistors with their terminals, pairs in one package apart.

use crate::circuit::{Circuit, Device, DeviceId, DeviceKind, NetId, Polarity};

/// A single transistor.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) struct Transistor {
    pub(super) device: DeviceId,
    /// NPN or N channel.
    pub(super) n: bool,
    pub(super) bipolar: bool,
    /// Two transistors in one, as one symbol.
    pub(super) darlington: bool,
    /// Base or gate.
    pub(super) control: NetId,
    /// Collector or drain.
    pub(super) collector: NetId,
    /// Emitter or source.
    pub(super) emitter: NetId,
}

/// The terminal that a pin name stands for, and the transistor of a pair that it belongs to.
fn terminal(name: &str) -> Option<(char, Option<char>)> {
    let upper = name.trim().to_ascii_uppercase();
    let label = upper.chars().last().filter(char::is_ascii_digit);
    let terminal = match upper.trim_end_matches(|sign: char| sign.is_ascii_digit()) {
        "B" | "BASE" | "G" | "GATE" => 'B',
        "C" | "COLLECTOR" | "D" | "DRAIN" => 'C',
        "E" | "EMITTER" | "S" | "SOURCE" => 'E',
        _ => return None,
    };
    Some((terminal, label))
}

/// The transistors of a part whose three terminals are all connected and told by the names of its pins.
pub(super) fn transistors(circuit: &Circuit, id: DeviceId) -> Vec<Transistor> {
    let device = circuit.device(id);
    let bipolar = device.kind == DeviceKind::Bipolar;
    let Some(polarity) = device.polarity.filter(|_| bipolar || device.kind == DeviceKind::Mosfet) else {
        return Vec::new();
    };
    // A pin may be two terminals: `S1/D2`.
    let mut pins = Vec::new();
    for pin in &device.pins {
        let Some(net) = pin.net else { continue };
        pins.extend(pin.name.split('/').filter_map(terminal).map(|(terminal, label)| (terminal, label, net)));
    }
    let controls = device.pins.iter().filter(|pin| matches!(terminal(&pin.name), Some(('B', _)))).count();
    let mut labels: Vec<Option<char>> = pins.iter().filter(|pin| pin.0 == 'B').map(|pin| pin.1).collect();
    labels.sort_unstable();
    labels.dedup();
    let one = controls == 1;
    let net = |wanted: char, label: Option<char>| {
        let mut nets: Vec<NetId> =
            pins.iter().filter(|p| p.0 == wanted && (one || p.1 == label)).map(|p| p.2).collect();
        nets.sort_unstable();
        nets.dedup();
        // Terminals of one name on several nets cannot be told apart.
        if nets.len() == 1 { nets.first().copied() } else { None }
    };
    let read = |label: Option<char>| {
        Some(Transistor {
            device: id,
            n: polarity == Polarity::N,
            bipolar,
            darlington: bipolar && is_darlington(device),
            control: net('B', label)?,
            collector: net('C', label)?,
            emitter: net('E', label)?,
        })
    };
    labels.into_iter().filter_map(read).collect()
}

fn is_darlington(device: &Device) -> bool {
    let text = format!("{} {} {}", device.part, device.description, device.keywords);
    text.to_ascii_lowercase().contains("darlington")
}
