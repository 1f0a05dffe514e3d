//! A made-up board of the size and kind of real ones: the power supply and logic of a weather buoy.

use railworthy::netlist::{Component, LibraryPart, NetEntry, NetNode, PartPin};

use crate::exported::Exported;

/// Name, type and number of a pin.
pub(crate) type Pin = (&'static str, &'static str, &'static str);

/// Letter, library, symbol, description and pins of a kind of part.
pub(crate) struct Symbol(&'static str, &'static str, &'static str, &'static str, &'static [Pin]);

const R: Symbol = Symbol("R", "Device", "R", "Resistor", &[("~", "passive", "1"), ("~", "passive", "2")]);
const C: Symbol =
    Symbol("C", "Device", "C", "Unpolarized capacitor", &[("~", "passive", "1"), ("~", "passive", "2")]);
const CP: Symbol =
    Symbol("C", "Device", "C_Polarized", "Polarized capacitor", &[("~", "passive", "1"), ("~", "passive", "2")]);
const LED: Symbol =
    Symbol("D", "Device", "LED", "Light emitting diode", &[("K", "passive", "1"), ("A", "passive", "2")]);
const SCHOTTKY: Symbol =
    Symbol("D", "Device", "D_Schottky", "Schottky diode", &[("K", "passive", "1"), ("A", "passive", "2")]);
const FUSE: Symbol = Symbol("F", "Device", "Fuse", "Fuse", &[("~", "passive", "1"), ("~", "passive", "2")]);
const CONNECTOR: Symbol = Symbol(
    "J",
    "Connector",
    "Conn_01x02",
    "Generic connector",
    &[("Pin_1", "passive", "1"), ("Pin_2", "passive", "2")],
);
const LM2940: Symbol = Symbol(
    "U",
    "Regulator_Linear",
    "LM2940",
    "1A low dropout regulator",
    &[("VI", "power_in", "1"), ("GND", "power_in", "2"), ("VO", "power_out", "3")],
);
const LM1117: Symbol = Symbol(
    "U",
    "Regulator_Linear",
    "LM1117MP-3.3",
    "800mA low-dropout linear regulator, 3.3V fixed output, SOT-223",
    &[("GND", "power_in", "1"), ("VO", "power_out", "2"), ("VI", "power_in", "3")],
);
const LM317: Symbol = Symbol(
    "U",
    "Regulator_Linear",
    "LM317_TO-220",
    "1.5A adjustable linear regulator",
    &[("ADJ", "input", "1"), ("VO", "power_out", "2"), ("VI", "power_in", "3")],
);
const AP2112: Symbol = Symbol(
    "U",
    "Regulator_Linear",
    "AP2112K-1.8",
    "600mA low dropout linear regulator, with enable pin, 1.8V fixed output",
    &[
        ("VIN", "power_in", "1"),
        ("GND", "power_in", "2"),
        ("EN", "input", "3"),
        ("NC", "no_connect", "4"),
        ("VOUT", "power_out", "5"),
    ],
);
const LP5907: Symbol = Symbol(
    "U",
    "Regulator_Linear",
    "LP5907MFX-3.3",
    "250mA ultra-low-noise low-dropout linear regulator, 3.3V",
    &[
        ("IN", "power_in", "1"),
        ("GND", "power_in", "2"),
        ("EN", "input", "3"),
        ("NC", "no_connect", "4"),
        ("OUT", "power_out", "5"),
    ],
);
const TL431: Symbol = Symbol(
    "U",
    "Reference_Voltage",
    "TL431LP",
    "Shunt regulator",
    &[("REF", "passive", "1"), ("A", "passive", "2"), ("K", "passive", "3")],
);
const LOGIC: Symbol = Symbol(
    "U",
    "Buoy",
    "MCU-8",
    "Microcontroller",
    &[
        ("VDD", "power_in", "1"),
        ("GND", "power_in", "2"),
        ("A0", "bidirectional", "3"),
        ("A1", "bidirectional", "4"),
        ("A2", "bidirectional", "5"),
        ("A3", "bidirectional", "6"),
    ],
);

/// Value, symbol and the net of each pin; an empty name for none.
pub(crate) type Placed = (&'static str, &'static Symbol, &'static [&'static str]);

const POWER: &[Placed] = &[
    ("Battery", &CONNECTOR, &["BATT+", "GND"]),
    ("2A", &FUSE, &["BATT+", "Net-(D1-A)"]),
    ("SS34", &SCHOTTKY, &["VRAW", "Net-(D1-A)"]),
    ("220uF/35V", &CP, &["VRAW", "GND"]),
    ("100n", &C, &["VRAW", "GND"]),
    ("LM2940CT-5.0", &LM2940, &["VRAW", "GND", "+5V"]),
    ("470n", &C, &["VRAW", "GND"]),
    ("22uF/16V", &CP, &["+5V", "GND"]),
    ("100n", &C, &["+5V", "GND"]),
    ("LM1117MP-3.3", &LM1117, &["GND", "+3V3", "+5V"]),
    ("10uF", &C, &["+5V", "GND"]),
    ("22uF/10V tantalum", &CP, &["+3V3", "GND"]),
    ("LM317T", &LM317, &["Net-(U3-ADJ)", "+9V", "VRAW"]),
    ("240", &R, &["+9V", "Net-(U3-ADJ)"]),
    ("1k5", &R, &["Net-(U3-ADJ)", "GND"]),
    ("10uF/25V", &CP, &["Net-(U3-ADJ)", "GND"]),
    ("100n", &C, &["VRAW", "GND"]),
    ("1uF", &C, &["+9V", "GND"]),
    ("LP5907MFX-3.3", &LP5907, &["+5V", "GND", "Net-(U4-EN)", "", "+3V3A"]),
    ("100k", &R, &["+5V", "Net-(U4-EN)"]),
    ("1uF", &C, &["+5V", "GND"]),
    ("1uF", &C, &["+3V3A", "GND"]),
    ("TL431", &TL431, &["+2V5", "GND", "+2V5"]),
    ("1k", &R, &["+5V", "+2V5"]),
    ("10n", &C, &["+2V5", "GND"]),
];

/// A channel of a sensor, drawn twice alike: the names of its nets are made from references.
const CHANNEL: &[Placed] = &[
    ("AP2112K-1.8", &AP2112, &["+5V", "GND", "+5V", "", "Net-(U#-VOUT)"]),
    ("1uF", &C, &["+5V", "GND"]),
    ("1uF", &C, &["Net-(U#-VOUT)", "GND"]),
    ("100n", &C, &["Net-(U#-VOUT)", "GND"]),
    ("10k", &R, &["Net-(U#-VOUT)", "Net-(J#-Pin_1)"]),
    ("10k", &R, &["Net-(J#-Pin_1)", "GND"]),
    ("Sensor", &CONNECTOR, &["Net-(J#-Pin_1)", "GND"]),
];

const LOGIC_PARTS: &[Placed] = &[
    ("MCU-8", &LOGIC, &["+3V3", "GND", "/TX", "/RX", "Net-(U#-A2)", "Net-(U#-A3)"]),
    ("100n", &C, &["+3V3", "GND"]),
    ("100n", &C, &["+3V3", "GND"]),
    ("100n", &C, &["+3V3", "GND"]),
    ("100n", &C, &["+3V3", "GND"]),
    ("330", &R, &["Net-(U#-A2)", "Net-(D20-A)"]),
    ("red", &LED, &["GND", "Net-(D20-A)"]),
    ("330", &R, &["Net-(U#-A3)", "Net-(D21-A)"]),
    ("red", &LED, &["GND", "Net-(D21-A)"]),
    ("Serial", &CONNECTOR, &["/TX", "/RX"]),
    ("4k7", &R, &["+3V3", "/TX"]),
    ("4k7", &R, &["+3V3", "/RX"]),
];

/// The board, numbered in order.
pub(crate) fn board() -> Exported {
    let mut board = Exported { components: Vec::new(), parts: Vec::new(), nets: Vec::new() };
    add(&mut board, "/Power/", "", POWER);
    for channel in ["91", "92", "93"] {
        add(&mut board, &format!("/Channel {channel}/"), channel, CHANNEL);
    }
    add(&mut board, "/Logic/", "95", LOGIC_PARTS);
    name_made_nets(&mut board);
    board
}

/// Names the nets that have none after a pin on them, as an editor does.
fn name_made_nets(board: &mut Exported) {
    for net in board.nets.iter_mut().filter(|net| net.name.starts_with("Net-(")) {
        let pin = net.nodes.iter().max_by_key(|node| node.function.len()).unwrap();
        let function = if pin.function.is_empty() { format!("Pad{}", pin.pin) } else { pin.function.clone() };
        net.name = format!("Net-({}-{function})", pin.reference);
    }
}

/// Places further parts; in names of nets, `#` stands for `number`.
pub(crate) fn add(board: &mut Exported, sheet: &str, number: &str, parts: &[Placed]) {
    for (value, symbol, nets) in parts {
        let Symbol(letter, library, part, description, pins) = symbol;
        let alike = board.components.iter().filter(|one| one.reference.starts_with(letter)).count();
        let reference = format!("{letter}{}", alike + 1);
        let id = format!("{:08x}-0000-4000-8000-00000000b0a7", board.components.len() + 0x0005_eaf0);
        board.components.push(Component {
            reference: reference.clone(),
            value: (*value).to_owned(),
            library: (*library).to_owned(),
            part: (*part).to_owned(),
            description: (*description).to_owned(),
            sheet: sheet.to_owned(),
            ids: vec![id],
            ..Component::default()
        });
        library_part(board, symbol);
        for ((name, kind, pin), net) in pins.iter().zip(*nets).filter(|(_, net)| !net.is_empty()) {
            let name = if *name == "~" { "" } else { *name };
            connect(board, &net.replace('#', number), &reference, (name, *kind, *pin));
        }
    }
}

fn library_part(board: &mut Exported, Symbol(_, library, part, description, pins): &Symbol) {
    if board.parts.iter().any(|known| known.part == *part) {
        return;
    }
    let pin =
        |(name, kind, number): &Pin| PartPin { number: (*number).into(), name: (*name).into(), kind: (*kind).into() };
    board.parts.push(LibraryPart {
        library: (*library).into(),
        part: (*part).into(),
        description: (*description).into(),
        pins: pins.iter().map(pin).collect(),
        ..LibraryPart::default()
    });
}

fn connect(board: &mut Exported, name: &str, reference: &str, (function, kind, pin): Pin) {
    let node = NetNode {
        reference: reference.to_owned(),
        pin: pin.to_owned(),
        function: function.to_owned(),
        kind: kind.to_owned(),
        ..NetNode::default()
    };
    let code = board.nets.len() + 1;
    match board.nets.iter_mut().find(|net| net.name == name) {
        Some(net) => net.nodes.push(node),
        None => board.nets.push(NetEntry {
            code: code.to_string(),
            name: name.to_owned(),
            nodes: vec![node],
            ..NetEntry::default()
        }),
    }
}

/// A further regulator with its capacitors.
pub(crate) const NEW_REGULATOR: &[Placed] = &[
    ("AP2112K-1.8", &AP2112, &["+3V3", "GND", "+3V3", "", "+1V8"]),
    ("1uF", &C, &["+3V3", "GND"]),
    ("1uF", &C, &["+1V8", "GND"]),
];
