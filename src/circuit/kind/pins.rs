//! Kinds by the names, types and number of pins, and whether pins allow a kind that something else told.

use super::super::model::{DeviceKind, Pin, PinType};

const DIODE: &[&str] = &["A", "K", "C", "ANODE", "CATHODE", "COMMON", "COM", "NC", "+", "-"];
const BIPOLAR: &[&str] = &["B", "C", "E", "BASE", "COLLECTOR", "EMITTER", "COLL", "EMIT", "SUBSTRAT", "SUBSTRATE"];
const FIELD_EFFECT: &[&str] = &["G", "D", "S", "GATE", "DRAIN", "SOURCE", "DS", "SS", "PS", "B", "TAB", "KS", "SK"];

/// Whether the pins allow a kind; pins that are not known allow all.
pub(super) fn fits(kind: DeviceKind, pins: &[Pin]) -> bool {
    use DeviceKind::{
        Battery, Bipolar, Capacitor, Crystal, Diode, Ferrite, Fuse, Inductor, Jfet, Mosfet, Resistor, Schottky,
        Thermistor, Zener,
    };
    match kind {
        Resistor | Capacitor | Inductor | Ferrite | Fuse | Thermistor | Battery => {
            (pins.len() <= 4 || pins.len() <= 8 && pins.iter().all(|pin| is_bare(&pin.name)))
                && !pins.iter().any(is_of_a_circuit)
        }
        Crystal => pins.len() <= 8,
        Diode | Schottky | Zener => pins.len() <= 16 && !pins.iter().any(is_of_a_circuit),
        Bipolar | Mosfet | Jfet => pins.len() <= 32 && !pins.iter().any(is_supply_of_a_circuit),
        _ => true,
    }
}

/// Whether a pin is one that only an integrated part has.
fn is_of_a_circuit(pin: &Pin) -> bool {
    matches!(pin.kind, PinType::PowerOut | PinType::Output | PinType::TriState) && !is_bare(&pin.name)
        || is_supply_of_a_circuit(pin)
}

fn is_supply_of_a_circuit(pin: &Pin) -> bool {
    const NAMES: &[&str] = &[
        "VIN", "VOUT", "VI", "VO", "IN", "OUT", "INPUT", "OUTPUT", "GND", "VCC", "VDD", "VSS", "VEE", "EN", "ADJ",
        "FB", "REF", "GND/ADJ", "ADJ/GND",
    ];
    NAMES.iter().any(|name| pin.name.eq_ignore_ascii_case(name))
}

fn is_bare(name: &str) -> bool {
    name.is_empty() || name.chars().all(|letter| letter.is_ascii_digit()) || name == "+" || name == "-"
}

/// The kind that the pins tell by themselves.
pub(super) fn kind(pins: &[Pin]) -> Option<DeviceKind> {
    if pins.is_empty() {
        return None;
    }
    let names: Vec<String> = pins.iter().map(|pin| bare(&pin.name)).collect();
    let all = |set: &[&str]| names.iter().all(|name| name.is_empty() || set.contains(&name.as_str()));
    let has = |name: &str| names.iter().any(|own| own == name);
    if (has("B") && has("C") && has("E") && all(BIPOLAR)) || (has("BASE") && all(BIPOLAR)) {
        return Some(DeviceKind::Bipolar);
    }
    if has("G") && has("D") && has("S") && all(FIELD_EFFECT) || (has("GATE") && has("DRAIN") && all(FIELD_EFFECT)) {
        return Some(DeviceKind::Mosfet);
    }
    if has("A") && has("K") && pins.len() <= 4 && all(DIODE) {
        return Some(DeviceKind::Diode);
    }
    let unnamed = names.iter().filter(|name| name.trim_matches('~').is_empty() || *name == "AC").count();
    if has("+") && has("-") && pins.len() == 4 && unnamed == 2 && !pins.iter().any(|pin| pin.kind == PinType::Output)
    {
        return Some(DeviceKind::Bridge);
    }
    if is_amplifier(pins) {
        return Some(DeviceKind::OpAmp);
    }
    if pins.len() >= 3 && pins.iter().any(|pin| is_of_a_circuit(pin) || pin.kind.is_power()) && !is_socket(pins) {
        return Some(DeviceKind::Integrated);
    }
    None
}

/// A pin name without the digits at its end and what stands behind a slash: `B1` and `S1/D2` are a base and a source.
fn bare(name: &str) -> String {
    let name = name.split('/').next().unwrap_or_default();
    name.trim_end_matches(|letter: char| letter.is_ascii_digit()).to_uppercase()
}

/// An operational amplifier or comparator: as many inverting as other inputs, and outputs, all unnamed or so called.
fn is_amplifier(pins: &[Pin]) -> bool {
    let count = |test: &dyn Fn(&str) -> bool| pins.iter().filter(|pin| test(&pin.name.to_uppercase())).count();
    let plus =
        count(&|name| matches!(name.trim_end_matches(|l: char| l.is_ascii_digit()), "+" | "IN+" | "+IN" | "VIN+"));
    let minus =
        count(&|name| matches!(name.trim_end_matches(|l: char| l.is_ascii_digit()), "-" | "IN-" | "-IN" | "VIN-"));
    let power = count(&|name| ["V+", "V-", "VCC", "VEE", "VCC+", "VCC-", "VDD", "VSS"].contains(&name));
    let output = pins.iter().filter(|pin| {
        let name = pin.name.to_uppercase();
        pin.kind == PinType::Output && name.is_empty()
            || ["OUT", "VOUT", "OUTPUT", "VO"].contains(&bare(&name).as_str())
    });
    let outputs = output.count();
    let units = pins.len().saturating_sub(2) / 3;
    plus == minus && plus > 0 && outputs == plus && power >= 2 && plus <= units && pins.len() <= 5 + 3 * plus
}

/// Sockets and headers have supply pins too, but nothing that is driven.
fn is_socket(pins: &[Pin]) -> bool {
    pins.iter().all(|pin| matches!(pin.kind, PinType::Passive | PinType::Bidirectional | PinType::Unspecified))
}
