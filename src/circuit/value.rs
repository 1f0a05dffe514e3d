//! What the value text of a resistor, capacitor or inductor says.

use crate::quantity::{ComponentKind, read_component};

use super::model::{ComponentValue, Device, DeviceKind, Reading};

pub(super) fn component_value(device: &Device) -> Option<ComponentValue> {
    let kind = match device.kind {
        DeviceKind::Capacitor if device.polarized => ComponentKind::PolarizedCapacitor,
        DeviceKind::Capacitor => ComponentKind::Capacitor,
        DeviceKind::Inductor => ComponentKind::Inductor,
        kind if kind.has_amount() => ComponentKind::Resistor,
        _ => return None,
    };
    // A part that was never given a value has its symbol's name or its own reference there; `R10` would be 0.1 Ω.
    let value = device.value.trim();
    if value == device.reference || value == device.symbol() {
        return None;
    }
    let read = read_component(value, kind)?;
    Some(ComponentValue {
        amount: read.amount,
        reading: if read.repaired { Reading::Repaired } else { Reading::Plain },
        tolerance: read.tolerance,
        rating: read.rating,
        technology: read.technology,
    })
}
