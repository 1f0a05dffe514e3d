//! Outputs that are programmed by pins.

use super::Facts;
use crate::quantity::{Dimension, Quantity};
use crate::recognize::{Divider, Regulator, programming_pins};

impl Facts<'_> {
    /// The output of a part without resistors that set it: the reference, and what the programming pins on ground add to
    /// it, with the reference's tolerance (TI TPS7A47 data sheet, 7.5.2). `None` where the part has no such pins.
    pub(super) fn programmed_output(&self, regulator: &Regulator) -> Option<Quantity> {
        let pins = programming_pins(self.part_of(regulator));
        let set = |divider: &Divider| !divider.upper.is_empty() || !divider.lower.is_empty();
        if pins.is_empty() || regulator.divider.as_ref().is_some_and(set) {
            return None;
        }
        let reference = self.reference(regulator)?;
        let nominal = reference.nominal().filter(|volts| *volts > 0.0)?;
        let circuit = self.circuit();
        let grounded = |pin: usize| circuit.net_of(regulator.device, pin).is_some_and(|net| circuit.net(net).ground);
        let added: f64 = pins.iter().filter(|(pin, _)| grounded(*pin)).map(|(_, volts)| volts).sum();
        Some(reference.times(&Quantity::constant(Dimension::ONE, 1.0 + added / nominal)))
    }
}
