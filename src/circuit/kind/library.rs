//! Kinds by the library that a symbol comes from.

use super::super::model::DeviceKind;

/// Libraries whose symbols are all of one kind; the beginning of the name, lower case. The first match counts.
const WHOLE: &[(&str, DeviceKind)] = &[
    ("diode_bridge", DeviceKind::Bridge),
    ("transformer", DeviceKind::Transformer),
    ("oscillator", DeviceKind::Crystal),
    ("mechanical", DeviceKind::Mechanical),
    ("graphic", DeviceKind::Mechanical),
    ("relay_solidstate", DeviceKind::Integrated),
    ("relay", DeviceKind::Switch),
    ("triac_thyristor", DeviceKind::OtherSemiconductor),
    ("transistor_igbt", DeviceKind::OtherSemiconductor),
    ("transistor_array", DeviceKind::Integrated),
    ("transistor_power_module", DeviceKind::Integrated),
    ("comparator", DeviceKind::OpAmp),
    ("regulator_", DeviceKind::Integrated),
    ("reference_", DeviceKind::Integrated),
    ("converter_", DeviceKind::Integrated),
    ("power_", DeviceKind::Integrated),
    ("battery_management", DeviceKind::Integrated),
    ("amplifier_audio", DeviceKind::Integrated),
    ("amplifier_buffer", DeviceKind::Integrated),
    ("amplifier_current", DeviceKind::Integrated),
    ("amplifier_difference", DeviceKind::Integrated),
    ("amplifier_instrumentation", DeviceKind::Integrated),
    ("amplifier_video", DeviceKind::Integrated),
    ("analog", DeviceKind::Integrated),
    ("potentiometer_digital", DeviceKind::Integrated),
    ("mcu_", DeviceKind::Integrated),
    ("cpu", DeviceKind::Integrated),
    ("cpld", DeviceKind::Integrated),
    ("dsp", DeviceKind::Integrated),
    ("fpga", DeviceKind::Integrated),
    ("memory_", DeviceKind::Integrated),
    ("interface", DeviceKind::Integrated),
    ("driver_", DeviceKind::Integrated),
    ("logic_", DeviceKind::Integrated),
    ("4xxx", DeviceKind::Integrated),
    ("74x", DeviceKind::Integrated),
    ("timer", DeviceKind::Integrated),
    ("rf_", DeviceKind::Integrated),
    ("sensor", DeviceKind::Integrated),
    ("regul", DeviceKind::Integrated),
    ("voltage_regulators", DeviceKind::Integrated),
];

pub(super) fn kind(library: &str, symbol: &str, text: &str) -> Option<DeviceKind> {
    if library.starts_with("connector") || library == "conn" {
        return Some(connector(symbol));
    }
    match library {
        "diode" | "diodes" => Some(super::text::diode(text).unwrap_or(DeviceKind::Diode)),
        "led" | "leds" => Some(DeviceKind::Led),
        "isolator" | "opto" => text.contains("opto").then_some(DeviceKind::Optocoupler).or_else(|| isolator(text)),
        "transistor_bjt" => Some(bipolar(symbol, text)),
        "transistor_fet" => Some(field_effect(text)),
        "amplifier_operational" => Some(DeviceKind::OpAmp),
        "switch" | "switches" => Some(DeviceKind::Switch),
        _ => WHOLE.iter().find(|(start, _)| library.starts_with(start)).map(|(_, kind)| *kind),
    }
}

fn connector(symbol: &str) -> DeviceKind {
    if symbol.starts_with("TESTPOINT") { DeviceKind::Mechanical } else { DeviceKind::Connector }
}

fn isolator(text: &str) -> Option<DeviceKind> {
    let light = ["photocoupler", "vactrol", "phototransistor", "ctr"].iter().any(|word| text.contains(word));
    Some(if light { DeviceKind::Optocoupler } else { DeviceKind::Integrated })
}

fn bipolar(symbol: &str, text: &str) -> DeviceKind {
    let unijunction = text.contains("unijunction") || symbol.starts_with("2N2646") || symbol.starts_with("2N2647");
    if unijunction { DeviceKind::OtherSemiconductor } else { DeviceKind::Bipolar }
}

fn field_effect(text: &str) -> DeviceKind {
    let junction = text.contains("jfet") || text.contains("junction") || text.contains("j-fet");
    if junction { DeviceKind::Jfet } else { DeviceKind::Mosfet }
}
