//! A made-up board of any size: power blocks of one regulator, its capacitors and a load each.

use std::fmt::Write;

/// How the board is written.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Style {
    /// Bare atoms, no pin data on nodes.
    D,
    /// Quoted atoms, pin data on nodes, properties.
    E,
}

/// Components in one block.
const BLOCK: usize = 5;

/// Prefix, library, part, value, footprint, and the net kind of each pin.
type Part = (&'static str, &'static str, &'static str, &'static str, &'static str, &'static [(&'static str, Net)]);

/// The parts of one block.
const PARTS: [Part; BLOCK] = [
    (
        "U",
        "Power",
        "LM1117MP-3.3",
        "LM1117MP-3.3",
        "Bench:SOT-223",
        &[("1", Net::Ground), ("2", Net::Out), ("3", Net::In)],
    ),
    ("C", "Passive", "C", "10uF 16V X7R", "Bench:C_0805", &[("1", Net::In), ("2", Net::Ground)]),
    ("C", "Passive", "CP", "22uF/10V", "Bench:CP_B", &[("1", Net::Out), ("2", Net::Ground)]),
    ("R", "Passive", "R", "330", "Bench:R_0603", &[("1", Net::Out), ("2", Net::Ground)]),
    ("D", "Passive", "LOAD", "beacon lamp", "Bench:LAMP", &[("1", Net::Out), ("2", Net::Ground)]),
];

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Net {
    In,
    Out,
    Ground,
}

/// A board of about `components` components (whole blocks of five).
pub fn board(components: usize, style: Style) -> String {
    let blocks = components.div_ceil(BLOCK);
    let version = if style == Style::E { "\"E\"" } else { "D" };
    let mut text = format!(
        "(export (version {version})\n  (design\n    (source \"lantern field.sch\")\n    (tool \"Eeschema\"))\n  (components"
    );
    for block in 0..blocks {
        for place in 0..BLOCK {
            component(&mut text, style, block, place);
        }
    }
    text += ")\n  (libparts";
    library(&mut text, style);
    text += ")\n  (nets";
    nets(&mut text, style, blocks);
    text += "))\n";
    text
}

/// A value as the style writes it.
fn value(style: Style, text: &str) -> String {
    if style == Style::E || text.contains([' ', '(', ')']) { format!("\"{text}\"") } else { text.to_owned() }
}

fn reference(block: usize, place: usize) -> String {
    // Numbers run over the whole board, so that capacitors of one block do not collide.
    format!("{}{}", PARTS[place].0, block * BLOCK + place + 1)
}

fn component(text: &mut String, style: Style, block: usize, place: usize) {
    let (_, library, part, value_text, footprint, _) = PARTS[place];
    let write = |name: &str| value(style, name);
    let sheet = format!("/field {}/", block / 16);
    let _ = write!(
        text,
        "\n    (comp (ref {})\n      (value {})\n      (footprint {})\n      (datasheet {})",
        write(&reference(block, place)),
        write(value_text),
        write(footprint),
        write("~"),
    );
    let _ = write!(text, "\n      (fields\n        (field (name {}) {}))", write("MPN"), write("LANTERN-0805"));
    let _ = write!(
        text,
        "\n      (libsource (lib {}) (part {}) (description \"part of a lantern\"))",
        write(library),
        write(part)
    );
    if style == Style::E {
        for (name, property) in
            [("MPN", "LANTERN-0805"), ("Sheetname", sheet.as_str()), ("Sheetfile", "field.kicad_sch")]
        {
            let _ = write!(text, "\n      (property (name \"{name}\") (value \"{property}\"))");
        }
    }
    let id = format!("{:08X}", block * BLOCK + place);
    let stamp = if style == Style::E { "tstamps" } else { "tstamp" };
    let _ = write!(
        text,
        "\n      (sheetpath (names {}) (tstamps {}))\n      ({stamp} {}))",
        write(&sheet),
        write("/5F00/"),
        write(&id)
    );
}

/// Name and electrical type of a pin of the part at `place`.
fn pin(place: usize, net: Net, style: Style) -> (&'static str, &'static str) {
    let passive = ("~", "passive");
    match (place, net) {
        (0, Net::In) => ("VI", if style == Style::E { "power_in" } else { "input" }),
        (0, Net::Out) => ("VO", "power_out"),
        (0, Net::Ground) => ("GND", "power_in"),
        _ => passive,
    }
}

fn library(text: &mut String, style: Style) {
    let write = |name: &str| value(style, name);
    for (place, (prefix, library, part, _, _, pins)) in PARTS.iter().enumerate() {
        let _ = write!(
            text,
            "\n    (libpart (lib {}) (part {})\n      (description \"part of a lantern\")\n      (fields\n        (field (name {}) {}))\n      (pins",
            write(library),
            write(part),
            write("Reference"),
            write(prefix),
        );
        for (number, net) in *pins {
            let (name, kind) = pin(place, *net, style);
            let _ =
                write!(text, "\n        (pin (num {}) (name {}) (type {}))", write(number), write(name), write(kind));
        }
        *text += "))";
    }
}

fn nets(text: &mut String, style: Style, blocks: usize) {
    net(text, style, 1, "+5V", (0..blocks).flat_map(|block| pins_on(block, Net::In)));
    net(text, style, 2, "GND", (0..blocks).flat_map(|block| pins_on(block, Net::Ground)));
    for block in 0..blocks {
        net(text, style, block + 3, &format!("/field {}/+3V3_{block}", block / 16), pins_on(block, Net::Out));
    }
}

/// The pins of a block on a kind of net: place in the block, number.
fn pins_on(block: usize, wanted: Net) -> impl Iterator<Item = (usize, usize, &'static str)> {
    PARTS.iter().enumerate().flat_map(move |(place, part)| {
        part.5.iter().filter(move |(_, net)| *net == wanted).map(move |(number, _)| (block, place, *number))
    })
}

fn net(
    text: &mut String,
    style: Style,
    code: usize,
    name: &str,
    nodes: impl Iterator<Item = (usize, usize, &'static str)>,
) {
    let write = |name: &str| value(style, name);
    let _ = write!(text, "\n    (net (code {}) (name {})", write(&code.to_string()), write(name));
    for (block, place, number) in nodes {
        let _ = write!(text, "\n      (node (ref {}) (pin {})", write(&reference(block, place)), write(number));
        if style == Style::E {
            let kind = PARTS[place].5.iter().find(|(own, _)| *own == number).map_or(Net::Out, |(_, net)| *net);
            let (function, kind) = pin(place, kind, style);
            if function != "~" {
                let _ = write!(text, " (pinfunction \"{function}\")");
            }
            let _ = write!(text, " (pintype \"{kind}\")");
        }
        *text += ")";
    }
    *text += ")";
}
