//! What series elements of a supply line take.

use super::current::Drawn;
use super::element::Element;
use crate::circuit::{DeviceId, NetId};
use crate::facts::Facts;
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Slope, Table};

/// Series resistance of ferrites, fuses and small inductors in ohms: low, nominal, high (common practice).
const BEAD: (f64, f64, f64) = (0.0, 0.05, 0.5);
/// No bead, fuse or inductor of a supply line has more ohms.
const BEAD_LIMIT: f64 = 20.0;
/// What an integrated switch drops in volts: low, nominal, high (common practice: tens of milliohms, half an ampere).
const INTEGRATED: (f64, f64, f64) = (0.0, 0.05, 0.25);
/// What a reverse-polarity transistor drops in volts: low, nominal, high; at most its body diode.
const TRANSISTOR: (f64, f64, f64) = (0.0, 0.03, 0.2);
/// The same where the gate hangs on another supply: between the two neither is on and the body diode carries the load.
const SHARING: (f64, f64, f64) = (0.0, 0.03, 1.1);
/// No diode of a supply line drops more than this many volts.
const DIODE_LIMIT: f64 = 2.0;
/// Currents below this many amperes change a diode's drop no more.
const LEAST_CURRENT: f64 = 1e-3;

/// The usual forward drop of a kind of diode (common practice).
#[derive(Debug, Clone, Copy)]
pub(super) struct Forward {
    /// Volts at an ampere.
    at_one_ampere: f64,
    /// Volts more for each ten times the current.
    per_decade: f64,
    /// By which factor a part may differ: low, high.
    spread: (f64, f64),
}

const SCHOTTKY: Forward = Forward { at_one_ampere: 0.45, per_decade: 0.07, spread: (0.5, 1.4) };
pub(super) const SILICON: Forward = Forward { at_one_ampere: 0.85, per_decade: 0.09, spread: (0.75, 1.3) };

impl Forward {
    /// The drop at a current of so many amperes.
    fn at(self, current: f64) -> f64 {
        self.at_one_ampere + self.per_decade * current.max(LEAST_CURRENT).log10()
    }
}

impl Facts<'_> {
    /// What an element takes on the way to a net; `None` for a link.
    pub(super) fn series_drop(
        &self,
        device: DeviceId,
        element: Element,
        to: NetId,
        drawn: Drawn,
    ) -> Option<Quantity> {
        Some(match element {
            Element::Link => return None,
            Element::Resistor => self.resistance(device).times(&self.drawn(to, drawn)),
            Element::Bead => self.bead(device).times(&self.drawn(to, drawn)),
            Element::Diode { schottky } => {
                self.forward_drop(device, if schottky { SCHOTTKY } else { SILICON }, &self.drawn(to, drawn))
            }
            Element::Transistor => self.usual_drop(device, TRANSISTOR),
            Element::Sharing => self.usual_drop(device, SHARING),
            Element::IntegratedSwitch => self.usual_drop(device, INTEGRATED),
        })
    }

    fn bead(&self, device: DeviceId) -> Quantity {
        let reference = &self.circuit().device(device).reference;
        let what = format!("resistance of {reference}");
        if let Some(declared) = self.board().part(reference).and_then(|part| part.resistance.as_ref()) {
            return declared.quantity(Dimension::RESISTANCE, what);
        }
        let settle = Settle::new(Table::Part, reference, "resistance", "20 .. 50 mΩ");
        let evidence = Evidence::new(Grade::Assumed, what, "usual for its kind").settled_by(settle);
        let (low, nominal, high) = BEAD;
        let range = Range::clamped(low, nominal, high);
        Quantity::given(Dimension::RESISTANCE, range, Pair::new(0.0, BEAD_LIMIT), evidence)
    }

    fn declared_drop(&self, device: DeviceId) -> Option<Quantity> {
        let reference = &self.circuit().device(device).reference;
        let declared = self.board().part(reference)?.forward_drop.as_ref()?;
        Some(declared.quantity(Dimension::VOLTAGE, format!("forward drop of {reference}")))
    }

    fn drop_evidence(&self, device: DeviceId) -> Evidence {
        let reference = &self.circuit().device(device).reference;
        let settle = Settle::new(Table::Part, reference, "forward_drop", "0.3 .. 0.5 V");
        Evidence::new(Grade::Assumed, format!("forward drop of {reference}"), "usual for its kind").settled_by(settle)
    }

    /// The drop of a diode at a current: declared, else a guess that follows the current.
    pub(super) fn forward_drop(&self, device: DeviceId, usual: Forward, current: &Quantity) -> Quantity {
        if let Some(declared) = self.declared_drop(device) {
            return declared;
        }
        // What a regulator behind may draw at most is no current of this diode's; the limits hold at any.
        let (least, most) = usual.spread;
        let limits = Pair::new(0.0, DIODE_LIMIT / usual.at(LEAST_CURRENT));
        let factor =
            Quantity::given(Dimension::ONE, Range::clamped(least, 1.0, most), limits, self.drop_evidence(device));
        let inputs = [(&factor, Slope::Rising), (current, Slope::Rising)];
        Quantity::monotone(Dimension::VOLTAGE, &inputs, |v| match v {
            [factor, current] if current.is_finite() => (factor * usual.at(*current)).min(DIODE_LIMIT),
            [factor, _] if *factor <= 0.0 => 0.0,
            _ => DIODE_LIMIT,
        })
    }

    fn usual_drop(&self, device: DeviceId, usual: (f64, f64, f64)) -> Quantity {
        if let Some(declared) = self.declared_drop(device) {
            return declared;
        }
        let (low, nominal, high) = usual;
        let limits = Pair::new(0.0, DIODE_LIMIT);
        Quantity::given(Dimension::VOLTAGE, Range::clamped(low, nominal, high), limits, self.drop_evidence(device))
    }
}
