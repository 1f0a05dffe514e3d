//! Operational amplifiers with their inputs and output, one for each unit of a part.

use crate::circuit::{Circuit, DeviceId, DeviceKind, NetId, Pin, PinType};

/// One operational amplifier.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct OpAmpUnit {
    /// Its part.
    pub device: DeviceId,
    /// The net of its input +.
    pub plus: NetId,
    /// The net of its input −.
    pub minus: NetId,
    /// The net of its output.
    pub output: NetId,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Pole {
    Plus,
    Minus,
    Output,
}

fn pole(pin: &Pin) -> Option<Pole> {
    let upper = pin.name.trim().to_ascii_uppercase();
    match upper.trim_matches(|sign: char| sign.is_ascii_digit() || sign == '_') {
        "+" | "IN+" | "+IN" | "INP" | "VIN+" | "NON_INVERTING" => Some(Pole::Plus),
        "-" | "IN-" | "-IN" | "INN" | "VIN-" | "INVERTING" => Some(Pole::Minus),
        "OUT" | "VOUT" | "OUTPUT" | "VO" => Some(Pole::Output),
        "" if pin.kind == PinType::Output => Some(Pole::Output),
        _ => None,
    }
}

/// The operational amplifiers of a part: three pins that follow each other by number make one. Comparators switch and
/// are none.
#[must_use]
pub fn op_amps(circuit: &Circuit, id: DeviceId) -> Vec<OpAmpUnit> {
    let device = circuit.device(id);
    let text = format!("{} {} {}", device.part, device.description, device.keywords).to_ascii_lowercase();
    if device.kind != DeviceKind::OpAmp || text.contains("comparator") && !text.contains("operational") {
        return Vec::new();
    }
    let mut pins: Vec<(u32, Pole, Option<NetId>)> = device
        .pins
        .iter()
        .filter_map(|pin| Some((pin.number.parse().unwrap_or(u32::MAX), pole(pin)?, pin.net)))
        .collect();
    pins.sort_by_key(|(number, ..)| *number);
    let unit = |three: &[(u32, Pole, Option<NetId>)]| {
        let on = |wanted: Pole| three.iter().find(|pin| pin.1 == wanted).and_then(|pin| pin.2);
        Some(OpAmpUnit { device: id, plus: on(Pole::Plus)?, minus: on(Pole::Minus)?, output: on(Pole::Output)? })
    };
    pins.chunks_exact(3).filter_map(unit).collect()
}
