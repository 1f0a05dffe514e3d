//! Small boards written out in a few lines, for tests that ask one figure.

use std::fmt::Write;

/// A part: reference, value, library, symbol, description, and its pins as number, name, type and net.
pub(crate) struct Part {
    pub(crate) reference: &'static str,
    pub(crate) value: String,
    pub(crate) symbol: (&'static str, &'static str, &'static str),
    pub(crate) pins: Vec<(&'static str, &'static str, &'static str, &'static str)>,
}

impl Part {
    pub(crate) fn two_ended(
        reference: &'static str,
        value: impl Into<String>,
        nets: (&'static str, &'static str),
    ) -> Self {
        let symbol = match reference.chars().next() {
            Some('R') => ("Device", "R", "Resistor"),
            Some('L') => ("Device", "L", "Inductor"),
            _ => ("Device", "C", "Unpolarized capacitor"),
        };
        let pins = vec![("1", "~", "passive", nets.0), ("2", "~", "passive", nets.1)];
        Self { reference, value: value.into(), symbol, pins }
    }
}

/// The netlist of a board, format E.
pub(crate) fn netlist(parts: &[Part]) -> String {
    let mut text =
        String::from("(export (version \"E\") (design (source \"small.kicad_sch\") (tool \"test\"))\n(components\n");
    for part in parts {
        let (library, symbol, description) = part.symbol;
        let _ = writeln!(
            text,
            "(comp (ref \"{}\") (value \"{}\") (libsource (lib \"{library}\") (part \"{symbol}\") (description \"{description}\")))",
            part.reference, part.value
        );
    }
    text.push_str(")\n(libparts\n");
    let mut known = Vec::new();
    for part in parts {
        let (library, symbol, description) = part.symbol;
        if known.contains(&part.symbol) {
            continue;
        }
        known.push(part.symbol);
        let _ =
            write!(text, "(libpart (lib \"{library}\") (part \"{symbol}\") (description \"{description}\") (pins");
        for (number, name, kind, _) in &part.pins {
            let _ = write!(text, " (pin (num \"{number}\") (name \"{name}\") (type \"{kind}\"))");
        }
        text.push_str("))\n");
    }
    text.push_str(")\n(nets\n");
    let mut nets: Vec<&str> = parts.iter().flat_map(|part| part.pins.iter().map(|pin| pin.3)).collect();
    nets.sort_unstable();
    nets.dedup();
    for (code, net) in nets.iter().enumerate() {
        let _ = write!(text, "(net (code \"{}\") (name \"{net}\")", code + 1);
        for part in parts {
            for (number, name, kind, _) in part.pins.iter().filter(|pin| pin.3 == *net) {
                let _ = write!(
                    text,
                    " (node (ref \"{}\") (pin \"{number}\") (pinfunction \"{name}\") (pintype \"{kind}\"))",
                    part.reference
                );
            }
        }
        text.push_str(")\n");
    }
    text.push_str("))\n");
    text
}
