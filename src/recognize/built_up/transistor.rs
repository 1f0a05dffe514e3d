//! Transistors with their terminals, pairs in one package apart.

use crate::circuit::{Circuit, Device, DeviceId, DeviceKind, NetId, Polarity};

/// A single transistor of a part.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Transistor {
    /// Its part, which may hold another one.
    pub device: DeviceId,
    /// NPN or N channel.
    pub n: bool,
    /// Bipolar; else a MOSFET.
    pub bipolar: bool,
    /// Two transistors in one, as one symbol.
    pub darlington: bool,
    /// Base or gate.
    pub control: NetId,
    /// Collector or drain.
    pub collector: NetId,
    /// Emitter or source.
    pub emitter: NetId,
}

/// What stands for the transistor of a pair that a terminal belongs to.
type Label = Option<char>;

/// The terminal that a pin name stands for, and the transistor of a pair that it belongs to.
fn terminal(name: &str) -> Option<(char, Label)> {
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

/// How the packages of pairs are laid out whose symbols name both transistors' pins alike: terminals by pin number, and
/// which of the two each belongs to (common practice: SOT-363 and its kind, metal cans with six leads, SO-8).
const LAYOUTS: &[(&str, &str)] = &[
    ("EBCEBC", "112221"),
    ("BECBEC", "112221"),
    ("CBEEBC", "111222"),
    ("EBCCBE", "111222"),
    ("EBEBCCCC", "11222211"),
];

/// The labels of terminals that have none of their own, by the layout of a package.
fn labels(pins: &[(u32, char)]) -> Option<Vec<(u32, char)>> {
    let mut ordered = pins.to_vec();
    ordered.sort_unstable();
    let in_row = ordered.iter().enumerate().all(|(at, pin)| usize::try_from(pin.0) == Ok(at + 1));
    let terminals: String = ordered.iter().map(|pin| pin.1).collect();
    let (_, owners) = LAYOUTS.iter().find(|(layout, _)| in_row && *layout == terminals)?;
    Some(ordered.iter().map(|pin| pin.0).zip(owners.chars()).collect())
}

/// The terminals of a part that are connected, each with its label and net.
fn terminals(device: &Device) -> Vec<(char, Label, NetId)> {
    let named = |pin: &crate::circuit::Pin| {
        let number: u32 = pin.number.parse().ok()?;
        terminal(&pin.name).filter(|(_, label)| label.is_none()).map(|(terminal, _)| (number, terminal))
    };
    let all: Option<Vec<(u32, char)>> = device.pins.iter().map(named).collect();
    let laid_out = all.and_then(|pins| labels(&pins)).unwrap_or_default();
    let mut found = Vec::new();
    for pin in &device.pins {
        let Some(net) = pin.net else { continue };
        let owner = laid_out.iter().find(|(number, _)| pin.number.parse() == Ok(*number)).map(|(_, owner)| *owner);
        // A pin may be two terminals: `S1/D2`.
        let own = pin.name.split('/').filter_map(terminal);
        found.extend(own.map(|(terminal, label)| (terminal, label.or(owner), net)));
    }
    found
}

/// The transistors of a part whose three terminals are all connected and told by the names of its pins.
#[must_use]
pub fn transistors(circuit: &Circuit, id: DeviceId) -> Vec<Transistor> {
    let device = circuit.device(id);
    let bipolar = device.kind == DeviceKind::Bipolar;
    let Some(polarity) = device.polarity.filter(|_| bipolar || device.kind == DeviceKind::Mosfet) else {
        return Vec::new();
    };
    let pins = terminals(device);
    let controls = device.pins.iter().filter(|pin| matches!(terminal(&pin.name), Some(('B', _)))).count();
    let mut labels: Vec<Label> = pins.iter().filter(|pin| pin.0 == 'B').map(|pin| pin.1).collect();
    labels.sort_unstable();
    labels.dedup();
    let one = controls == 1;
    let net = |wanted: char, label: Label| {
        let mut nets: Vec<NetId> =
            pins.iter().filter(|p| p.0 == wanted && (one || p.1 == label)).map(|p| p.2).collect();
        nets.sort_unstable();
        nets.dedup();
        // Terminals of one name on several nets cannot be told apart.
        if nets.len() == 1 { nets.first().copied() } else { None }
    };
    let read = |label: Label| {
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
