//! Devices from the models that users write.

use std::sync::Arc;

use crate::board::{DeviceModel, ModelKind};
use crate::quantity::Range;

use super::circuit::Device;
use super::models::{Bipolar, Diode, Mosfet, OpAmp, Polarity};

/// The device that a model describes, each parameter's range brought to one value; parameters that are not given are
/// SPICE's defaults, those of an op-amp [`OpAmp::default`].
///
/// The order of its nodes is that of the device: [`Bipolar`] collector, base, emitter; [`Mosfet`] drain, gate, source;
/// [`Diode`] anode, cathode; [`OpAmp`] input +, input −, upper rail, lower rail, output.
pub fn from_model(model: &DeviceModel, mut value: impl FnMut(&'static str, Range) -> f64) -> Arc<dyn Device> {
    match model.kind() {
        ModelKind::Npn => Arc::new(bipolar(model, Polarity::N, &mut value)),
        ModelKind::Pnp => Arc::new(bipolar(model, Polarity::P, &mut value)),
        ModelKind::Nmos => Arc::new(mosfet(model, Polarity::N, &mut value)),
        ModelKind::Pmos => Arc::new(mosfet(model, Polarity::P, &mut value)),
        ModelKind::Diode | ModelKind::Zener | ModelKind::Shunt => Arc::new(diode(model, &mut value)),
        ModelKind::OpAmp => Arc::new(op_amp(model, &mut value)),
    }
}

type Value<'a> = dyn FnMut(&'static str, Range) -> f64 + 'a;

/// Sets each parameter that the model gives.
fn set(model: &DeviceModel, value: &mut Value<'_>, places: &mut [(&'static str, &mut f64)]) {
    for (name, place) in places {
        if let Some(range) = model.get(name) {
            **place = value(name, range);
        }
    }
}

fn bipolar(model: &DeviceModel, polarity: Polarity, value: &mut Value<'_>) -> Bipolar {
    let mut device = Bipolar::new(polarity);
    let places = &mut [
        ("IS", &mut device.saturation_current),
        ("BF", &mut device.forward_gain),
        ("BR", &mut device.reverse_gain),
        ("VAF", &mut device.early_voltage),
        ("IKF", &mut device.knee_current),
        ("ISE", &mut device.leakage_current),
        ("NE", &mut device.leakage_emission),
        ("RB", &mut device.base_resistance),
        ("RC", &mut device.collector_resistance),
        ("RE", &mut device.emitter_resistance),
        ("CJE", &mut device.emitter_capacitance),
        ("CJC", &mut device.collector_capacitance),
        ("TF", &mut device.forward_transit),
        ("TR", &mut device.reverse_transit),
    ];
    set(model, value, places);
    device
}

fn mosfet(model: &DeviceModel, polarity: Polarity, value: &mut Value<'_>) -> Mosfet {
    let mut device = Mosfet::new(polarity);
    let places = &mut [
        ("VTO", &mut device.threshold),
        ("KP", &mut device.transconductance),
        ("LAMBDA", &mut device.modulation),
        ("RD", &mut device.drain_resistance),
        ("RS", &mut device.source_resistance),
        ("IS", &mut device.saturation_current),
        ("CGS", &mut device.gate_source),
        ("CGD", &mut device.gate_drain),
        ("CDS", &mut device.drain_source),
    ];
    set(model, value, places);
    device
}

fn diode(model: &DeviceModel, value: &mut Value<'_>) -> Diode {
    let mut device = Diode::default();
    let places = &mut [
        ("IS", &mut device.saturation_current),
        ("N", &mut device.emission),
        ("RS", &mut device.series_resistance),
        ("BV", &mut device.breakdown_voltage),
        ("IBV", &mut device.breakdown_current),
        ("NBV", &mut device.breakdown_emission),
        ("CJO", &mut device.capacitance),
        ("TT", &mut device.transit_time),
    ];
    set(model, value, places);
    device
}

fn op_amp(model: &DeviceModel, value: &mut Value<'_>) -> OpAmp {
    let mut device = OpAmp::default();
    let places = &mut [
        ("A0", &mut device.gain),
        ("GBW", &mut device.bandwidth),
        ("SR", &mut device.slew_rate),
        ("VOS", &mut device.offset),
        ("TOP", &mut device.top),
        ("BOTTOM", &mut device.bottom),
        ("RO", &mut device.output_resistance),
    ];
    set(model, value, places);
    device
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_parameter_of_every_kind_reaches_the_device() {
        for (kind, name) in ModelKind::ALL {
            for (parameter, _) in kind.parameters() {
                let plain = from_model(&DeviceModel::new(*kind), |_, range| range.nominal());
                let text = format!("{name} {parameter}=0.0321");
                let model = DeviceModel::read(&text).unwrap();
                let given = from_model(&model, |_, range| range.nominal());
                assert_ne!(format!("{plain:?}"), format!("{given:?}"), "{text} changes nothing");
                assert!(given.check().is_ok(), "{text}");
            }
        }
    }

    #[test]
    fn a_range_is_brought_to_the_value_that_is_asked_for() {
        let model = DeviceModel::read("pmos VTO=-2.4..-1.2 KP=2").unwrap();
        let low = from_model(&model, |_, range| range.low());
        assert!(format!("{low:?}").contains("threshold: -2.4"), "{low:?}");
        let high = from_model(&model, |_, range| range.high());
        assert!(format!("{high:?}").contains("threshold: -1.2"), "{high:?}");
    }
}
